package action

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A ground is what an action stands on: so many components on every event of a
// block.
type ground struct {
	block      lattice.Block
	components int
}

// newGround checks the block and the jumps of its axes.
func newGround(b lattice.Block, components int) (ground, error) {
	b, err := lattice.NewBlock(b.Time, b.Space)
	if err != nil {
		return ground{}, fmt.Errorf("action: %w", err)
	}
	if n := max(len(b.Time.Jump), len(b.Space.Jump)); n > components {
		return ground{}, fmt.Errorf("action: an axis has a jump for %d components, the density has %d", n, components)
	}
	return ground{block: b, components: components}, nil
}

// Block returns the block.
func (g ground) Block() lattice.Block { return g.block }

// Components returns the number of components.
func (g ground) Components() int { return g.components }

// Fits returns an error unless the history is finite and lies on the block of
// the action.
func (g ground) Fits(h *field.History) error {
	if err := h.Check(); err != nil {
		return err
	}
	if !g.carries(h) {
		return fmt.Errorf("%s", g.mismatch(h))
	}
	return nil
}

func (g ground) carries(h *field.History) bool {
	return h.Components == g.components && h.Block.Slices() == g.block.Slices() && h.Block.Sites() == g.block.Sites()
}

func (g ground) mismatch(h *field.History) string {
	return fmt.Sprintf("action: history of %d slices × %d components × %d sites; the block has %d × %d × %d",
		h.Block.Slices(), h.Components, h.Block.Sites(), g.block.Slices(), g.components, g.block.Sites())
}

func (g ground) mustFit(h *field.History) {
	if !g.carries(h) || len(h.Data) != g.block.Slices()*g.components*g.block.Sites() {
		panic(g.mismatch(h))
	}
}

// zeroed returns dst, or a new history of the block if dst is nil, full of
// zeros.
func (g ground) zeroed(dst *field.History) *field.History {
	if dst == nil {
		return field.NewHistory(g.block, g.components)
	}
	g.mustFit(dst)
	clear(dst.Data)
	return dst
}

// cellArea returns hk.
func (g ground) cellArea() float64 { return g.block.Space.Step * g.block.Time.Step }

// index returns the place of component c of event (n, i) in a history.
func (g ground) index(n, c, i int) int { return (n*g.components+c)*g.block.Sites() + i }

// refuseOpen returns an error if an end is open.
func (g ground) refuseOpen() error {
	for k, end := range []lattice.End{g.block.Space.Left, g.block.Space.Right} {
		if end == lattice.Open {
			return fmt.Errorf("action: open %s end; waves that leave have no action, want a free, held, even or odd end", [...]string{"left", "right"}[k])
		}
	}
	return nil
}
