package jcamp

import (
	"fmt"
	"slices"
	"sort"
	"strings"

	"assaywrit/evidence/trace"
)

// A scanList are the mass spectra of a file.
type scanList struct {
	held    trace.HeldScans
	untimed int // without a retention time
	line    int // of the first of them
}

// add makes a table a scan. Its numbers are taken over, not copied.
func (l *scanList) add(r *reader, t *Table) error {
	spectrum, err := r.spectrum(t)
	if err != nil {
		return err
	}
	s := trace.Scan{ID: t.scan, Points: len(t.X), TotalIon: t.totalIon, Polarity: polarity(t.facts.ionization), Mode: mode(t)}
	if s.ID = clip(s.ID); s.ID == "" {
		s.ID = fmt.Sprint(len(l.held.Headers) + 1)
	}
	if !t.retention.given {
		if l.untimed == 0 {
			l.line = t.Line
		}
		l.untimed++
	} else {
		var stated bool
		if s.TimeMin, stated = t.retention.minutes(); !stated {
			r.warnings.add("time-unit", "line %d: the retention time %g has no unit and is taken as seconds, the default of the protocol", t.retention.line, t.retention.value)
		}
		if n := len(l.held.Headers); n > 0 && l.untimed == 0 && s.TimeMin < l.held.Headers[n-1].TimeMin {
			return r.refuse(t.retention.line, 1, fmt.Sprintf("a retention time of %g min", s.TimeMin), fmt.Sprintf("one not before %g min", l.held.Headers[n-1].TimeMin), exportHint)
		}
	}
	if l.held.Headers == nil {
		l.held.Headers, l.held.Spectra = make([]trace.Scan, 0, len(r.tables)), make([]trace.Spectrum, 0, len(r.tables))
	}
	l.held.Headers = append(l.held.Headers, s)
	l.held.Spectra = append(l.held.Spectra, spectrum)
	return nil
}

// check refuses several spectra of which not all have a time.
func (l *scanList) check(r *reader) error {
	if n := len(l.held.Headers); l.untimed > 0 && n > 1 {
		return r.refuse(l.line, 1, fmt.Sprintf("%d mass spectra, %d of them without a retention time", n, l.untimed), "a ##.RETENTION TIME= or ##PAGE= T= for each", spectraHint)
	}
	return nil
}

// spectrum takes the points of a mass spectrum, in ascending order of m/z.
func (r *reader) spectrum(t *Table) (trace.Spectrum, error) {
	s := trace.Spectrum{MZ: t.X, Intensity: t.Y}
	if !ofMass(t.XUnits) {
		return s, r.refuse(t.Line, 1, fmt.Sprintf("a mass spectrum over %q", clip(t.XUnits)), "one over M/Z", "")
	}
	if !slices.IsSorted(s.MZ) {
		// Falling abscissae with a step are as good as rising ones.
		if !strings.Contains(t.Form, "++") {
			r.warnings.add("mz-order", "line %d: the m/z of the spectrum do not ascend and were sorted", t.Line)
		}
		sort.Stable(byMZ(s))
	}
	if len(s.MZ) > 0 && s.MZ[0] < 0 {
		return s, r.refuse(t.Line, 1, fmt.Sprintf("an m/z of %g", s.MZ[0]), "none below 0", exportHint)
	}
	return s, nil
}

type byMZ trace.Spectrum

func (s byMZ) Len() int           { return len(s.MZ) }
func (s byMZ) Less(i, j int) bool { return s.MZ[i] < s.MZ[j] }
func (s byMZ) Swap(i, j int) {
	s.MZ[i], s.MZ[j] = s.MZ[j], s.MZ[i]
	s.Intensity[i], s.Intensity[j] = s.Intensity[j], s.Intensity[i]
}

// polarity of an ionization mode such as EI+ or ESI-.
func polarity(ionization string) trace.Polarity {
	switch {
	case strings.HasSuffix(ionization, "+"):
		return trace.Positive
	case strings.HasSuffix(ionization, "-"):
		return trace.Negative
	}
	return ""
}

// mode tells peaks from profiles where the file does.
func mode(t *Table) trace.Mode {
	switch {
	case strings.Contains(t.Form, "++"):
		return trace.Profile
	case t.known == labelPeakTable || t.known == labelPeakAssignments || squeezed(t.facts.dataClass) == "PEAKTABLE":
		return trace.Centroid
	}
	return ""
}
