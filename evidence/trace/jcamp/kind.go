package jcamp

import (
	"fmt"
	"strings"
)

// A kind is what sort of data a table holds.
type kind int

const (
	chromatogram kind = iota + 1
	massSpectrum
)

// kind tells what a table holds, by its ##DATA TYPE=. Kinds that are neither chromatograms nor mass spectra are refused.
func (r *reader) kind(t *Table) (kind, error) {
	what := squeezed(t.DataType)
	switch {
	case strings.Contains(what, "MASSSPECTRUM"):
		return massSpectrum, nil
	case strings.Contains(what, "CHROMATOGRA"):
		return chromatogram, nil
	case what == "" && t.massSpectrumIf:
		r.warnings.add("no-data-type", "the block has no ##DATA TYPE=; its ##MASS_RANGE= and ##IONIZATION_MODE= are records of mass spectra")
		return massSpectrum, nil
	case timeUnit(t.XUnits) != "":
		for _, detector := range []string{"GC", "LC", "HPLC", "UHPLC", "UV"} { // a trace over time
			if rest, found := strings.CutPrefix(what, detector); found && !strings.Contains(rest, "NMR") {
				return chromatogram, nil
			}
		}
	}
	got := fmt.Sprintf("data of the type %q over %q", clip(t.DataType), clip(t.XUnits))
	if what == "" {
		got = "data without ##DATA TYPE="
	}
	return 0, r.refuse(t.Line, 1, got, "a chromatogram or mass spectra", spectraHint)
}

// ofMass tells whether a unit, if there is one, is that of mass to charge.
func ofMass(unit string) bool {
	switch strings.Trim(squeezed(unit), ".()") {
	case "", "MZ", "ME", "M", "MASS", "MASSCHARGE", "MASSTOCHARGE", "AMU", "U", "DA", "DALTON", "DALTONS", "TH", "THOMSON":
		return true
	}
	return false
}
