package peak

import (
	"fmt"
	"math"

	"assaywrit/evidence/trace"
)

// A TraceError says why a trace cannot be looked at: fewer than five points, unequal lengths, times that do not increase,
// values that are not finite or out of range.
type TraceError struct {
	ID        string // of the trace
	Index     int    // of the point, counting from 0; -1 where the whole trace is meant
	Got, Want string
}

func (e *TraceError) Error() string {
	where := fmt.Sprintf("trace %q", e.ID)
	if e.Index >= 0 {
		where = fmt.Sprintf("%s, point %d", where, e.Index+1)
	}
	return fmt.Sprintf("%s: got %s, want %s", where, e.Got, e.Want)
}

// An IntervalError says why limits set by hand cannot be used.
type IntervalError struct {
	ID               string // of the trace
	StartMin, EndMin float64
	Points           int // acquired points between them
	Want             string
}

func (e *IntervalError) Error() string {
	return fmt.Sprintf("trace %q: got limits %v to %v min with %d acquired points between them, want %s",
		e.ID, e.StartMin, e.EndMin, e.Points, e.Want)
}

// A ParameterError says which parameter is out of its range. Name is the one written in a method.
type ParameterError struct {
	Name, Got, Want string
}

func (e *ParameterError) Error() string {
	return fmt.Sprintf("%s: got %s, want %s", e.Name, e.Got, e.Want)
}

const (
	minPoints = 5
	// Far beyond any detector, and near enough to 1 that no square or quotient of such values leaves the range of a float64.
	maxCounts  = 1e60
	maxMinutes = 1e9
)

// check returns a *TraceError unless c has at least five points of finite values at increasing times.
func check(c trace.Chromatogram) error {
	n := len(c.TimeMin)
	fail := func(i int, got, want string) error { return &TraceError{c.ID, i, got, want} }
	if len(c.Intensity) != n {
		return fail(-1, fmt.Sprintf("%d times and %d intensities", n, len(c.Intensity)), "as many of one as of the other")
	}
	if n < minPoints {
		return fail(-1, fmt.Sprintf("%d points", n), "at least five")
	}
	// A step too small to divide by, beside the length of the trace, is as good as none.
	least := float64((c.TimeMin[n-1] - c.TimeMin[0]) * 0x1p-40)
	if !(least > 0 && least < maxMinutes) {
		least = 0
	}
	for i, t := range c.TimeMin {
		if !(math.Abs(t) <= maxMinutes) {
			return fail(i, fmt.Sprintf("time %v min", t), "a finite time, at most 1e9 min from zero")
		}
		if !(math.Abs(c.Intensity[i]) <= maxCounts) {
			return fail(i, fmt.Sprintf("intensity %v", c.Intensity[i]), "a finite intensity, at most 1e60 counts from zero")
		}
		if i > 0 && !(t-c.TimeMin[i-1] > least) {
			return fail(i, fmt.Sprintf("time %v min", t), fmt.Sprintf("a time more than %v min after %v min", least, c.TimeMin[i-1]))
		}
	}
	return nil
}
