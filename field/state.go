package field

import "fmt"

// A State is Cauchy data: the field and its rate ∂φ/∂t at one time.
type State struct{ Field, Rate Slice }

// NewState returns a state of zeros.
func NewState(components, sites int) State {
	return State{Field: NewSlice(components, sites), Rate: NewSlice(components, sites)}
}

// AtRest returns the state of a field whose rate is zero. It shares the memory
// of s.
func AtRest(s Slice) State {
	return State{Field: s, Rate: NewSlice(s.Components, s.Sites)}
}

// Clone returns a copy with memory of its own.
func (s State) Clone() State { return State{Field: s.Field.Clone(), Rate: s.Rate.Clone()} }

// CopyFrom copies the values of src. It panics unless the shapes are equal.
func (s State) CopyFrom(src State) {
	s.Field.CopyFrom(src.Field)
	s.Rate.CopyFrom(src.Rate)
}

// Check returns an error if field and rate have different shapes or hold a
// value that is not finite.
func (s State) Check() error {
	if !s.Field.SameShape(s.Rate) {
		return fmt.Errorf("field: state with a field of %d components × %d sites and a rate of %d × %d", s.Field.Components, s.Field.Sites, s.Rate.Components, s.Rate.Sites)
	}
	if err := s.Field.Check(); err != nil {
		return err
	}
	if err := s.Rate.Check(); err != nil {
		return fmt.Errorf("rate: %w", err)
	}
	return nil
}
