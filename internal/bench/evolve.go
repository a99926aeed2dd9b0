package main

import (
	_ "embed"
	"errors"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"time"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

//go:embed testdata/leapfrog.c
var leapfrogC []byte

const (
	evolveSites = 4096
	evolveSteps = 10_000
)

// evolveCases are the loops of the evolution on a line that fits the cache.
func evolveCases(dir string) []bench {
	phi4, sine := newPeer(dir, "phi4"), newPeer(dir, "sine", "-DSINE")
	return []bench{
		{"phi4-4096-c", phi4.name(), leapfrog(action.Phi4{}), phi4.run(evolveSites, evolveSteps)},
		{"sinegordon-4096-c", sine.name(), leapfrog(action.SineGordon{}), sine.run(evolveSites, evolveSteps)},
	}
}

// leapfrog times the steps of a stepper.
func leapfrog(p action.Potential) func() (float64, error) {
	return func() (float64, error) {
		b := lattice.Block{Time: lattice.Axis{Step: 0.05, Sites: evolveSteps + 1}, Space: lattice.Axis{Step: 0.1, Sites: evolveSites}}
		s, err := action.New(b, action.Wave{Potential: p})
		if err != nil {
			return 0, err
		}
		start := field.NewState(1, evolveSites)
		profile(start.Field.Data)
		st, err := integrate.Leapfrog{}.Start(integrate.Problem{Action: s, Start: start})
		if err != nil {
			return 0, err
		}
		begun := time.Now()
		for range evolveSteps {
			st.Step()
		}
		return float64(time.Since(begun).Nanoseconds()) / (evolveSites * evolveSteps), nil
	}
}

// profile is the start of the peers.
func profile(phi []float64) {
	for i := range phi {
		phi[i] = math.Tanh(0.1 * float64(i-len(phi)/2) * 0.7071)
	}
}

// peer is a C program compiled on the spot.
type peer struct {
	path string
	err  error
}

func newPeer(dir, name string, flags ...string) *peer {
	p := &peer{path: filepath.Join(dir, name)}
	if _, p.err = exec.LookPath("gcc"); p.err != nil {
		p.err = errors.New("not installed")
		return p
	}
	source := p.path + ".c"
	if p.err = os.WriteFile(source, leapfrogC, 0o666); p.err != nil {
		return p
	}
	args := append([]string{"-O3", "-march=native", "-ffast-math", "-o", p.path, source}, flags...)
	if out, err := exec.Command("gcc", append(args, "-lm")...).CombinedOutput(); err != nil {
		p.err = fmt.Errorf("gcc: %w: %s", err, out)
	}
	return p
}

func (p *peer) name() string { return "C, gcc -O3 -march=native -ffast-math" }

func (p *peer) run(sites, steps int) func() (float64, error) {
	return func() (float64, error) {
		ns, _, err := p.output(sites, steps)
		return ns, err
	}
}

// output returns what the program prints: its time per site and step, and the
// field a third along the line after the last step.
func (p *peer) output(sites, steps int) (ns, phi float64, err error) {
	if p.err != nil {
		return 0, 0, p.err
	}
	out, err := exec.Command(p.path, strconv.Itoa(sites), strconv.Itoa(steps)).Output()
	if err != nil {
		return 0, 0, err
	}
	_, err = fmt.Sscan(string(out), &ns, &phi)
	return ns, phi, err
}
