package actiontest

import (
	"errors"
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Density puts a density on blocks and returns what is wrong with it, or nil.
// On random histories it asks that
//
//   - the gradient be the derivative of the action at every event, and the second
//     variation that of the gradient, as a product and as a symmetric matrix;
//   - the residual be the gradient per hk at interior events, if the density is
//     conservative, and zero where there is no equation; its Jacobian be its
//     derivative;
//   - the march make the residual vanish, its start have the given rate, and its
//     tangent be its derivative (Lorentzian densities);
//   - the energy of every site change by what the energy flux carries, and the
//     energy of the field by the power (Lorentzian densities whose force is
//     known at every time).
//
// Errors name the quantity, the component, the event (x, t) and the block. Run
// [Potential] on its potential first: a wrong derivative there shows in many of
// these.
func Density(d action.Density, s Settings) error {
	s, err := s.fill(1)
	if err != nil {
		return err
	}
	blocks := s.Blocks
	if blocks == nil {
		blocks = smallBlocks()
	}
	var all, refused []error
	for _, b := range blocks {
		a, err := action.New(b, d)
		if err != nil {
			refused = append(refused, fmt.Errorf("actiontest: %s: %w", describe(b), err))
			continue
		}
		all = append(all, checkDiscrete(subjectOf(a), s))
	}
	if s.Blocks != nil || len(refused) == len(blocks) {
		all = append(all, refused...)
	}
	return errors.Join(all...)
}

// smallBlocks returns blocks of four slices with every kind of end, of the
// fewest sites that the widest links fit on and of a few more.
func smallBlocks() []lattice.Block {
	clock := lattice.Axis{From: 0.25, Step: 0.125, Sites: 4}
	var blocks []lattice.Block
	for _, ends := range [][2]lattice.End{
		{lattice.Free, lattice.Free}, {lattice.Held, lattice.Held}, {lattice.Open, lattice.Open},
		{lattice.Even, lattice.Even}, {lattice.Odd, lattice.Odd}, {lattice.Free, lattice.Held},
		{lattice.Held, lattice.Open}, {lattice.Odd, lattice.Even}, {lattice.Open, lattice.Free},
	} {
		for _, sites := range []int{4, 9} {
			line := lattice.Axis{From: -0.5, Step: 0.25, Sites: sites, Left: ends[0], Right: ends[1]}
			blocks = append(blocks, lattice.Block{Time: clock, Space: line})
		}
	}
	for _, sites := range []int{4, 9} {
		ring := lattice.Axis{From: -0.5, Step: 0.25, Sites: sites, Periodic: true, Jump: []float64{1.5}}
		blocks = append(blocks, lattice.Block{Time: clock, Space: ring})
		loop := clock
		loop.Periodic = true
		loop.Jump = []float64{-0.5}
		blocks = append(blocks, lattice.Block{Time: loop, Space: ring})
	}
	return blocks
}

// describe names a block by its size and ends.
func describe(b lattice.Block) string {
	ends := fmt.Sprintf("%v left and %v right end", b.Space.Left, b.Space.Right)
	if b.Space.Periodic {
		ends = "a ring"
	}
	if b.Time.Periodic {
		ends += ", periodic in time"
	}
	return fmt.Sprintf("block of %d slices × %d sites, %s", b.Slices(), b.Sites(), ends)
}

// discrete is what is tested of an action on a block; *action.Discrete has it.
type discrete interface {
	Action
	Density() action.Wave
	BetweenSlices() error
	Interior(n int) bool
	HeldLeft() bool
	HeldRight() bool

	Residual(dst, h *field.History) *field.History
	ResidualJacobian(dst *action.Matrix, h *field.History) *action.Matrix

	Energy(st field.State, t float64) action.Energy
	EnergyDensity(dst []float64, st field.State, t float64) []float64
	EnergyFlux(dst []float64, st field.State, t float64) []float64
	Power(st field.State, t float64) action.Power
}

var _ discrete = (*action.Discrete)(nil)

// marcher is what is tested of a march; *action.March has it.
type marcher interface {
	Step(next, now, before field.Slice, n int)
	Tangent(next, now, before, phi field.Slice, n int)
	Start(next field.Slice, st field.State, n int)
}

var _ marcher = (*action.March)(nil)

// accelerator is what is tested of φ_tt; *action.Accelerator has it.
type accelerator interface {
	At(dst field.Slice, st field.State, t float64)
}

var _ accelerator = (*action.Accelerator)(nil)

// A subject is an action with what belongs to it; march and force are nil where
// it has none.
type subject struct {
	discrete
	march marcher
	force accelerator
}

func subjectOf(a *action.Discrete) subject {
	v := subject{discrete: a}
	if a.Density().Signature == action.Lorentzian {
		v.march = a.March()
	}
	if f, err := a.Accelerator(); err == nil {
		v.force = f
	}
	return v
}

// An examination is a trial of a subject.
type examination struct {
	*trial
	subject
}

func checkDiscrete(v subject, s Settings) error {
	b := v.Block()
	e := &examination{trial: newTrial(v, s), subject: v}
	e.gradient()
	e.secondVariation()
	e.residual()
	e.jacobian()
	if v.march != nil && !b.Time.Periodic {
		e.steps()
		e.start()
		e.tangent()
	}
	if v.force != nil {
		e.siteBalance()
		e.totalBalance()
	}
	return e.found.err()
}
