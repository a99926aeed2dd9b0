package refine

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
	"strings"
	"text/tabwriter"

	"github.com/tenter-go/tenter/lattice"
)

// A Table is the outcome of a Study: one estimate a quantity, in the order in
// which the measure gave them.
type Table struct {
	Blocks    []lattice.Block // of every level that was measured, coarse to fine
	Estimates []Estimate
}

// Get returns the estimate of a name, if there is one.
func (t *Table) Get(name string) (Estimate, bool) {
	for _, e := range t.Estimates {
		if e.Name == name {
			return e, true
		}
	}
	return Estimate{}, false
}

// Results returns the estimates as results.
func (t *Table) Results() []Result {
	rs := make([]Result, len(t.Estimates))
	for j, e := range t.Estimates {
		rs[j] = e.Result()
	}
	return rs
}

// WriteTo prints the table for a terminal: a line a quantity, with its value
// at every level under the spacing of that level, the observed order, the value
// with its error bar and, where there is no bar, the reason.
func (t *Table) WriteTo(w io.Writer) (int64, error) {
	var text strings.Builder
	tw := tabwriter.NewWriter(&text, 0, 0, 2, ' ', 0)
	fmt.Fprint(tw, "quantity")
	for _, b := range t.Blocks {
		fmt.Fprintf(tw, "\th=%.4g k=%.4g", b.Space.Step, b.Time.Step)
	}
	fmt.Fprint(tw, "\torder\tvalue\tunit\tstatus\n")
	for _, e := range t.Estimates {
		fmt.Fprint(tw, e.Name)
		for _, v := range e.Values {
			fmt.Fprintf(tw, "\t%.8g", v)
		}
		order := "-"
		if !math.IsNaN(e.Order) {
			order = fmt.Sprintf("%.2f", e.Order)
		}
		status := e.Status.String()
		if e.Reason != "" {
			status = "no error bar: " + e.Reason
		}
		fmt.Fprintf(tw, "\t%s\t%s\t%s\t%s\n", order, e.Result().number(), e.Unit, status)
	}
	tw.Flush()
	n, err := io.WriteString(w, text.String())
	return int64(n), err
}

// String returns what WriteTo prints.
func (t *Table) String() string {
	var text strings.Builder
	t.WriteTo(&text)
	return text.String()
}

// A Result is a named number with its error bar, in the form in which programs
// write it to a file: {"name", "value", "error", "unit"}. In JSON a number that
// is not finite, such as the error that nobody knows, is null.
type Result struct {
	Name  string
	Value float64
	Error float64 // NaN if unknown
	Unit  string
}

// Result returns the name, the best value, its error bar and the unit.
func (e Estimate) Result() Result {
	return Result{Name: e.Name, Value: e.Value, Error: e.Error, Unit: e.Unit}
}

// String returns the result as name = value ± error unit, the value rounded to
// the second digit of its error.
func (r Result) String() string {
	s := r.Name + " = " + r.number()
	if r.Unit != "" {
		s += " " + r.Unit
	}
	return s
}

func (r Result) number() string {
	switch {
	case math.IsNaN(r.Error):
		return fmt.Sprintf("%.8g ± ?", r.Value)
	case r.Error == 0 || math.IsInf(r.Error, 0) || math.IsNaN(r.Value-r.Value):
		return fmt.Sprintf("%.15g ± %g", r.Value, r.Error)
	}
	// Digits of the value down to the second of the error.
	top := math.Floor(math.Log10(math.Max(math.Abs(r.Value), r.Error)))
	digits := int(top-math.Floor(math.Log10(r.Error))) + 2
	return fmt.Sprintf("%.*g ± %.2g", min(digits, 17), r.Value, r.Error)
}

// wire is the form of a result in JSON.
type wire struct {
	Name  string   `json:"name"`
	Value *float64 `json:"value"`
	Error *float64 `json:"error"`
	Unit  string   `json:"unit"`
}

// MarshalJSON writes {"name": …, "value": …, "error": …, "unit": …}.
func (r Result) MarshalJSON() ([]byte, error) {
	finite := func(x float64) *float64 {
		if math.IsNaN(x - x) {
			return nil
		}
		return &x
	}
	return json.Marshal(wire{r.Name, finite(r.Value), finite(r.Error), r.Unit})
}

// UnmarshalJSON reads what MarshalJSON writes, null as NaN.
func (r *Result) UnmarshalJSON(data []byte) error {
	var w wire
	if err := json.Unmarshal(data, &w); err != nil {
		return err
	}
	number := func(p *float64) float64 {
		if p == nil {
			return math.NaN()
		}
		return *p
	}
	*r = Result{w.Name, number(w.Value), number(w.Error), w.Unit}
	return nil
}
