package constraint

import (
	"fmt"

	"github.com/tenter-go/tenter/lattice"
)

// A Set holds the conditions on a block. Make one with [On]. A Set is not safe
// for concurrent use while conditions are being added.
type Set struct {
	*held
	component int // the component that conditions are on; all if negative
}

// held is what a Set and its views share.
type held struct {
	block      lattice.Block
	components int // 0 while no condition has said
	needs      int // at least so many, from views
	rows       map[place]*row
	ties       []tie
	penalties  []*Cost
	linears    []*Linear
	bounds     map[place]*bounds
	region     *lattice.Region // nil: the whole block
	redundant  int
	problems   problems
}

// A place is one component of one slice.
type place struct{ slice, component int }

// A row holds the pins of one place.
type row struct {
	value []float64
	by    []kind // zero where nothing is pinned
}

// kind says which condition pins a value.
type kind uint8

const (
	unpinned kind = iota
	bySlice
	byPart
	byEvent
	byLeft
	byRight
	byRate
	byEnd
	byRegion
)

// String returns the name of the condition as reactions and conflicts give it.
func (k kind) String() string {
	return [...]string{"nothing", "slice", "part", "event", "left end", "right end", "rate", "end of the axis", "region"}[k]
}

// On returns the empty set of conditions on a block. A block that makes no
// sense is reported by Err.
func On(b lattice.Block) *Set {
	s := &Set{held: &held{block: b, rows: make(map[place]*row), bounds: make(map[place]*bounds)}, component: -1}
	if _, err := lattice.NewBlock(b.Time, b.Space); err != nil {
		s.block = lattice.Block{} // without slices every condition is off it
		s.fail(fmt.Errorf("constraint: %w", err))
	}
	return s
}

// Block returns the block of the set.
func (s *Set) Block() lattice.Block { return s.block }

// Component returns a view of the set whose conditions are on component c
// alone. Slices given to it have one component, events one value. Conditions and
// errors go to the set itself.
func (s *Set) Component(c int) *Set {
	if c < 0 {
		s.fail(fmt.Errorf("constraint: component %d; want 0 or above", c))
		c = 0
	}
	if s.component >= 0 {
		s.fail(fmt.Errorf("constraint: component %d of a view of component %d; ask the set itself", c, s.component))
	}
	return &Set{held: s.held, component: c}
}

// Err returns nil if every condition so far made sense. Otherwise it returns
// the first error; if there are more, its text says so and errors.As and
// errors.Is find them all.
func (s *Set) Err() error {
	switch len(s.problems) {
	case 0:
		return nil
	case 1:
		return s.problems[0]
	}
	return s.problems
}

// Events returns the pinned events, those of Slice, Part, Event, Left and Right,
// each once, by slice and then by site. With
// several components an event counts if any of them is pinned.
func (s *Set) Events() []lattice.Event {
	var events []lattice.Event
	marked := make([]bool, s.block.Sites())
	for n := range s.block.Slices() {
		clear(marked)
		for c := range max(s.components, s.needs) {
			if r := s.rows[place{n, c}]; r != nil {
				for i, by := range r.by {
					marked[i] = marked[i] || by != unpinned
				}
			}
		}
		for i, yes := range marked {
			if yes {
				events = append(events, s.block.At(n, i))
			}
		}
	}
	return events
}

// problems is a list of errors that reads as the first of them.
type problems []error

func (p problems) Error() string {
	if len(p) == 1 {
		return p[0].Error()
	}
	return fmt.Sprintf("%v (and %d more)", p[0], len(p)-1)
}

// Unwrap returns the errors of the list.
func (p problems) Unwrap() []error { return p }

func (s *held) fail(err error) { s.problems = append(s.problems, err) }

// from returns the component to which the first of k components of a condition
// belongs, and false after reporting a number that does not fit. what names the
// condition.
func (s *Set) from(k int, what string) (first int, ok bool) {
	if s.component >= 0 {
		if k != 1 {
			s.fail(fmt.Errorf("constraint: %s of %d components on component %d alone; want 1", what, k, s.component))
			return 0, false
		}
		if s.components > 0 && s.component >= s.components {
			s.fail(fmt.Errorf("constraint: %s on component %d; the set has %d, counted from 0", what, s.component, s.components))
			return 0, false
		}
		s.needs = max(s.needs, s.component+1)
		return s.component, true
	}
	switch {
	case k < 1:
		s.fail(fmt.Errorf("constraint: %s of no components; want one for each of the field", what))
		return 0, false
	case s.components > 0 && k != s.components:
		s.fail(fmt.Errorf("constraint: %s of %d components in a set of %d; want equally many", what, k, s.components))
		return 0, false
	case k < s.needs:
		s.fail(fmt.Errorf("constraint: %s of %d components; the set already holds component %d", what, k, s.needs-1))
		return 0, false
	}
	s.components = k
	return 0, true
}

// one returns the component of a condition on one component, and false after
// reporting that the field has several. what names the condition.
func (s *Set) one(what string) (c int, ok bool) {
	if n := max(s.components, s.needs); s.component < 0 && n > 1 {
		s.fail(fmt.Errorf("constraint: %s names no component of a field of %d; ask Component(c) of the set", what, n))
		return 0, false
	}
	return s.from(1, what)
}

// has returns false after reporting that the field has no component c.
func (s *Set) has(c int, what string) bool {
	if c < 0 || s.components > 0 && c >= s.components {
		s.fail(fmt.Errorf("constraint: %s on component %d; the set has %d, counted from 0", what, c, s.components))
		return false
	}
	s.needs = max(s.needs, c+1)
	return true
}
