// Decay finds the Euclidean bounce of a metastable field in 1+1 dimensions with any
// polynomial potential, the saddle of the action that governs how fast its false
// vacuum decays, rate ∝ e^−S. It prints the action, counts the negative modes,
// compares with the formula for thin walls and draws the bounce.
//
//	go run ./examples/decay -coeffs 0,0,0.5,-0.5,0.1125 -vacuum 0
//
// Units are those in which the action is ∫ ½φ_τ² + ½φ_x² + V dx dτ. The field is
// invented and the model idealised: a classical saddle and no prefactor, gravity or
// temperature.
package main

import (
	"context"
	"flag"
	"fmt"
	"log"
	"math"
	"os"
	"os/signal"
	"path/filepath"
	"strconv"
	"strings"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
)

// options are what the flags say.
type options struct {
	coeffs       string
	vacuum       float64
	box, spacing float64 // in 1/m; 0 chooses
	quick        bool
	out          string
}

func main() {
	log.SetFlags(0)
	log.SetPrefix("decay: ")
	var o options
	flag.StringVar(&o.coeffs, "coeffs", "0,0,0.5,-0.5,0.1125", "c0,c1,c2,… of the potential V = Σ c_k φᵏ")
	flag.Float64Var(&o.vacuum, "vacuum", 0, "guess of the false vacuum; the nearest minimum of V is taken")
	flag.Float64Var(&o.box, "box", 0, "side of the quarter plane, in inverse masses 1/m of the false vacuum; 0 chooses one")
	flag.Float64Var(&o.spacing, "spacing", 0, "spacing of the coarsest lattice, in 1/m; 0 chooses one")
	flag.BoolVar(&o.quick, "quick", false, "a smaller box and three lattices in place of four, to see that it works")
	flag.StringVar(&o.out, "out", "decay-out", "folder for results.json, figures and the bounce")
	flag.Parse()
	if flag.NArg() > 0 {
		log.Fatalf("argument %q; want flags only (no spaces within -coeffs)", flag.Arg(0))
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	if err := run(ctx, o); err != nil {
		log.Fatal(err)
	}
}

func run(ctx context.Context, o options) error {
	v, err := parse(o.coeffs)
	if err != nil {
		return err
	}
	w, err := newWell(v, o.vacuum)
	if err != nil {
		return err
	}
	lump, estimate, err := w.start()
	if err != nil {
		return err
	}
	block, levels, err := o.lattice(w, lump)
	if err != nil {
		return err
	}
	if err := os.MkdirAll(o.out, 0o777); err != nil {
		return err
	}
	w.describe()
	fmt.Printf("Started from a lump of radius %.4g/m and wall %.4g/m, the best with ∫(V − V_false) = 0; its ∫½(∇φ)², %.6g, is a first estimate of the action.\n", lump.Radius, lump.Wall, w.reach*w.reach*estimate)
	fmt.Printf("Quarter of the plane, side %.4g/m, symmetry axes and rim free; spacings below in 1/m.\n\n", block.Space.To())

	table, found, err := w.study(ctx, block, levels, lump)
	if err != nil {
		return err
	}
	finest := found[len(found)-1]
	fmt.Printf("%v\nOn the finest lattice:\n%v\n\n", table, finest.report)
	fmt.Printf("At the rim φ − φ_false is at most %.2g of what it is in the middle, so the box changes the action by less than %.2g.\n", finest.rim, w.cut(finest))
	fmt.Println("virial is ∫(V − V_false), which vanishes for a bounce in two dimensions; anisotropy is the largest difference of φ between axis and diagonal, zero in the continuum.")

	// The second lattice is fine enough to count on.
	plane, err := w.index(ctx, found[1])
	if err != nil {
		return fmt.Errorf("negative modes: %w", err)
	}
	inertia := plane.Report.Inertia
	fmt.Printf("\nOn the whole plane, mirrored, spacing %.4g/m, both translations held (λ in units of m²):\n  %v\n\n", plane.History.Block.Space.Step, inertia)

	results := table.Results()
	for k, e := range table.Estimates {
		if e.Name == "bounce_action" {
			results[k].Error += w.cut(finest)
		}
	}
	results = append(results,
		refine.Result{Name: "negative_modes", Value: float64(inertia.Index)},
		refine.Result{Name: "zero_modes_held", Value: float64(inertia.ZeroModesHeld)},
		refine.Result{Name: "smallest_eigenvalue", Value: w.mass * w.mass * math.Abs(inertia.Smallest), Error: math.NaN()},
		refine.Result{Name: "negative_eigenvalue", Value: w.mass * w.mass * inertia.Negative[0], Error: math.NaN()},
		refine.Result{Name: "rim_field", Value: finest.rim, Error: math.NaN()},
	)
	switch r, thin := w.thinRadius(), w.thinAction(); {
	case math.IsNaN(r):
		fmt.Println("No thin_wall_action: V has no minimum beyond the turning point, so there is no ε.")
	case r < 1:
		fmt.Printf("No thin_wall_action: the radius σ/ε = %.3g/m is less than the thickness 1/m of the wall.\n", r)
	default:
		fmt.Printf("Thin wall: action πσ²/ε = %.6g, radius σ/ε = %.4g/m; the bounce has %.3f times that action. The formula is the limit of radii that are many 1/m.\n", thin, r, results[0].Value/thin)
		results = append(results, refine.Result{Name: "thin_wall_action", Value: thin, Error: 1e-6 * thin})
	}

	if err := draw(w, lump, plane.History, finest, o.out); err != nil {
		return err
	}
	if err := store.WriteHistoryNPZ(filepath.Join(o.out, "bounce.npz"), finest.history); err != nil {
		return err
	}
	if err := store.WriteResults(filepath.Join(o.out, "results.json"), results); err != nil {
		return err
	}
	for _, r := range results {
		fmt.Println(" ", r)
	}
	fmt.Printf("\nWrote results.json, figures and bounce.npz, (φ − φ_false)/(φ_turning − φ_false) on the finest quarter, to %s.\n", o.out)
	return nil
}

func parse(coeffs string) (polynomial, error) {
	var v polynomial
	for k, text := range strings.Split(coeffs, ",") {
		c, err := strconv.ParseFloat(strings.TrimSpace(text), 64)
		if err != nil {
			return nil, fmt.Errorf("-coeffs: c%d is %q; want numbers with commas between, such as 0,0,0.5,-0.5,0.1125", k, text)
		}
		v = append(v, c)
	}
	return v, nil
}

// lattice returns the coarsest block and the number of levels. The tail of the
// bounce falls like e^−mr from the wall on.
func (o options) lattice(w *well, lump field.Lump) (b lattice.Block, levels int, err error) {
	tail := 12.0
	if o.quick {
		tail = 9
	}
	box, h := o.box, o.spacing
	if box == 0 {
		box = lump.Radius + tail
	}
	if h == 0 {
		core := lump.Inside * math.Tanh(lump.Radius/lump.Wall)
		h = min(0.4, lump.Wall/5, 0.6/math.Sqrt(math.Abs(w.shape.slope().slope().at(core))))
	}
	switch most := lump.Wall / 2; {
	case !(box >= lump.Radius+leastTail) || math.IsInf(box, 0):
		return b, 0, fmt.Errorf("-box %g; want a finite number of at least %.3g, the radius and a tail, or 0", o.box, lump.Radius+leastTail)
	case !(h > 0 && h <= most):
		return b, 0, fmt.Errorf("-spacing %g; want a number above 0 and at most %.3g, half of the wall", o.spacing, most)
	}
	sites := math.Ceil(box/h) + 1
	levels = 4
	if o.quick || 8*sites > 420 {
		levels = 3
	}
	if 4*sites > 600 {
		return b, 0, fmt.Errorf("box of %.4g/m at a spacing of %.3g/m: %.0f sites a side on the finest of %d lattices; want at most 600: a larger -spacing or a smaller -box", box, h, 4*sites, levels)
	}
	axis := lattice.Axis{Step: h, Sites: int(sites)}
	b, err = lattice.NewBlock(axis, axis)
	return b, levels, err
}

// leastTail is how much room there must be between wall and rim, in 1/m.
const leastTail = 4

// cut bounds what the rim changes in the action: about the field times its slope
// there, around the plane.
func (w *well) cut(n *bounce) float64 {
	f := w.reach * n.rim * n.history.At(0, 0, 0)
	return 2 * math.Pi * n.history.Block.Space.To() * f * f
}

// describe prints the well.
func (w *well) describe() {
	fmt.Print("An invented metastable field, V =")
	for k, c := range w.potential {
		if c != 0 {
			fmt.Printf(" %+g φ^%d", c, k)
		}
	}
	fmt.Printf("; an idealised model, without prefactor, gravity or temperature.\n")
	fmt.Printf("False vacuum φ = %.10g, V = %.6g, mass m = %.6g; turning point φ = %.6g.\n", w.vacuum, w.potential.at(w.vacuum), w.mass, w.field(1))
	if math.IsNaN(w.truth) {
		fmt.Println("Beyond the turning point V falls for ever.")
	} else {
		fmt.Printf("First minimum beyond: φ = %.10g, V = %.6g.\n", w.field(w.truth), w.potential.at(w.field(w.truth)))
	}
	if w.sides == 2 {
		fmt.Println("There is a way out on both sides; taken is the one whose wall has the lower tension.")
	}
}
