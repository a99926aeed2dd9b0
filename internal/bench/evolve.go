package main

import (
	"context"
	"math"
	"time"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

const (
	evolveSites = 4096
	evolveSteps = 10_000
	longSites   = 4_000_000
	longSteps   = 128
)

// evolveCases are the loops of the evolution, on a line that fits the cache and on
// one that does not.
func evolveCases(dir string) []bench {
	phi4, sine, numpy := newPeer(dir, "phi4"), newPeer(dir, "sine", "-DSINE"), newNumpyLoop(dir)
	const catalogue = "nearest neighbours, one core"
	near := race{potential: action.Phi4{}}
	long := race{potential: action.Phi4{}, sites: longSites, steps: longSteps}
	return []bench{
		{"phi4-4096-c", phi4.name(), near.run, phi4.run(evolveSites, evolveSteps)},
		{"sinegordon-4096-c", sine.name(), race{potential: action.SineGordon{}}.run, sine.run(evolveSites, evolveSteps/4)},
		{"phi4-4096-numpy", "NumPy", near.run, numpy.run("phi4", evolveSites, evolveSteps/10)},
		{"sinegordon-4096-numpy", "NumPy", race{potential: action.SineGordon{}}.run, numpy.run("sine", evolveSites, evolveSteps/10)},
		{"phi4-4000000-c", phi4.name(), long.run, phi4.run(longSites, longSteps/4)},
		{"phi4-4000000-cores", "one core; ours two", long.on(2), long.on(1)},
		{"order4-4096", catalogue, race{potential: action.Phi4{}, links: action.Fourth}.run, near.run},
		{"order6-4096", catalogue, race{potential: action.Phi4{}, links: action.Sixth}.run, near.run},
		{"user-4096", "φ⁴ of the catalogue", race{potential: userPhi4{}}.run, near.run},
		{"rk4-4096", "leapfrog, a step each", race{potential: action.Phi4{}, method: integrate.RK4{}, steps: evolveSteps / 4}.run, near.run},
		{"portable-4096", "the best plain loop in Go", portable, plainGo},
		{"ledger-4096", "nobody looks; ours a ledger, every 100 steps", observed(&integrate.Ledger{Every: 100}), observed()},
		{"batch-1000", "one core; ours two", func() (float64, error) { return batch(2) }, func() (float64, error) { return batch(1) }},
	}
}

// A race is a run of a stepper.
type race struct {
	potential    action.Potential
	links        action.Links
	method       integrate.Method // nil means leapfrog
	sites, steps int              // 0 means evolveSites and evolveSteps
	workers      int              // 0 means one, timed by its processor time
}

func (r race) on(workers int) func() (float64, error) {
	r.workers = workers
	return r.run
}

// run returns the time of the steps, which nobody looks at in between, per site
// and step.
func (r race) run() (float64, error) {
	if r.sites == 0 {
		r.sites = evolveSites
	}
	if r.steps == 0 {
		r.steps = evolveSteps
	}
	if r.method == nil {
		r.method = integrate.Leapfrog{}
	}
	const h, k = 0.1, 0.05
	b := lattice.Block{Time: lattice.Axis{Step: k, Sites: r.steps + 1}, Space: lattice.Axis{Step: h, Sites: r.sites}}
	s, err := action.New(b, action.Wave{Potential: r.potential, Links: r.links})
	if err != nil {
		return 0, err
	}
	start := field.NewState(1, r.sites)
	profile(start.Field.Data)
	st, err := r.method.Start(integrate.Problem{Action: s, Start: start, Workers: max(r.workers, 1)})
	if err != nil {
		return 0, err
	}
	st.Step()
	took := elapsed
	if r.workers == 0 {
		took = cpuTime
	}
	begun := took()
	st.(integrate.Advancer).Advance(r.steps)
	return perSite(took()-begun, r.sites, r.steps), nil
}

// observed times a whole run of φ⁴ with observers.
func observed(observers ...integrate.Observer) func() (float64, error) {
	return func() (float64, error) {
		b := lattice.Block{Time: lattice.Axis{Step: 0.05, Sites: evolveSteps + 1}, Space: lattice.Axis{Step: 0.1, Sites: evolveSites}}
		s, err := action.New(b, action.Wave{Potential: action.Phi4{}})
		if err != nil {
			return 0, err
		}
		start := field.NewState(1, evolveSites)
		profile(start.Field.Data)
		begun := cpuTime()
		_, err = integrate.Evolve(context.Background(), s, start, integrate.Settings{Every: -1, Workers: 1, Observers: observers})
		return perSite(cpuTime()-begun, evolveSites, evolveSteps), err
	}
}

func perSite(t time.Duration, sites, steps int) float64 {
	return float64(t.Nanoseconds()) / (float64(sites) * float64(steps))
}

// elapsed returns the time since the program began, for what runs on several cores.
func elapsed() time.Duration { return time.Since(start) }

var start = time.Now()

// profile is the start of the peers.
func profile(phi []float64) {
	for i := range phi {
		phi[i] = math.Tanh(0.1 * float64(i-len(phi)/2) * 0.7071)
	}
}

// userPhi4 is φ⁴ as a user would write it.
type userPhi4 struct{}

func (userPhi4) Components() int { return 1 }

func (userPhi4) Value(dst []float64, phi field.Slice, _ action.Sites) {
	for i, p := range phi.Component(0) {
		dst[i] = 0.25 * (1 - p*p) * (1 - p*p)
	}
}

func (userPhi4) Slope(dst, phi field.Slice, _ action.Sites) {
	v := phi.Component(0)
	d := dst.Component(0)[:len(v)]
	for i, p := range v {
		d[i] = p*p*p - p
	}
}

func (userPhi4) Curvature(dst, phi field.Slice, _ action.Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		d[i] = 3*p*p - 1
	}
}
