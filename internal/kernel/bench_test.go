package kernel

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"os/exec"
	"path/filepath"
	"slices"
	"testing"
	"time"
)

// A contest alternates short runs of two contenders, so that what else the
// machine does hits both alike, and compares medians.
type contest struct {
	ours, peer []float64
}

// run is one alternation a loop of b; each contender returns the nanoseconds
// that it took a site and step.
func (c *contest) run(b *testing.B, ours, peer func() float64) {
	for b.Loop() {
		c.ours = append(c.ours, ours())
		c.peer = append(c.peer, peer())
	}
	slices.Sort(c.ours)
	slices.Sort(c.peer)
	middle := func(x []float64) float64 { return x[len(x)/2] }
	b.ReportMetric(middle(c.ours), "ours-ns/site")
	b.ReportMetric(middle(c.peer), "peer-ns/site")
	b.ReportMetric(middle(c.ours)/middle(c.peer), "ratio")
	b.ReportMetric(c.ours[0]/c.peer[0], "ratio-of-best")
	b.ReportMetric(0, "ns/op")
}

// timed returns the nanoseconds a unit of work that f takes.
func timed(units int, f func()) float64 {
	start := time.Now()
	f()
	return float64(time.Since(start).Nanoseconds()) / float64(units)
}

// peer starts testdata/peer.c and returns what times a case of it, or ends the
// benchmark with a note if there is no gcc.
func peer(b *testing.B) func(name string, sites, steps int) float64 {
	gcc, err := exec.LookPath("gcc")
	if err != nil {
		b.Log("no gcc here: nothing to compare with")
		return nil
	}
	program := filepath.Join(b.TempDir(), "peer")
	if out, err := exec.Command(gcc, "-O3", "-march=native", "-ffast-math", "-o", program, "testdata/peer.c", "-lm").CombinedOutput(); err != nil {
		b.Fatalf("gcc: %v\n%s", err, out)
	}
	cmd := exec.Command(program)
	in, err := cmd.StdinPipe()
	if err != nil {
		b.Fatal(err)
	}
	out, err := cmd.StdoutPipe()
	if err != nil {
		b.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		b.Fatal(err)
	}
	b.Cleanup(func() {
		in.Close()
		io.Copy(io.Discard, out)
		cmd.Wait()
	})
	answers := bufio.NewScanner(out)
	return func(name string, sites, steps int) float64 {
		fmt.Fprintln(in, name, sites, steps)
		var ns float64
		if !answers.Scan() {
			b.Fatal("the peer has stopped")
		}
		if _, err := fmt.Sscan(answers.Text(), &ns); err != nil {
			b.Fatal(err)
		}
		return ns
	}
}

// rotating is a field in three slices, as a caller has who shows the middle one,
// and the peer too. Its end sites are at rest, as the peer's.
type rotating struct {
	line   Line
	slices [3][]float64
}

func newRotating(line Line, n int) *rotating {
	r := &rotating{line: line}
	for k := range r.slices {
		r.slices[k] = make([]float64, n)
		for i := range r.slices[k] {
			r.slices[k][i] = math.Tanh(0.02 * float64(i-n/2))
		}
	}
	return r
}

func (f *rotating) advance(steps int) {
	r := f.line.Radius
	n := len(f.slices[0])
	for range steps {
		before, now, next := f.slices[0], f.slices[1], f.slices[2]
		f.line.Leapfrog(next[r:n-r], now, before[r:n-r])
		f.slices = [3][]float64{now, next, before}
	}
}

// time advances the field and returns the nanoseconds a site and step.
func (f *rotating) time(steps int) float64 {
	f.advance(1)
	return timed(steps*len(f.slices[0]), func() { f.advance(steps) })
}

func nearest(p Potential) Line {
	return Line{Radius: 1, Link: [3]float64{0.25}, Keep: 1, Pull: 0.0025, Potential: p}
}

func BenchmarkAgainstC(b *testing.B) {
	for _, c := range []struct {
		name      string
		potential Potential
		steps     int
	}{{"phi4", Phi4(), 1000}, {"sinegordon", Sine(), 300}} {
		b.Run(c.name+"-4096", func(b *testing.B) {
			peer := peer(b)
			if peer == nil {
				return
			}
			f := newRotating(nearest(c.potential), 4096)
			new(contest).run(b,
				func() float64 { return f.time(c.steps) },
				func() float64 { return peer(c.name, 4096, c.steps) })
		})
	}
}

// BenchmarkTiles advances a field beyond the caches.
func BenchmarkTiles(b *testing.B) {
	const n, steps = 4_000_000, 64
	c := newCloth(nearest(Phi4()), n, false)
	tiled := func(workers int) float64 {
		t := Tiles{Sites: n, Radius: 1, Workers: workers}
		return timed(n*steps, func() { t.Advance(steps, c.row) })
	}
	b.Run("c", func(b *testing.B) {
		if peer := peer(b); peer != nil {
			new(contest).run(b, func() float64 { return tiled(1) }, func() float64 { return peer("phi4", n, 8) })
		}
	})
	b.Run("cores", func(b *testing.B) {
		new(contest).run(b, func() float64 { return tiled(2) }, func() float64 { return tiled(1) })
	})
}

func BenchmarkOrders(b *testing.B) {
	peer := newRotating(nearest(Phi4()), 4096)
	for radius, link := range [][3]float64{{0.25}, {1. / 3, -1. / 48}, {0.375, -0.0375, 1. / 360}} {
		b.Run(fmt.Sprint(2*radius+2), func(b *testing.B) {
			line := nearest(Phi4())
			line.Radius, line.Link = radius+1, link
			f := newRotating(line, 4096)
			new(contest).run(b, func() float64 { return f.time(1000) }, func() float64 { return peer.time(1000) })
		})
	}
}

// BenchmarkPaths compares every path with the fastest.
func BenchmarkPaths(b *testing.B) {
	for name, p := range map[string]Potential{"phi4": Phi4(), "sine": Sine(), "double sine": DoubleSine(0.5), "phi6": Phi6()} {
		f := newRotating(nearest(p), 4096)
		for _, way := range paths() {
			b.Run(fmt.Sprintf("%s/%v", name, way), func(b *testing.B) {
				new(contest).run(b,
					func() (ns float64) { on(way, func() { ns = f.time(100) }); return ns },
					func() float64 { return f.time(100) })
			})
		}
	}
}

// BenchmarkRK4 compares a step of RK4, three stages and the end, with one of
// leapfrog, and BenchmarkYoshida one of three kicks and drifts and a fourth drift.
func BenchmarkRK4(b *testing.B) {
	const n, steps = 4096, 250
	l := nearest(Phi4())
	f := newRotating(l, n)
	var phi, v [4][]float64
	for k := range phi {
		phi[k], v[k] = make([]float64, n+2), make([]float64, n+2)
	}
	for i := range phi[0] {
		phi[0][i] = math.Tanh(0.02 * float64(i-n/2))
	}
	l.Keep = 0
	// Tiles whose eight arrays stay in the nearest cache; a sub-step is a step of
	// theirs, and slice 4s + m the stage m of step s.
	tiles := Tiles{Sites: n, Radius: 1, Width: 512, Depth: 32}
	row := func(step, lo, hi int) {
		at := func(k int) []float64 { return phi[k][1+lo : 1+hi] }
		near := func(k int) []float64 { return phi[k][lo : hi+2] }
		v := func(k int) []float64 { return v[k][1+lo : 1+hi] }
		switch m := step % 4; m {
		case 3:
			l.Finish(at(0), v(0), v(1), v(2), near(3), v(3), 1./6)
		default:
			l.Stage(at(m+1), v(m+1), near(m), v(m), at(0), v(0), [3]float64{0.5, 0.5, 1}[m])
		}
	}
	new(contest).run(b, func() float64 {
		return timed(n*steps, func() { tiles.Advance(4*steps, row) })
	}, func() float64 { return f.time(1000) })
}

func BenchmarkYoshida(b *testing.B) {
	const n, steps = 4096, 250
	l := nearest(Phi4())
	f := newRotating(l, n)
	phi, other, v := make([]float64, n+2), make([]float64, n+2), make([]float64, n+2)[1:n+1]
	for i := range phi {
		phi[i] = math.Tanh(0.02 * float64(i-n/2))
		other[i] = phi[i] // the ghost cells stay
	}
	new(contest).run(b, func() float64 {
		return timed(n*steps, func() {
			for range steps {
				AddScaled(phi[1:n+1], phi[1:n+1], 0.3, v)
				for range 3 {
					l.KickDrift(other[1:n+1], phi, v, 0.3)
					phi, other = other, phi
				}
			}
		})
	}, func() float64 { return f.time(1000) })
}

// plainPhi4 is the best loop of plain Go for the arithmetic of leapPhi4 that we
// could write.
func plainPhi4(next, now, before []float64, keep, bias, link, pull float64) {
	n := len(next)
	left, at, right, before := now[:n], now[1:][:n], now[2:][:n], before[:n]
	for i, p := range at {
		next[i] = p + (keep*(p-before[i]) + bias + link*((right[i]-p)-(p-left[i])) - pull*(p*(p*p-1)))
	}
}

func BenchmarkPortable(b *testing.B) {
	f, g := newRotating(nearest(Phi4()), 4096), newRotating(nearest(Phi4()), 4096)
	new(contest).run(b,
		func() (ns float64) { on(portable, func() { ns = f.time(100) }); return ns },
		func() float64 {
			return timed(100*4096, func() {
				for range 100 {
					before, now, next := g.slices[0], g.slices[1], g.slices[2]
					plainPhi4(next[1:4095], now, before[1:4095], 1, 0, 0.25, 0.0025)
					g.slices = [3][]float64{now, next, before}
				}
			})
		})
}
