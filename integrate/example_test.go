package integrate_test

import (
	"context"
	"errors"
	"fmt"
	"log"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// A sine-Gordon kink at half the speed of light.
func ExampleEvolve() {
	clock := lattice.Axis{Step: 0.08, Sites: 501}
	line := lattice.Axis{From: -40, Step: 0.1, Sites: 801}
	s, err := action.New(lattice.Block{Time: clock, Space: line}, action.Wave{Potential: action.SineGordon{}})
	if err != nil {
		log.Fatal(err)
	}
	kink, err := field.SineGordonKink(field.Moving{At: -10, Speed: 0.5})
	if err != nil {
		log.Fatal(err)
	}
	ledger := &integrate.Ledger{}
	run, err := integrate.Evolve(context.Background(), s, kink.On(line, 0), integrate.Settings{
		Every:     10,
		Observers: []integrate.Observer{ledger},
	})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println("slices recorded:", run.History.Block.Slices())
	fmt.Printf("off the exact kink at t = %g: %.2f\n", run.Time, run.Final.Field.MaxDifference(kink.On(line, run.Time).Field))
	fmt.Printf("energy %.3f, kept to 1e-6: %v\n", ledger.Entries[0].Energy.Total(), ledger.Drift() < 1e-6)
	// Output:
	// slices recorded: 51
	// off the exact kink at t = 40: 0.02
	// energy 9.236, kept to 1e-6: true
}

// A step too long is refused, and the error knows which would do.
func ExampleUnstable() {
	block := lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 11}, Space: lattice.Axis{Step: 0.1, Sites: 41}}
	s, err := action.New(block, action.Wave{Potential: action.SineGordon{}})
	if err != nil {
		log.Fatal(err)
	}
	_, err = integrate.Evolve(context.Background(), s, field.NewState(1, 41), integrate.Settings{})
	var unstable *integrate.Unstable
	if errors.As(err, &unstable) {
		fmt.Printf("kω = %.4f, want k ≤ %.4f\n", unstable.Step*unstable.Omega, unstable.Largest)
	}
	// Output: kω = 2.0025, want k ≤ 0.0999
}

// One fluxon on a ring under bias and loss: the voltage gives its speed.
func ExampleMeanRate() {
	const length = 40.0
	ring := lattice.Axis{Step: 0.1, Sites: 400, Periodic: true, Jump: []float64{2 * math.Pi}}
	s, err := action.New(lattice.Block{Time: lattice.Axis{Step: 0.05, Sites: 4801}, Space: ring}, action.Wave{
		Potential: action.SineGordon{},
		Source:    action.Uniform(0.3),
		Alpha:     action.Uniform(0.1),
		Links:     action.Sixth,
	})
	if err != nil {
		log.Fatal(err)
	}
	kink, err := field.SineGordonKink(field.Moving{At: 20, Speed: -0.9})
	if err != nil {
		log.Fatal(err)
	}
	voltage := &integrate.MeanRate{From: 200, Every: 10}
	_, err = integrate.Evolve(context.Background(), s, field.Superpose(math.Asin(0.3), kink).On(ring, 0), integrate.Settings{
		Method: integrate.RK4{}, Every: -1, Observers: []integrate.Observer{voltage},
	})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("speed %.4f\n", voltage.Value()*length/(2*math.Pi))
	// Output: speed 0.9225
}

// A run ends when a front has arrived.
func ExampleWatch() {
	line := lattice.Axis{From: -20, Step: 0.1, Sites: 401}
	s, err := action.New(lattice.Block{Time: lattice.Axis{Step: 0.05, Sites: 2001}, Space: line}, action.Wave{Potential: action.SineGordon{}})
	if err != nil {
		log.Fatal(err)
	}
	kink, err := field.SineGordonKink(field.Moving{At: -10, Speed: 0.5})
	if err != nil {
		log.Fatal(err)
	}
	target, err := line.Index(5)
	if err != nil {
		log.Fatal(err)
	}
	arrived := integrate.Watch{Do: func(m *integrate.Moment) error {
		if m.Field().At(0, target) < math.Pi {
			return fmt.Errorf("the kink is at x = %g: %w", line.At(target), integrate.Stop)
		}
		return nil
	}}
	run, err := integrate.Evolve(context.Background(), s, kink.On(line, 0), integrate.Settings{Every: -1, Observers: []integrate.Observer{arrived}})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(run.Stopped)
	fmt.Printf("t = %.1f\n", run.Time)
	// Output:
	// the kink is at x = 5: stop asked for
	// t = 30.1
}

// A run that was stopped goes on to the same bits.
func ExampleCheckpoint() {
	line := lattice.Axis{From: -10, Step: 0.2, Sites: 101}
	s, err := action.New(lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 201}, Space: line}, action.Wave{Potential: action.Phi4{}})
	if err != nil {
		log.Fatal(err)
	}
	kink, err := field.Phi4Kink(field.Moving{Speed: 0.2})
	if err != nil {
		log.Fatal(err)
	}
	start := kink.On(line, 0)
	whole, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{})
	if err != nil {
		log.Fatal(err)
	}

	pause := integrate.Watch{Do: func(m *integrate.Moment) error {
		if m.Slice == 120 {
			return integrate.Stop
		}
		return nil
	}}
	first, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{Observers: []integrate.Observer{pause}})
	if err != nil {
		log.Fatal(err)
	}
	second, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{Resume: first.Checkpoint})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(first.Steps, "steps, then", second.Steps)
	fmt.Println("difference:", second.Final.Field.MaxDifference(whole.Final.Field))
	// Output:
	// 120 steps, then 80
	// difference: 0
}
