package integrate_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
)

// One step on 4 096 sites: ns a site, and no allocation.
func BenchmarkStep(b *testing.B) {
	const sites = 4096
	for _, d := range []struct {
		name      string
		potential action.Potential
	}{{"phi4", action.Phi4{}}, {"sineGordon", action.SineGordon{}}} {
		for _, m := range methods {
			b.Run(d.name+"/"+m.Name(), func(b *testing.B) {
				line := span(-200, 400, sites-1)
				s := discrete(b, span(0, 0.05*1e6, 1_000_000), line, action.Wave{Potential: d.potential})
				start := field.NewState(1, sites)
				for i := range sites {
					start.Field.Data[i] = math.Tanh(line.At(i))
				}
				st, err := m.Start(integrate.Problem{Action: s, Start: start})
				if err != nil {
					b.Fatal(err)
				}
				b.ReportAllocs()
				for b.Loop() {
					st.Step()
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/sites, "ns/site")
			})
		}
	}
}
