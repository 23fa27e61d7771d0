package evidence

import (
	"fmt"
	"runtime"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/fullscan"
)

// ionAlgorithm names the rule by which ion traces are taken from spectra (fullscan.Extract).
const ionAlgorithm = "ion-window@1"

// An ionTrace is one that the method wants, with what it becomes in a file.
type ionTrace struct {
	filter fullscan.Filter
	ion    fullscan.Ion
	rule   Extraction
	want   trace.Transition
}

// ionTraceOf puts the method's words into the extractor's.
func ionTraceOf(t casefile.Transition, tolMZ float64) ionTrace {
	x := t.Ion
	out := ionTrace{want: t.Transition}
	out.ion.Combine = fullscan.Combine(x.Combine)
	if x.TolerancePPM != nil {
		out.ion.Window = fullscan.AroundPPM(x.MZ, *x.TolerancePPM)
	} else {
		out.ion.Window = fullscan.Around(x.MZ, *x.ToleranceMZ)
	}
	out.filter = fullscan.Filter{MSLevel: 1, Polarity: t.Polarity}
	if t.PrecursorMZ > 0 {
		out.filter.MSLevel, out.filter.PrecursorMZ, out.filter.PrecursorTolMZ = 2, t.PrecursorMZ, tolMZ
	}
	if x.FromMin != nil {
		out.filter.StartMin = *x.FromMin
	}
	if x.ToMin != nil {
		out.filter.EndMin = *x.ToMin
	}
	out.rule = Extraction{Algorithm: ionAlgorithm, LowMZ: out.ion.Window.Low, HighMZ: out.ion.Window.High, Combine: x.Combine, MSLevel: out.filter.MSLevel,
		FromMin: x.FromMin, ToMin: x.ToMin}
	out.want.ProductMZ = 0
	if t.PrecursorMZ > 0 {
		out.want.ProductMZ = x.MZ
	} else {
		out.want.PrecursorMZ = x.MZ
	}
	return out
}

// id names the trace: the file has no name for it.
func (x *ionTrace) id() string {
	id := fmt.Sprintf("m/z %g to %g, %s, MS%d", x.ion.Window.Low, x.ion.Window.High, x.ion.Combine, x.filter.MSLevel)
	if x.filter.PrecursorMZ > 0 {
		id += fmt.Sprintf(" of %g", x.filter.PrecursorMZ)
	}
	if x.filter.Polarity != "" {
		id += ", " + string(x.filter.Polarity)
	}
	if x.filter.StartMin > 0 || x.filter.EndMin > 0 {
		id += fmt.Sprintf(", %g to %g min", x.filter.StartMin, x.filter.EndMin)
	}
	return id
}

// extractAll takes every ion trace of the method from a file, in one pass over the spectra for those that share a filter.
func extractAll(name string, file *trace.File, m *casefile.Method) (map[string]trace.Chromatogram, error) {
	var wanted []ionTrace
	for _, t := range m.Transitions() {
		if t.Ion != nil {
			wanted = append(wanted, ionTraceOf(t, m.Identification.TransitionTolMZ))
		}
	}
	if len(wanted) == 0 {
		return nil, nil
	}
	if file.Scans == nil {
		return nil, &trace.SyntaxError{File: name, Got: held(file), Want: "spectra, as the method takes ion traces from them", Hint: "see what a file holds with: assaywrit show FILE"}
	}
	out := map[string]trace.Chromatogram{}
	for i := range wanted {
		var ions []fullscan.Ion
		var same []*ionTrace
		for k := i; k < len(wanted); k++ {
			if _, done := out[wanted[k].id()]; !done && wanted[k].filter == wanted[i].filter {
				ions, same = append(ions, wanted[k].ion), append(same, &wanted[k])
			}
		}
		if len(ions) == 0 {
			continue
		}
		traces, err := fullscan.Extract(file.Scans, wanted[i].filter, ions, runtime.GOMAXPROCS(0))
		if err != nil {
			return nil, fileError(name, err)
		}
		for k, x := range same {
			c := trace.Chromatogram{ID: x.id(), Kind: trace.SIM, Transition: x.want, TimeMin: traces.TimeMin, Intensity: traces.Intensity[k]}
			if len(c.TimeMin) == 0 {
				return nil, &trace.SyntaxError{File: name, Got: "no spectrum", Want: "spectra for " + x.id(), Hint: "see what a file holds with: assaywrit show FILE"}
			}
			if b := c.Check(); b != nil {
				return nil, &trace.SyntaxError{File: name, Got: fmt.Sprintf("%s at point %d of %s", b.Got, b.Point, c.ID), Want: b.Want}
			}
			out[c.ID] = c
		}
	}
	return out, nil
}

// fileError says which file an error is about, unless it says so itself.
func fileError(name string, err error) error {
	if _, ok := err.(*trace.SyntaxError); ok {
		return err
	}
	return fmt.Errorf("%s: %w", name, err)
}
