package separation

import (
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// The models, with their versions. A version never changes its results.
const (
	LineAlgorithm     = "lss-line@1"     // log10 k = log10 kw − S φ
	ParabolaAlgorithm = "lss-parabola@1" // log10 k = log10 kw − S φ + C φ²
	GradientAlgorithm = "lss-gradient@1" // the line, from gradients of different slope
)

// A Model gives log10 k at a composition.
type Model struct {
	Algorithm string   `json:"algorithm"`
	LogKw     float64  `json:"log_kw"`
	S         float64  `json:"s"`
	C         float64  `json:"c,omitempty"` // of the parabola
	LogKwStdU *float64 `json:"log_kw_std_u,omitempty"`
	SStdU     *float64 `json:"s_std_u,omitempty"`
	Residual  *float64 `json:"residual_sd,omitempty"` // of log10 k, or of retention in minutes for gradients; with degrees of freedom left
	F         *float64 `json:"f_parabola,omitempty"`  // variance that the parabola takes away, over that left
	CStdU     *float64 `json:"c_std_u,omitempty"`

	FProbability *float64 `json:"f_probability,omitempty"` // of an F at least as large under a straight line
}

const ln10 = 2.302585092994046 // nearest to ln 10

func log10(x float64) float64 { return strictmath.Log(x) / ln10 }
func exp10(x float64) float64 { return strictmath.Exp(float64(x * ln10)) }

// K is the retention factor at φ.
func (m Model) K(phi float64) float64 {
	return exp10(m.LogKw - float64(m.S*phi) + float64(m.C*phi*phi))
}

// significant is the probability of an F at least as large under a straight line, below which a parabola is taken.
const significant = 0.05

// exactly is a residual of log10 k that is no more than rounding.
const exactly = 1e-12

// fitIsocratic fits the line, and the parabola where four or more runs show that it is needed; with three runs the parabola goes through
// all of them, so that nothing could show it: the line is kept.
func fitIsocratic(phi, k []float64) (Model, error) {
	y := make([]float64, len(k))
	for i := range k {
		y[i] = log10(k[i])
	}
	line, rssLine, err := fit(phi, y, 2)
	if err != nil || len(phi) < 4 {
		return line, err
	}
	parabola, rss, err := fit(phi, y, 3)
	if err != nil {
		return line, nil // two compositions only: the line is all there is
	}
	dof := float64(len(phi) - 3)
	rounding := float64(float64(len(phi)) * exactly * exactly)
	if rssLine <= rounding {
		return line, nil
	}
	rss = max(rss, rounding)
	f := max(rssLine-rss, 0) / (rss / dof)
	p := float64(2 * strictmath.TSF(math.Sqrt(f), dof)) // F with 1 and dof degrees of freedom is the square of Student's t
	line.F, parabola.F, line.FProbability, parabola.FProbability = &f, &f, &p, &p
	if p < significant {
		return parabola, nil
	}
	return line, nil
}

func fit(phi, y []float64, columns int) (Model, float64, error) {
	rows := make([][]float64, len(phi))
	for i, p := range phi {
		rows[i] = []float64{1, -p, float64(p * p)}[:columns]
	}
	s, err := strictmath.WeightedLeastSquares(rows, y, nil)
	if err != nil {
		return Model{}, 0, err
	}
	m := Model{Algorithm: LineAlgorithm, LogKw: s.Coef[0], S: s.Coef[1]}
	if columns == 3 {
		m.Algorithm, m.C = ParabolaAlgorithm, s.Coef[2]
	}
	rss := 0.0
	for i := range y {
		d := y[i] - m.LogKw + float64(m.S*phi[i]) - float64(m.C*phi[i]*phi[i])
		rss += float64(d * d)
	}
	if dof := len(y) - columns; dof > 0 {
		sd := math.Sqrt(rss / float64(dof))
		m.Residual = &sd
		u := func(i int) *float64 { return pointer(float64(sd * math.Sqrt(s.Cov[i][i]))) }
		m.LogKwStdU, m.SStdU = u(0), u(1)
		if columns == 3 {
			m.CStdU = u(2)
		}
	}
	return m, rss, nil
}

// gradientTime is the retention in a linear gradient, minutes: (t0/b) log10(ln 10 (k0 − tD/t0) b + 1) + t0 + tD, with b = S Δφ t0/tG and
// k0 the retention factor at its start; tD/t0 is for what migrates during the dwell. What leaves the column before the gradient reaches it is isocratic.
func (m Model) gradientTime(g Gradient, void float64) float64 {
	k0 := m.K(g.StartPhi)
	if early := float64(void * (1 + k0)); g.DwellMin > 0 && early <= void+g.DwellMin {
		return early
	}
	b := float64(m.S * (g.EndPhi - g.StartPhi) * void / g.TimeMin)
	left := k0 - g.DwellMin/void // of the column, in units of 1/k0, when the gradient arrives
	t := float64(void/b*log10(float64(ln10*left*b)+1)) + void + g.DwellMin
	if end := void + g.DwellMin + g.TimeMin; t > end { // it is still there when the gradient ends: the rest is isocratic at the end
		passed := (exp10(float64(b*g.TimeMin/void)) - 1) / (ln10 * b) // in units of k0
		t = end + float64(void*m.K(g.EndPhi)*(left-passed)/k0)
	}
	return t
}

// fitGradient finds log kw and S from the retention in two gradients of different slope, and tells how well further ones agree.
func fitGradient(runs []Run, t []float64) (Model, error) {
	first, second := 0, 0
	for i := range runs {
		if slope(runs[i]) > slope(runs[first]) {
			first = i
		}
		if slope(runs[i]) < slope(runs[second]) {
			second = i
		}
	}
	a, b := runs[first], runs[second]
	if early := a.VoidMin + min(a.Gradient.DwellMin, b.Gradient.DwellMin); t[first] <= a.VoidMin+a.Gradient.DwellMin && t[second] <= b.VoidMin+b.Gradient.DwellMin {
		return Model{}, &Error{b.Name, fmt.Sprintf("a retention of %g min beside %g min in run %s", t[second], t[first], a.Name),
			fmt.Sprintf("one after %g min: what leaves before the gradient comes says nothing of S", early)}
	}
	// For each S the first run gives log kw; the second decides.
	miss := func(s float64) (float64, Model) {
		m := Model{Algorithm: GradientAlgorithm, S: s}
		lo, hi := -10.0, 60.0
		for range 200 {
			mid := (lo + hi) / 2
			if m.LogKw = mid; m.gradientTime(*a.Gradient, a.VoidMin) < t[first] {
				lo = mid
			} else {
				hi = mid
			}
		}
		return m.gradientTime(*b.Gradient, b.VoidMin) - t[second], m
	}
	const steps = 120
	lo, hi := 0.5, 0.0
	before, _ := miss(lo)
	for i := 1; i <= steps; i++ {
		s := 0.5 + float64(float64(i)*0.5)
		d, _ := miss(s)
		if before == 0 || (d > 0) != (before > 0) {
			hi = s
			break
		}
		lo, before = s, d
	}
	if hi == 0 {
		return Model{}, &Error{b.Name, fmt.Sprintf("a retention of %g min beside %g min in run %s", t[second], t[first], a.Name), "two that one S between 0.5 and 60 explains"}
	}
	var m Model
	for range 200 {
		mid := (lo + hi) / 2
		var d float64
		if d, m = miss(mid); (d > 0) == (before > 0) {
			lo = mid
		} else {
			hi = mid
		}
	}
	if len(runs) > 2 {
		rss := 0.0
		for i, r := range runs {
			d := m.gradientTime(*r.Gradient, r.VoidMin) - t[i]
			rss += float64(d * d)
		}
		m.Residual = pointer(math.Sqrt(rss / float64(len(runs)-2)))
	}
	return m, nil
}

func slope(r Run) float64 { return (r.Gradient.EndPhi - r.Gradient.StartPhi) / r.Gradient.TimeMin }

func pointer(v float64) *float64 { return &v }
