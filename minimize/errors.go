package minimize

import "fmt"

// A NotConverged is the error of a solve that did not reach its tolerance. The
// best history and the report are in Found, which the solver returns as well.
type NotConverged struct {
	Found *Found
	Cause error // the error of the context or of the factorisation, if any
}

func (e *NotConverged) Error() string {
	r := e.Found.Report
	return fmt.Sprintf("minimize: %s %v after %d steps: %s; max %.3g at %v, want at most %.3g",
		r.Problem, r.Status, r.Iterations, r.Reason, r.After.Max, r.After.At, r.Tolerance)
}

// Unwrap returns the cause.
func (e *NotConverged) Unwrap() error { return e.Cause }

// A Refusal is the error of a problem that the solver cannot be asked to solve.
type Refusal struct {
	Problem string // least residual, minimum, stationary, saddle
	Why     string // what is refused and what would be right
	Cause   error  // a *action.NoActionError, if losses or open ends are why
}

func (e *Refusal) Error() string { return fmt.Sprintf("minimize: %s refused: %s", e.Problem, e.Why) }

// Unwrap returns the cause.
func (e *Refusal) Unwrap() error { return e.Cause }

// A TooLarge is the error of a factorisation that exceeds a limit of the
// settings.
type TooLarge struct {
	Unknowns, Front     int // unknowns, and of them in the largest front
	Bytes, Flops        float64
	Memory, Work        float64 // the limits
	problem, suggestion string
}

func (e *TooLarge) Error() string {
	return fmt.Sprintf("minimize: %s: factor of %d unknowns with a front of %d needs %.2g bytes and %.2g operations, above the limits of %.2g and %.2g; %s",
		e.problem, e.Unknowns, e.Front, e.Bytes, e.Flops, e.Memory, e.Work, e.suggestion)
}
