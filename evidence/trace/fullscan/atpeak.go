package fullscan

import (
	"fmt"
	"math"
	"slices"

	"assaywrit/evidence/trace"
)

// A Taken spectrum says which scans it comes from.
type Taken struct {
	Spectrum   trace.Spectrum
	Scans      []string // ids
	FromMin    float64  // times of the first and the last of them
	ToMin      float64
	Background []string // ids of the scans that were subtracted
}

// A Span is a stretch of time, both ends included.
type Span struct {
	StartMin float64 `json:"start_min"`
	EndMin   float64 `json:"end_min"`
}

// Apex returns the spectrum of the chosen scan nearest to a time; of two as near, the earlier.
func Apex(scans trace.Scans, f Filter, atMin float64) (*Taken, error) {
	chosen, err := f.choose(scans)
	if err != nil {
		return nil, err
	}
	if len(chosen) == 0 {
		return nil, fmt.Errorf("no scan for a spectrum at %g min", atMin)
	}
	best := chosen[0]
	for _, i := range chosen {
		if math.Abs(scans.Scan(i).TimeMin-atMin) < math.Abs(scans.Scan(best).TimeMin-atMin) {
			best = i
		}
	}
	return mean(scans, []int{best}, 0)
}

// Average returns the mean spectrum of the chosen scans in a span. Centroids of different scans within tolMZ of their neighbour
// count as one peak, at the mean of their m/z weighted by intensity; a scan without it counts as 0. Profile spectra are averaged
// point by point and must have the same m/z.
func Average(scans trace.Scans, f Filter, s Span, tolMZ float64) (*Taken, error) {
	chosen, err := inside(scans, f, s)
	if err != nil {
		return nil, err
	}
	return mean(scans, chosen, tolMZ)
}

func inside(scans trace.Scans, f Filter, s Span) ([]int, error) {
	f.StartMin, f.EndMin = max(f.StartMin, s.StartMin), s.EndMin
	chosen, err := f.choose(scans)
	if err == nil && len(chosen) == 0 {
		err = fmt.Errorf("no scan between %g and %g min", s.StartMin, s.EndMin)
	}
	return chosen, err
}

// Subtract takes the mean spectrum of the background spans from a spectrum: each of its peaks within tolMZ of a peak in t, the nearest.
// What falls to 0 or below is left out; what only the background has changes nothing.
func (t *Taken) Subtract(scans trace.Scans, f Filter, background []Span, tolMZ float64) error {
	var chosen []int
	for _, s := range background {
		list, err := inside(scans, f, s)
		if err != nil {
			return err
		}
		chosen = append(chosen, list...)
	}
	slices.Sort(chosen)
	chosen = slices.Compact(chosen)
	if len(chosen) == 0 {
		return nil
	}
	under, err := mean(scans, chosen, tolMZ)
	if err != nil {
		return err
	}
	y := slices.Clone(t.Spectrum.Intensity)
	for i, mz := range under.Spectrum.MZ {
		if k := nearest(t.Spectrum.MZ, mz, tolMZ); k >= 0 {
			y[k] -= under.Spectrum.Intensity[i]
		}
	}
	var left trace.Spectrum
	for k, v := range y {
		if v > 0 {
			left.MZ, left.Intensity = append(left.MZ, t.Spectrum.MZ[k]), append(left.Intensity, v)
		}
	}
	t.Spectrum, t.Background = left, under.Scans
	return nil
}

// nearest returns the point nearest to mz within tolMZ, or -1.
func nearest(list []float64, mz, tolMZ float64) int {
	i, best := search(list, mz, false), -1
	for _, k := range []int{i - 1, i} {
		if k >= 0 && k < len(list) && math.Abs(list[k]-mz) <= tolMZ && (best < 0 || math.Abs(list[k]-mz) < math.Abs(list[best]-mz)) {
			best = k
		}
	}
	return best
}

// mean averages scans.
func mean(scans trace.Scans, chosen []int, tolMZ float64) (*Taken, error) {
	t := &Taken{FromMin: scans.Scan(chosen[0]).TimeMin, ToMin: scans.Scan(chosen[len(chosen)-1]).TimeMin}
	var all []trace.Spectrum
	profile := false
	r := scans.Open()
	for _, i := range chosen {
		mz, err := r.MZ(i)
		if err != nil {
			return nil, err
		}
		y, err := r.Intensity(i)
		if err != nil {
			return nil, err
		}
		all = append(all, trace.Spectrum{MZ: slices.Clone(mz), Intensity: slices.Clone(y)})
		t.Scans = append(t.Scans, scans.Scan(i).ID)
		profile = profile || scans.Scan(i).Mode == trace.Profile
	}
	switch {
	case len(all) == 1:
		t.Spectrum = all[0]
	case profile:
		var err error
		if t.Spectrum, err = meanProfile(all); err != nil {
			return nil, err
		}
	default:
		t.Spectrum = meanCentroids(all, tolMZ)
	}
	return t, nil
}

func meanProfile(all []trace.Spectrum) (trace.Spectrum, error) {
	out := trace.Spectrum{MZ: all[0].MZ, Intensity: slices.Clone(all[0].Intensity)}
	for _, s := range all[1:] {
		if !slices.Equal(s.MZ, out.MZ) {
			return trace.Spectrum{}, fmt.Errorf("profile spectra with different m/z, want the same in each to average them; take the spectrum at the apex, or export centroids")
		}
		for i, y := range s.Intensity {
			out.Intensity[i] += y
		}
	}
	for i := range out.Intensity {
		out.Intensity[i] /= float64(len(all))
	}
	return out, nil
}

func meanCentroids(all []trace.Spectrum, tolMZ float64) trace.Spectrum {
	type point struct{ mz, y float64 }
	var points []point
	for _, s := range all {
		for i, mz := range s.MZ {
			points = append(points, point{mz, s.Intensity[i]})
		}
	}
	slices.SortStableFunc(points, func(a, b point) int {
		switch {
		case a.mz < b.mz:
			return -1
		case a.mz > b.mz:
			return 1
		}
		return 0
	})
	var out trace.Spectrum
	for from := 0; from < len(points); {
		to := from + 1
		for to < len(points) && points[to].mz-points[to-1].mz <= tolMZ {
			to++
		}
		sum, moment := 0.0, 0.0
		for _, p := range points[from:to] {
			sum += p.y
			moment += float64((p.mz - points[from].mz) * p.y)
		}
		mz := points[from].mz
		if sum > 0 {
			mz += min(max(moment/sum, 0), points[to-1].mz-points[from].mz)
		}
		out.MZ, out.Intensity = append(out.MZ, mz), append(out.Intensity, sum/float64(len(all)))
		from = to
	}
	return out
}
