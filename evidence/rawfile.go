package evidence

import (
	"fmt"
	"math"
	"path"
	"strings"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/formats"
	"assaywrit/evidence/trace/table"
)

// readRaw reads one raw file of the case folder, whatever its format, from src, which its scans go on to use.
func readRaw(name string, src trace.Source, tables []casefile.TableLayout) (*trace.File, error) {
	return formats.Read(name, src, func(name string) (table.Layout, bool) {
		for _, t := range tables {
			if ok, err := path.Match(t.Files, name); err == nil && ok {
				return TableLayout(t), true
			}
		}
		return table.Layout{}, false
	})
}

// findTrace returns the chromatogram of file that follows the wanted transition: by its id where the method gives one,
// otherwise by its ions, within tolMZ on both, and by polarity where both sides state it. Among several that fit, those
// recorded at the expected retention come first, then the nearest ions. It is an error when none fits, or when two fit alike.
func findTrace(name string, file *trace.File, want casefile.Transition, tolMZ, expectedMin float64, what string) (trace.Chromatogram, error) {
	best, bestAway, tied := -1, math.Inf(1), false
	for i, c := range file.Chromatograms {
		away, ok := distance(c, want, tolMZ)
		if !ok {
			continue
		}
		if n := len(c.TimeMin); n == 0 || expectedMin < c.TimeMin[0] || expectedMin > c.TimeMin[n-1] {
			away += 1e6 // recorded elsewhere in the run: only if there is nothing better
		}
		switch {
		case away < bestAway:
			best, bestAway, tied = i, away, false
		case away == bestAway:
			tied = true
		}
	}
	switch {
	case best < 0:
		return trace.Chromatogram{}, &trace.SyntaxError{
			File: name, Got: held(file), Want: fmt.Sprintf("a trace of %s for %s", describe(want, tolMZ), what),
			Hint: "the method's transitions must be those that the instrument recorded; see what a file holds with: assaywrit show FILE",
		}
	case tied:
		return trace.Chromatogram{}, &trace.SyntaxError{
			File: name, Got: "several traces that fit alike", Want: fmt.Sprintf("one trace of %s for %s", describe(want, tolMZ), what),
			Hint: "name the trace in method.yaml with trace_id, or narrow transition_tolerance",
		}
	}
	return file.Chromatograms[best], nil
}

// distance tells whether c may be the wanted transition, and how far off its ions are (m/z, summed).
func distance(c trace.Chromatogram, want casefile.Transition, tolMZ float64) (float64, bool) {
	if want.TraceID != "" {
		return 0, c.ID == want.TraceID
	}
	if want.Polarity != "" && c.Transition.Polarity != "" && want.Polarity != c.Transition.Polarity {
		return 0, false
	}
	dq := math.Abs(c.Transition.PrecursorMZ - want.PrecursorMZ)
	dp := math.Abs(c.Transition.ProductMZ - want.ProductMZ)
	return dq + dp, dq <= tolMZ && dp <= tolMZ
}

func describe(t casefile.Transition, tolMZ float64) string {
	if t.TraceID != "" {
		return fmt.Sprintf("id %q", t.TraceID)
	}
	return fmt.Sprintf("m/z %g → %g (± %g)", t.PrecursorMZ, t.ProductMZ, tolMZ)
}

// held lists a file's traces, the first few of them.
func held(file *trace.File) string {
	if len(file.Chromatograms) == 0 {
		if file.Scans != nil {
			return fmt.Sprintf("%d spectra and no chromatogram", file.Scans.Len())
		}
		return "no chromatogram at all"
	}
	const most = 6
	var names []string
	for i, c := range file.Chromatograms {
		if i == most {
			names = append(names, fmt.Sprintf("and %d more", len(file.Chromatograms)-most))
			break
		}
		if c.Transition.ProductMZ > 0 {
			names = append(names, fmt.Sprintf("%g → %g", c.Transition.PrecursorMZ, c.Transition.ProductMZ))
		} else {
			names = append(names, fmt.Sprintf("%q", c.ID))
		}
	}
	return "traces of " + strings.Join(names, ", ")
}
