package lattice

import "fmt"

// An Event is a point of space-time.
type Event struct{ T, X float64 }

// String returns the event as (x, t) = (…, …).
func (e Event) String() string { return fmt.Sprintf("(x, t) = (%g, %g)", e.X, e.T) }

// A Block is a time axis times a space axis: Time.Sites slices of Space.Sites
// sites. Event (n, i) lies at (Time.At(n), Space.At(i)).
type Block struct{ Time, Space Axis }

// NewBlock returns the block of a clock and a line. The clock's ends must be
// Free, or the clock Periodic.
func NewBlock(clock, line Axis) (Block, error) {
	if err := clock.Check(); err != nil {
		return Block{}, fmt.Errorf("time axis: %w", err)
	}
	if err := line.Check(); err != nil {
		return Block{}, fmt.Errorf("space axis: %w", err)
	}
	if clock.Left != Free || clock.Right != Free {
		return Block{}, fmt.Errorf("lattice: time axis with a %v start and a %v finish; want Free or Periodic (hold slices by conditions)", clock.Left, clock.Right)
	}
	const limit = 1 << 62
	if float64(clock.Sites)*float64(line.Sites) > limit {
		return Block{}, fmt.Errorf("lattice: block of %d slices × %d sites has too many events to count", clock.Sites, line.Sites)
	}
	return Block{Time: clock, Space: line}, nil
}

// Slices returns the number of slices.
func (b Block) Slices() int { return b.Time.Sites }

// Sites returns the number of sites of a slice.
func (b Block) Sites() int { return b.Space.Sites }

// At returns the event of slice n and site i.
func (b Block) At(n, i int) Event { return Event{T: b.Time.At(n), X: b.Space.At(i)} }

// Index returns the slice and the site of an event, or an error if the event
// is not on the lattice.
func (b Block) Index(e Event) (n, i int, err error) {
	if n, err = b.Time.Index(e.T); err != nil {
		return 0, 0, fmt.Errorf("event %v: time: %w", e, err)
	}
	if i, err = b.Space.Index(e.X); err != nil {
		return 0, 0, fmt.Errorf("event %v: space: %w", e, err)
	}
	return n, i, nil
}

// Courant returns the Courant number c·k/h of a speed c, with the time step k
// and the spacing h.
func (b Block) Courant(c float64) float64 { return c * b.Time.Step / b.Space.Step }

// Refine returns the block with every link of both axes divided into factor.
func (b Block) Refine(factor int) Block {
	return Block{Time: b.Time.Refine(factor), Space: b.Space.Refine(factor)}
}

// Coarsen returns the block that keeps every factor-th slice and site.
func (b Block) Coarsen(factor int) (Block, error) {
	t, err := b.Time.Coarsen(factor)
	if err != nil {
		return Block{}, fmt.Errorf("time axis: %w", err)
	}
	x, err := b.Space.Coarsen(factor)
	if err != nil {
		return Block{}, fmt.Errorf("space axis: %w", err)
	}
	return Block{Time: t, Space: x}, nil
}

// Window returns the block of the slices n0 ≤ n < n1 and the sites
// i0 ≤ i < i1. Its ends are those of b where it reaches them; where it cuts the
// line or the ring they are free. Cutting a periodic axis drops its jump.
func (b Block) Window(n0, n1, i0, i1 int) (Block, error) {
	t, err := b.Time.part(n0, n1)
	if err != nil {
		return Block{}, fmt.Errorf("slices: %w", err)
	}
	x, err := b.Space.part(i0, i1)
	if err != nil {
		return Block{}, fmt.Errorf("sites: %w", err)
	}
	return NewBlock(t, x)
}

func (a Axis) part(from, to int) (Axis, error) {
	if from < 0 || to > a.Sites || to-from < 2 {
		return Axis{}, fmt.Errorf("lattice: part [%d, %d) of an axis of %d sites; want at least 2 sites of it", from, to, a.Sites)
	}
	if from == 0 && to == a.Sites {
		return a, nil
	}
	p := Axis{From: a.At(from), Step: a.Step, Sites: to - from}
	if !a.Periodic {
		if from == 0 {
			p.Left = a.Left
		}
		if to == a.Sites {
			p.Right = a.Right
		}
	}
	return p, nil
}
