package peak

import (
	"fmt"
	"math"

	"assaywrit/evidence/trace"
)

// System is what of the separation system the figures need. 0 stands for not known.
type System struct {
	VoidMin         float64 // time of what is not retained, measured or stated
	ColumnLengthMM  float64
	PeakToPeakNoise float64 // h of PeakToPeak, counts
}

// Figures are the figures of merit of one peak. What cannot be had is absent.
//
// Source: USP <621> and Ph. Eur. 2.2.46, harmonised text, for widths, symmetry, plate number, retention factor and 2H/h; moments: E.
// Grushka, M. N. Myers, P. D. Schettler, J. C. Giddings, Anal. Chem. 41 (1969) 889 (from memory).
type Figures struct {
	RetentionMin    float64  `json:"retention_min"`
	Height          float64  `json:"height_counts"`
	WidthHalfMin    *float64 `json:"width_half_min,omitempty"`
	WidthBaseMin    *float64 `json:"width_base_min,omitempty"` // between the tangents at the steepest points, on the baseline
	Width5PctMin    *float64 `json:"width_5pct_min,omitempty"`
	Symmetry        *float64 `json:"symmetry_5pct,omitempty"`    // (a+b)/2a at 5 % of the height
	PlatesHalf      *float64 `json:"plates_half,omitempty"`      // 5.54 (tR/wh)²
	PlatesBase      *float64 `json:"plates_base,omitempty"`      // 16 (tR/wb)²
	PlatesMoments   *float64 `json:"plates_moments,omitempty"`   // M1²/M2
	PlateHeightMM   *float64 `json:"plate_height_mm,omitempty"`  // column length over PlatesHalf
	RetentionFactor *float64 `json:"retention_factor,omitempty"` // (tR−tM)/tM
	SignalToNoise   *float64 `json:"signal_to_noise_2h,omitempty"`
	MeanMin         *float64 `json:"moment_1_min,omitempty"`  // M1, over the limits of the peak
	VarianceMin2    *float64 `json:"moment_2_min2,omitempty"` // M2, central
	PointsAboveHalf int      `json:"points_above_half"`
}

// FiguresOf measures p, a peak of c above its straight baseline. 5 % widths and symmetry are left out where a signal-to-noise
// ratio of Height/Noise below 20 loses them, widths where a valley hides them; moments, which tails and noise at the limits move
// most, where the area is not above zero or an end is at a valley or cut.
//
// The error is a *TraceError, an *IntervalError or a *ParameterError.
func FiguresOf(c trace.Chromatogram, p *Peak, s System) (*Figures, error) {
	left, right, err := interval(c, p.StartMin, p.EndMin)
	if err != nil {
		return nil, err
	}
	for _, v := range []struct {
		name  string
		value float64
	}{{"void_min", s.VoidMin}, {"column_length_mm", s.ColumnLengthMM}, {"peak_to_peak_noise", s.PeakToPeakNoise}} {
		if !(v.value >= 0 && v.value <= maxCounts) {
			return nil, &ParameterError{v.name, fmt.Sprint(v.value), "a number above 0, or 0 where it is not known"}
		}
	}
	l := line{p.BaselineStartMin, p.BaselineStartCounts, p.BaselineEndMin, p.BaselineEndCounts}
	if !(l.t0 < l.t1) || !finiteValue(l.t1-l.t0) || !finiteValue(l.y0) || !finiteValue(l.y1) {
		return nil, &ParameterError{"baseline", fmt.Sprint(l), "two points in order of time, all numbers finite"}
	}
	k := shape{t: c.TimeMin, y: c.Intensity, left: left, right: right, top: highest(c.TimeMin, c.Intensity, left, right, l), base: l}
	f := &Figures{RetentionMin: k.apex(), Height: k.height(k.top), PointsAboveHalf: k.aboveHalf()}
	if !(f.Height > 0) {
		f.PointsAboveHalf = 0
		return f, nil
	}
	f.widths(&k, p.Noise)
	f.plates()
	open := p.StartKind == AtValley || p.EndKind == AtValley || flagged(p.Flags, FlagCutAtStart) || flagged(p.Flags, FlagCutAtEnd)
	if m1, m2, ok := k.moments(); ok && !open {
		f.MeanMin, f.VarianceMin2 = &m1, &m2
		if m1 > 0 {
			f.PlatesMoments = pointer(float64(m1*m1) / m2)
		}
	}
	if f.PlatesHalf != nil && s.ColumnLengthMM > 0 {
		f.PlateHeightMM = pointer(s.ColumnLengthMM / *f.PlatesHalf)
	}
	if s.VoidMin > 0 {
		f.RetentionFactor = pointer((f.RetentionMin - s.VoidMin) / s.VoidMin)
	}
	if s.PeakToPeakNoise > 0 {
		f.SignalToNoise = pointer(2 * f.Height / s.PeakToPeakNoise)
	}
	return f, nil
}

func pointer(v float64) *float64 {
	if !finiteValue(v) {
		return nil
	}
	return &v
}

func flagged(list []string, s string) bool {
	for _, v := range list {
		if v == s {
			return true
		}
	}
	return false
}

func (f *Figures) widths(k *shape, noise float64) {
	if w, ok := k.width(f.Height / 2); ok {
		f.WidthHalfMin = &w
	}
	if w, ok := k.baseWidth(); ok {
		f.WidthBaseMin = &w
	}
	if f.Height < float64(symmetryMinSN*noise) {
		return
	}
	if w, ok := k.width(f.Height / 20); ok {
		f.Width5PctMin = &w
	}
	if v, ok := k.symmetry(f.Height/20, f.RetentionMin); ok {
		f.Symmetry = &v
	}
}

func (f *Figures) plates() {
	if !(f.RetentionMin > 0) {
		return
	}
	square := func(w *float64, factor float64) *float64 {
		if w == nil {
			return nil
		}
		q := f.RetentionMin / *w
		return pointer(float64(factor * q * q))
	}
	f.PlatesHalf, f.PlatesBase = square(f.WidthHalfMin, 5.54), square(f.WidthBaseMin, 16)
}

// moments returns the first moment and the second central one of the points above the baseline, by the trapezoid rule.
func (k *shape) moments() (m1, m2 float64, ok bool) {
	var s0, s1, s2 float64
	origin := k.t[k.top]
	for i := k.left; i <= k.right; i++ {
		w := 0.0
		if i > k.left {
			w += k.t[i] - k.t[i-1]
		}
		if i < k.right {
			w += k.t[i+1] - k.t[i]
		}
		a, u := float64(w*k.height(i)), k.t[i]-origin
		s0 += a
		s1 += float64(a * u)
		s2 += float64(a * u * u)
	}
	if !(s0 > 0) {
		return 0, 0, false
	}
	d := s1 / s0
	m1, m2 = origin+d, s2/s0-float64(d*d)
	return m1, m2, m2 > 0 && finiteValue(m1) && finiteValue(m2)
}

// PairFigures are those of two neighbours. What cannot be had is absent.
type PairFigures struct {
	ResolutionHalf    *float64 `json:"resolution_half,omitempty"`    // 1.18 (tR2−tR1)/(wh1+wh2)
	ResolutionBase    *float64 `json:"resolution_base,omitempty"`    // 2 (tR2−tR1)/(wb1+wb2)
	SeparationFactor  *float64 `json:"separation_factor,omitempty"`  // k2/k1
	RelativeRetention float64  `json:"relative_retention,omitempty"` // tR2/tR1, unadjusted; 0 where tR1 is not above zero
	PeakToValley      *float64 `json:"peak_to_valley,omitempty"`     // Hp/Hv: height of the smaller peak over that of the valley
}

// PairOf takes the figures of two neighbours, the earlier first. valley is the height of the lowest point between them above the
// common baseline; one not above zero stands for none, and no peak-to-valley ratio.
func PairOf(a, b *Figures, valley float64) PairFigures {
	var f PairFigures
	gap := b.RetentionMin - a.RetentionMin
	if a.WidthHalfMin != nil && b.WidthHalfMin != nil {
		f.ResolutionHalf = pointer(1.18 * gap / (*a.WidthHalfMin + *b.WidthHalfMin))
	}
	if a.WidthBaseMin != nil && b.WidthBaseMin != nil {
		f.ResolutionBase = pointer(2 * gap / (*a.WidthBaseMin + *b.WidthBaseMin))
	}
	if a.RetentionFactor != nil && b.RetentionFactor != nil && *a.RetentionFactor > 0 {
		f.SeparationFactor = pointer(*b.RetentionFactor / *a.RetentionFactor)
	}
	if a.RetentionMin > 0 {
		f.RelativeRetention = b.RetentionMin / a.RetentionMin
	}
	if valley > 0 {
		f.PeakToValley = pointer(math.Min(a.Height, b.Height) / valley)
	}
	return f
}

// PercentAreas are the areas in per cent of their sum. The error is a *ParameterError where one is not a finite number of 0 or more, or
// the sum is not above zero.
func PercentAreas(areas []float64) ([]float64, error) {
	var sum float64
	for i, a := range areas {
		if !(a >= 0 && a <= maxCounts) {
			return nil, &ParameterError{"areas", fmt.Sprintf("area %d of %v", i+1, a), "areas of 0 counts·min or more"}
		}
		sum += a
	}
	if !(sum > 0) {
		return nil, &ParameterError{"areas", "a sum of 0", "a sum above 0"}
	}
	out := make([]float64, len(areas))
	for i, a := range areas {
		out[i] = 100 * a / sum
	}
	return out, nil
}
