package integrate

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
)

// A Checkpoint is all that a run needs to go on to the same bits.
type Checkpoint struct {
	Method string
	Slice  int
	Memory []field.Slice
}

func checkpoint(m Method, st Stepper, n int) *Checkpoint {
	c := &Checkpoint{Method: m.Name(), Slice: n}
	for _, s := range st.Memory() {
		c.Memory = append(c.Memory, s.Clone())
	}
	return c
}

// restore writes the checkpoint into a stepper of the same method and problem.
func (c *Checkpoint) restore(st Stepper, m Method) error {
	if c.Method != m.Name() {
		return fmt.Errorf("integrate: checkpoint of %q for a run with %q; want the same method", c.Method, m.Name())
	}
	memory := st.Memory()
	if len(memory) != len(c.Memory) {
		return fmt.Errorf("integrate: checkpoint of %d arrays; %s has %d", len(c.Memory), m.Name(), len(memory))
	}
	for k, s := range c.Memory {
		if !s.SameShape(memory[k]) {
			return fmt.Errorf("integrate: checkpoint of %d components × %d sites; the block has %d × %d", s.Components, s.Sites, memory[k].Components, memory[k].Sites)
		}
		if err := s.Check(); err != nil {
			return fmt.Errorf("integrate: checkpoint: %w", err)
		}
	}
	for k, s := range c.Memory {
		memory[k].CopyFrom(s)
	}
	st.Seek(c.Slice)
	return nil
}
