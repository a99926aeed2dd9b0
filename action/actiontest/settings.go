package actiontest

import (
	"fmt"
	"math"
	"math/rand/v2"

	"github.com/tenter-go/tenter/lattice"
)

// Settings says where to test. The zero value works.
type Settings struct {
	// Low and High bound the values of φ, which are drawn evenly between them.
	// Both zero means −3 to 3 for a potential and −1 to 1 for everything else.
	Low, High float64

	// X and T are the positions and times at which a potential or a Lagrangian is
	// tested. Nil means four positions and two times about the origin.
	X, T []float64

	// Blocks are those a density is put on; one that it refuses is an error.
	// Nil means small blocks with every kind of end, and rings, those left out
	// that the density refuses (a prescribed flux, for instance, refuses rings).
	// Used by Density alone.
	Blocks []lattice.Block

	// Step is the longest step of the difference quotients in φ. 0 means
	// (High − Low)/50.
	Step float64

	// Tolerance is the allowed error of a derivative relative to the largest of
	// its kind. 0 means 1e-7.
	Tolerance float64

	// Seed selects other random values of φ.
	Seed uint64
}

// fill returns s with its defaults, φ between −reach and reach unless given.
func (s Settings) fill(reach float64) (Settings, error) {
	if s.Low == 0 && s.High == 0 {
		s.Low, s.High = -reach, reach
	}
	if !(s.High > s.Low) || math.IsInf(s.High-s.Low, 0) {
		return s, fmt.Errorf("actiontest: φ from %v to %v; want finite numbers, Low below High", s.Low, s.High)
	}
	if s.X == nil {
		s.X = []float64{-1.5, -0.375, 0.625, 2}
	}
	if s.T == nil {
		s.T = []float64{0, 0.75}
	}
	if len(s.X) == 0 || len(s.T) == 0 {
		return s, fmt.Errorf("actiontest: %d positions and %d times; want at least one of each", len(s.X), len(s.T))
	}
	if s.Step == 0 {
		s.Step = (s.High - s.Low) / 50
	}
	if !(s.Step > 0) || math.IsInf(s.Step, 0) {
		return s, fmt.Errorf("actiontest: step %v; want a finite number > 0", s.Step)
	}
	if s.Tolerance == 0 {
		s.Tolerance = 1e-7
	}
	if !(s.Tolerance > 0 && s.Tolerance < 1) {
		return s, fmt.Errorf("actiontest: tolerance %v; want a number between 0 and 1", s.Tolerance)
	}
	return s, nil
}

// random returns the source of the values of φ.
func (s Settings) random() *rand.Rand { return rand.New(rand.NewPCG(s.Seed, 0x7e47e5)) }

// draw fills dst with values between Low and High.
func (s Settings) draw(r *rand.Rand, dst []float64) {
	for i := range dst {
		dst[i] = s.Low + (s.High-s.Low)*r.Float64()
	}
}
