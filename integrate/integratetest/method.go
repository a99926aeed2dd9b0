package integratetest

import (
	"errors"
	"fmt"

	"github.com/tenter-go/tenter/integrate"
)

// Claims says what a method promises. The zero value is a method of second
// order that may refuse whatever a method may refuse.
type Claims struct {
	Order      int  // of the error in the step k, on a fixed lattice; 0 means 2
	Reversible bool // with the rate reversed it runs back, to rounding
	Symplectic bool // the map of one step is, and the energy does not drift

	// What must be accepted. If false it may be refused.
	Losses bool // α, β and open ends
	Pair   bool // a given second slice
	Tables bool // coefficients known at the slices of the block only
}

// Slack is by how much the measured order may miss the claimed one. At the
// steps used, a third or less of the limit, the next term of the error changes
// the slope by about a tenth; the next lower order misses by one.
const Slack = 0.3

// Method checks a method against the contracts of [integrate.Method] and
// [integrate.Stepper] and against its claims. It returns nil, or one joined
// error with a line for each fault.
func Method(m integrate.Method, c Claims) error {
	if m == nil {
		return errors.New("integratetest: method is nil")
	}
	if c.Order == 0 {
		c.Order = 2
	}
	e := examiner{m: m, claims: c}
	if c.Order < 1 {
		e.fault("claims", "order %d; want at least 1", c.Order)
		return errors.Join(e.faults...)
	}
	if m.Name() == "" {
		e.fault("name", "is empty; want the published name")
	}
	if x := m.Limit(); !(x > 0) {
		e.fault("limit", "is %v; want the largest stable kω, above 0", x)
		return errors.Join(e.faults...)
	}
	e.order()
	e.limit()
	e.restart()
	e.manners()
	e.pair()
	if c.Reversible {
		e.reversible()
	}
	if c.Symplectic {
		e.symplectic()
		e.drift()
	}
	return errors.Join(e.faults...)
}

// An examiner collects the faults of one method.
type examiner struct {
	m      integrate.Method
	claims Claims
	faults []error
}

func (e *examiner) fault(subject, format string, args ...any) {
	e.faults = append(e.faults, fmt.Errorf("integratetest: %s: %s: %s", e.m.Name(), subject, fmt.Sprintf(format, args...)))
}

// start starts the method on a problem that it may not refuse, and notes a
// fault if it does.
func (e *examiner) start(subject string, p integrate.Problem) integrate.Stepper {
	st, err := e.m.Start(p)
	if err != nil {
		e.fault(subject, "refused: %v", err)
		return nil
	}
	return st
}

// part is the step as a share of the stability limit at which accuracy is
// measured: kω = part·Limit.
const part = 0.3

// reach returns kω for a share of the limit; methods without a limit are
// measured as if it were 2.
func (e *examiner) reach(share float64) float64 { return share * min(e.m.Limit(), 2) }
