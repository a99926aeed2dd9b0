package integrate

import (
	"encoding/binary"
	"fmt"
	"hash/fnv"
	"math"
	"os"
	"os/exec"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/internal/kernel"
	"github.com/tenter-go/tenter/lattice"
)

// A bitsCase is a short run whose bits must not depend on how it is made.
type bitsCase struct {
	name    string
	action  *action.Discrete
	start   field.State
	methods []Method
}

var bitsDensities = []action.Potential{
	nil, action.Mass(1.3), action.Polynomial{0.1, -0.2, 0.5, 0.1, 0.25}, action.Phi4{}, action.Phi6{},
	action.SineGordon{}, action.DoubleSineGordon{Eta: 0.4}, action.Each{Potential: action.SineGordon{}, N: 2},
}

var bitsEnds = []struct {
	name        string
	left, right lattice.End
	ring        bool
}{
	{name: "free"},
	{name: "held", left: lattice.Held, right: lattice.Held},
	{name: "open", left: lattice.Open, right: lattice.Open},
	{name: "even and odd", left: lattice.Even, right: lattice.Odd},
	{name: "odd and open", left: lattice.Odd, right: lattice.Open},
	{name: "ring", ring: true},
}

// bitsCases returns the runs on lines of the given numbers of sites: every
// density of the catalogue, order of links and kind of ends, with and without
// losses and bias, and with coefficients that vary.
func bitsCases(t *testing.T, sizes func(k int) []int) []bitsCase {
	t.Helper()
	var cases []bitsCase
	for d, v := range bitsDensities {
		for _, links := range []action.Links{action.Nearest, action.Fourth, action.Sixth} {
			for e, ends := range bitsEnds {
				for _, sites := range sizes(len(cases)) {
					if sites <= int(links)/2 {
						continue
					}
					line := lattice.Axis{Step: 0.2, Sites: sites, Left: ends.left, Right: ends.right, Periodic: ends.ring}
					if ends.ring {
						line.Jump = []float64{2 * math.Pi}
					}
					w := action.Wave{Potential: v, Links: links}
					kind := (d + e + sites) % 4
					switch kind {
					case 1:
						w.Alpha, w.Source = action.Uniform(0.1), action.Uniform(0.05)
						if ends.name == "free" {
							w.LeftFlux = action.Over(func(_, t float64) float64 { return 0.1 * t })
						}
					case 2:
						w.Sigma = action.Along(func(x float64) float64 { return 1 + 0.25*x*x/(1+x*x) })
						w.Kappa = action.Along(func(x float64) float64 { return 1 - 0.125*x/(1+x) })
						w.Rho = action.Along(func(x float64) float64 { return 1 + 0.125/(1+x) })
					}
					if kind == 3 {
						w.Beta, w.Alpha = action.Uniform(0.02), action.Uniform(0.1)
					}
					s, err := action.New(lattice.Block{Time: lattice.Axis{Step: 0.06, Sites: 100}, Space: line}, w)
					if err != nil {
						t.Fatal(err)
					}
					methods := []Method{Leapfrog{}, RK4{}}
					if s.Conservative() == nil {
						methods = append(methods, Yoshida4{})
					}
					cases = append(cases, bitsCase{
						name:   fmt.Sprintf("%T, links %d, %s, %d sites, kind %d", v, links, ends.name, sites, kind),
						action: s, start: bitsStart(s.Components(), sites), methods: methods,
					})
				}
			}
		}
	}
	return cases
}

// bitsStart is a rough field made without package math, whose functions may
// differ from machine to machine.
func bitsStart(components, sites int) field.State {
	st := field.NewState(components, sites)
	u := uint64(sites)
	next := func() float64 {
		u = u*6364136223846793005 + 1442695040888963407
		return float64(u>>11)/(1<<53) - 0.5
	}
	for i := range st.Field.Data {
		st.Field.Data[i], st.Rate.Data[i] = 3*next(), next()
	}
	return st
}

func (c *bitsCase) stepper(t *testing.T, m Method) Stepper {
	t.Helper()
	st, err := m.Start(Problem{Action: c.action, Start: c.start, Workers: 1})
	if err != nil {
		t.Fatalf("%s: %v", c.name, err)
	}
	return st
}

func hashOf(st Stepper) uint64 {
	h := fnv.New64a()
	var b [8]byte
	for _, m := range st.Memory() {
		for c := range m.Components {
			for _, v := range m.Component(c) {
				if v != v {
					v = math.NaN() // its payload is the processor's affair
				}
				binary.LittleEndian.PutUint64(b[:], math.Float64bits(v))
				h.Write(b[:])
			}
		}
	}
	return h.Sum64()
}

const bitsSteps = 23

// someSizes are sizes that take turns, so that each meets every kind of case.
func someSizes(k int) []int {
	all := []int{2, 3, 4, 5, 7, 8, 9, 15, 17, 24, 31, 33, 41, 64, 70}
	return []int{all[k%len(all)], all[(4*k+7)%len(all)]}
}

// blockedAs sets how a stepper is blocked.
func blockedAs(st Stepper, width, depth, workers int) {
	var b *blocked
	switch v := st.(type) {
	case *leapfrog:
		b = &v.block
	case *rk4:
		b = &v.block
	case *yoshida:
		b = &v.block
	}
	b.tiles.Width, b.tiles.Depth, b.tiles.Workers = width, depth, workers
}

// Blocked in time or not, by one worker or many: the bits are those of step after
// step.
func TestBlockedBits(t *testing.T) { testBlockedBits(t, someSizes) }

func testBlockedBits(t *testing.T, sizes func(k int) []int) {
	for k, c := range bitsCases(t, sizes) {
		for _, m := range c.methods {
			plain := c.stepper(t, m)
			for range bitsSteps {
				plain.Step()
			}
			want := hashOf(plain)
			for _, shape := range [][3]int{{1 << 20, 64, 1}, {7, 3, 1}, {8 + k%9, 1 + k%12, 1 + k%8}} {
				st := c.stepper(t, m)
				blockedAs(st, shape[0], shape[1], shape[2])
				st.(Advancer).Advance(bitsSteps - 8)
				st.(Advancer).Advance(1)
				st.(Advancer).Advance(7)
				if hashOf(st) != want {
					t.Fatalf("%s, %s: other bits with blocks of %d sites and %d steps and %d workers", c.name, m.Name(), shape[0], shape[1], shape[2])
				}
			}
		}
	}
}

// bitsHashes returns a line for each case with the hash of its end.
func bitsHashes(t *testing.T, sizes func(k int) []int) []string {
	var lines []string
	for _, c := range bitsCases(t, sizes) {
		for _, m := range c.methods {
			st := c.stepper(t, m)
			st.(Advancer).Advance(bitsSteps)
			state := field.NewState(c.start.Field.Components, c.start.Field.Sites)
			st.State(state)
			e, p := c.action.Energy(state, 1), c.action.Momentum(state, 1)
			w := c.action.Power(state, 1)
			lines = append(lines, fmt.Sprintf("%s, %s: %x, energy %x, momentum %x, power %x", c.name, m.Name(), hashOf(st), e, p, w))
		}
	}
	return lines
}

// The portable path, AVX2 and AVX-512 give the same bits, energies included. The
// path is chosen once, so each has a process of its own.
func TestPathBits(t *testing.T) { testPathBits(t, "TestPathBits", someSizes) }

func testPathBits(t *testing.T, name string, sizes func(k int) []int) {
	const asked = "TENTER_TEST_HASHES"
	lines := bitsHashes(t, sizes)
	if to := os.Getenv(asked); to != "" {
		if err := os.WriteFile(to, []byte(strings.Join(lines, "\n")), 0o666); err != nil {
			t.Fatal(err)
		}
		return
	}
	for _, path := range []string{"portable", "avx2", "avx512"} {
		if path == kernel.Path() {
			continue
		}
		to := t.TempDir() + "/hashes"
		cmd := exec.Command(os.Args[0], "-test.run=^"+name+"$")
		cmd.Env = append(os.Environ(), "TENTER_KERNEL="+path, asked+"="+to)
		if out, err := cmd.CombinedOutput(); err != nil {
			if strings.Contains(string(out), "TENTER_KERNEL is") {
				t.Logf("this processor has no %s", path)
				continue
			}
			t.Fatalf("%s: %v\n%s", path, err, out)
		}
		text, err := os.ReadFile(to)
		if err != nil {
			t.Fatal(err)
		}
		got := strings.Split(string(text), "\n")
		if len(got) != len(lines) {
			t.Fatalf("%s: %d cases; want %d", path, len(got), len(lines))
		}
		for k := range lines {
			if got[k] != lines[k] {
				t.Fatalf("%s gives\n%s; %s gives\n%s", path, got[k], kernel.Path(), lines[k])
			}
		}
	}
}
