// Package fullscan takes ion traces and spectra at a peak from full-scan data (trace.Scans). Times are in minutes, m/z as the files
// give them, intensities as acquired. The results do not depend on how many goroutines work on them.
package fullscan

import (
	"fmt"
	"math"

	"assaywrit/evidence/trace"
)

// A Filter chooses scans. The zero value takes all.
type Filter struct {
	MSLevel        int            // 0: any
	Polarity       trace.Polarity // "": any; a scan whose file does not say is taken too
	PrecursorMZ    float64        // 0: any
	PrecursorTolMZ float64        // around PrecursorMZ, both ends included
	StartMin       float64        // both ends are included; EndMin 0: no limit
	EndMin         float64
}

// takes tells whether a scan is chosen.
func (f Filter) takes(s trace.Scan) bool {
	switch {
	case f.MSLevel > 0 && s.MSLevel > 0 && s.MSLevel != f.MSLevel,
		f.MSLevel > 1 && s.MSLevel == 0,
		f.Polarity != "" && s.Polarity != "" && s.Polarity != f.Polarity,
		f.PrecursorMZ > 0 && !(math.Abs(s.PrecursorMZ-f.PrecursorMZ) <= f.PrecursorTolMZ),
		s.TimeMin < f.StartMin,
		f.EndMin > 0 && s.TimeMin > f.EndMin:
		return false
	}
	return true
}

// choose lists the chosen scans. Two of them at the same time, or one that goes back, are an error: they would be two series.
func (f Filter) choose(scans trace.Scans) ([]int, error) {
	var list []int
	for i := range scans.Len() {
		s := scans.Scan(i)
		if !f.takes(s) {
			continue
		}
		if n := len(list); n > 0 && s.TimeMin <= scans.Scan(list[n-1]).TimeMin {
			return nil, fmt.Errorf("the scan %q at %g min after %q at %g min: want scans in order of time; choose one series by its MS level, polarity or precursor",
				s.ID, s.TimeMin, scans.Scan(list[n-1]).ID, scans.Scan(list[n-1]).TimeMin)
		}
		list = append(list, i)
	}
	return list, nil
}

// A Window is a range of m/z, both ends included.
type Window struct{ Low, High float64 }

// Around is the window of mz ± tolerance.
func Around(mz, tolerance float64) Window { return Window{mz - tolerance, mz + tolerance} }

// AroundPPM is the window of mz ± ppm millionths of it.
func AroundPPM(mz, ppm float64) Window { return Around(mz, float64(mz*ppm)/1e6) }
