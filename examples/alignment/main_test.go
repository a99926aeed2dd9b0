package main

import (
	"context"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"testing"
)

// example is the channel of the flags' defaults.
func example() *channel {
	return &channel{
		stem:  arm{length: 2, strength: 4, easy: 0},
		left:  arm{length: 2, strength: 2, easy: radians(40)},
		right: arm{length: 3, strength: 1, easy: radians(80)},
	}
}

func settled(t *testing.T, c *channel, across int, before *alignment) *alignment {
	t.Helper()
	b, err := c.block(across)
	if err != nil {
		t.Fatal(err)
	}
	a, err := c.settle(context.Background(), b, before)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

// With walls that agree there is nothing to settle: one angle everywhere and no
// cost, also from a start that knows nothing of it.
func TestWallsThatAgree(t *testing.T) {
	c := example()
	before := settled(t, c, 8, nil)
	for _, p := range c.parts() {
		p.easy = 0.7
	}
	a := settled(t, c, 8, before)
	// Rounding of the solve: the gradient is below 1e-10 of its terms, the softest
	// response about 1.
	for n := range a.angle.Block.Slices() {
		for i := range a.angle.Block.Sites() {
			if v := a.angle.At(n, 0, i); a.region.Inside(n, i) && math.Abs(v-0.7) > 1e-10 {
				t.Fatalf("angle %.12f at %v, want 0.7", v, a.angle.Block.At(n, i))
			}
		}
	}
	if a.energy > 1e-18 || a.costs[0]+a.costs[1]+a.costs[2] > 1e-18 { // squares of that
		t.Errorf("energy %g, costs %g; want none", a.energy, a.costs)
	}
}

// hybrid solves Kθ′ = ½W sin 2(θ − easy) at the one wall and = −½W sin 2(θ − easy)
// at the other of a cell of thickness d, K = 1, whose profile is linear [Rapini &
// Papoular 1969, J. Phys. Colloques 30, C4-54], for deviations below 45°. It
// returns θ′, by bisection.
func hybrid(d float64, one, other arm) float64 {
	low, high := 0.0, min(one.strength, other.strength)/2
	for range 100 {
		s := (low + high) / 2
		if s*d+0.5*math.Asin(2*s/one.strength)+0.5*math.Asin(2*s/other.strength) < other.easy-one.easy {
			low = s
		} else {
			high = s
		}
	}
	return (low + high) / 2
}

// Without the stem the channel is a hybrid-aligned cell with weak anchoring; the
// lattice has linear profiles exactly.
func TestStraightChannelIsAHybridCell(t *testing.T) {
	for _, w := range [][2]float64{{1, 1}, {0.5, 5}, {20, 3}} {
		c := example()
		c.stem.length, c.left.strength, c.right.strength = 0, w[0], w[1]
		a := settled(t, c, 4, nil)
		d := c.left.length + 1 + c.right.length
		s := hybrid(d, c.left, c.right)
		parts := c.parts()
		turns, err := a.turned(context.Background())
		if err != nil {
			t.Fatal(err)
		}
		left, right := 0.5*math.Asin(2*s/w[0]), -0.5*math.Asin(2*s/w[1])
		for _, q := range []struct {
			name           string
			got, want, tol float64
		}{
			// The solve's gradient, 1e-10 of its terms.
			{"deviation on the left", a.deviation(parts[0]), left, 1e-8},
			{"deviation on the right", a.deviation(parts[1]), right, 1e-8},
			{"half way down the left arm", a.at(c.middle("left")), c.left.easy + left + s*c.left.length/2, 1e-8},
			{"energy", a.energy, 0.5*s*s*d + 0.5*w[0]*math.Pow(math.Sin(left), 2) + 0.5*w[1]*math.Pow(math.Sin(right), 2), 1e-8},
			{"cost on the left", a.costs[0], 0.5 * w[0] * math.Pow(math.Sin(left), 2), 1e-8},
			// The nudge squared.
			{"torque on the left", turns[0].torque, -s, 3e-6},
			{"torque on the right", turns[1].torque, s, 3e-6},
		} {
			if math.Abs(q.got-q.want) > q.tol {
				t.Errorf("W = %v: %s is %.10f, want %.10f", w, q.name, q.got, q.want)
			}
		}
	}
}

// Without the left arm the channel is a bend. The square at the corner of a bend
// counts for current like 1 − (2/π) ln 2 = 0.5587 of its length [Hall 1967, Thin
// Solid Films 1, 277 (from memory)], so that the walls see a hybrid-aligned cell of
// that thickness: exactly but for the unevenness along them, of which e^−2π per
// width is left. The corner also sets the order 4/3.
func TestBendIsAShorterHybridCell(t *testing.T) {
	c := example()
	c.left.length = 0
	table, _, err := c.study(context.Background(), 8)
	if err != nil {
		t.Fatal(err)
	}
	s := hybrid(c.stem.length+c.right.length+1-2/math.Pi*math.Ln2, c.stem, c.right)
	for name, want := range map[string]float64{
		"torque_stem":     -s,
		"torque_right":    s,
		"deviation_stem":  degrees(0.5 * math.Asin(2*s/c.stem.strength)),
		"deviation_right": -degrees(0.5 * math.Asin(2*s/c.right.strength)),
		"angle_stem":      degrees(0.5*math.Asin(2*s/c.stem.strength) + s*c.stem.length/2),
	} {
		e, _ := table.Get(name)
		t.Logf("%s = %.7g ± %.1g, order %.2f; want %.7g", name, e.Value, e.Error, e.Order, want)
		// 1.25 times what the finest level, h = 1/64, is off, 2e-4 of the value.
		if !e.Status.Bounded() || math.Abs(e.Value-want) > e.Error || e.Error > 3e-4*math.Abs(want) {
			t.Errorf("%s is %.7g ± %.1g, want %.7g", name, e.Value, e.Error, want)
		}
		// The next term, h², is a few hundredths of the leading one.
		if math.Abs(e.Order-4./3) > 0.05 {
			t.Errorf("%s has the observed order %.3f, want 4/3", name, e.Order)
		}
	}
}

// Turning all walls turns the director with them: what is felt of all walls adds
// up to 1 at every place, and their torques to nothing.
func TestAllWallsTurnedTogether(t *testing.T) {
	c := example()
	c.right.strength = 0.05 // which yields by more than 45° and is felt the other way
	a := settled(t, c, 8, nil)
	turns, err := a.turned(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	var torque float64
	for _, p := range c.parts() {
		var felt float64
		for _, turn := range turns {
			felt += turn.felt[p.name]
		}
		if math.Abs(felt-1) > 1e-5 { // the nudge squared, 3e-6, times derivatives of order 1
			t.Errorf("in the %v the walls are felt by %.7f altogether, want 1", p, felt)
		}
	}
	for _, turn := range turns {
		torque += turn.torque
	}
	if math.Abs(torque) > 1e-5 {
		t.Errorf("torques add up to %g, want 0", torque)
	}
	if d := a.deviation(c.parts()[2]); d > -radians(45) || turns[2].felt["left"] >= 0 {
		t.Errorf("the right wall yields by %g° and is felt by %g in the left arm; want more than 45° and a number below 0", degrees(d), turns[2].felt["left"])
	}
}

func TestRefusals(t *testing.T) {
	for name, change := range map[string]func(*channel){
		"length off the lattice": func(c *channel) { c.left.length = 2.1 },
		"negative length":        func(c *channel) { c.stem.length = -1 },
		"negative strength":      func(c *channel) { c.right.strength = -1 },
		"no angle":               func(c *channel) { c.stem.easy = math.NaN() },
		"one arm":                func(c *channel) { c.left.length, c.right.length = 0, 0 },
		"no anchoring":           func(c *channel) { c.stem.strength, c.left.strength, c.right.strength = 0, 0, 0 },
	} {
		c := example()
		change(c)
		if err := run(context.Background(), c, 8, 3, t.TempDir()); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
	if err := run(context.Background(), example(), 5, 3, t.TempDir()); err == nil {
		t.Error("five cells across: no error")
	}
}

// The quick run must write what the full one does.
func TestQuickRun(t *testing.T) {
	out := t.TempDir()
	if err := run(context.Background(), example(), 4, 3, out); err != nil {
		t.Fatal(err)
	}
	text, err := os.ReadFile(filepath.Join(out, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	var rows []struct {
		Name         string
		Value, Error *float64
	}
	if err := json.Unmarshal(text, &rows); err != nil {
		t.Fatal(err)
	}
	has := map[string]bool{}
	for _, r := range rows {
		has[r.Name] = r.Value != nil && r.Error != nil
	}
	for _, name := range []string{"energy", "deviation_stem", "cost_left", "torque_right", "angle_junction", "felt_left_in_right", "felt_right_in_left"} {
		if !has[name] {
			t.Errorf("%s is missing or has no error bar", name)
		}
	}
	for _, file := range []string{"map.png", "profiles.png", "yield.png", "felt.png", "sweep.csv"} {
		if _, err := os.Stat(filepath.Join(out, file)); err != nil {
			t.Error(err)
		}
	}
}
