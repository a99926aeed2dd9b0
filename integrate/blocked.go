package integrate

import (
	"runtime"

	"github.com/tenter-go/tenter/internal/kernel"
)

// blocked makes sub-steps of a whole line in an order that keeps blocks of sites
// in the cache while they go through many of them, on several cores if the line
// is long. The bits are those of one sub-step after the other.
type blocked struct {
	tiles kernel.Tiles
	row   func(step, lo, hi int)
}

// sitesPerWorker is the number of sites from which a further worker pays: below
// it, to wait for each other at every pass costs more than they save.
const sitesPerWorker = 32768

// block returns the order for a problem whose sub-steps touch arrays of so many
// numbers a site, all components counted. row makes one sub-step at some sites.
func (p *Problem) block(arrays int, row func(step, lo, hi int)) blocked {
	line := p.Action.Block().Space
	workers := p.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	workers = min(workers, max(1, line.Sites/sitesPerWorker))
	t := kernel.Tiles{
		Sites: line.Sites, Radius: p.Action.Radius(), Periodic: line.Periodic,
		Width: max(cache/(8*arrays), 64), Depth: blockDepth, Workers: workers,
	}
	return blocked{tiles: t, row: row}
}

const (
	// cache is the part of the second cache, in bytes, that a block fills. Smaller
	// blocks cost more in calls than the nearest cache saves.
	cache = 1 << 18

	blockDepth = 64
)

// advance makes so many sub-steps.
func (b *blocked) advance(steps int) {
	b.tiles.Advance(steps, b.row)
}
