package peak

import (
	"math"
	"testing"
)

// The curve against values in 40 digits.
//
// Source: testdata/peaks/emg_closed_form.json.
func TestEMGClosedForm(t *testing.T) {
	var file struct {
		Peaks []struct {
			Area, Mu, Sigma, Tau float64
			Points               [][2]float64
		}
	}
	readJSON(t, "emg_closed_form.json", &file)
	if len(file.Peaks) == 0 {
		t.Fatal("no peaks")
	}
	for _, p := range file.Peaks {
		g := EMG{p.Area, p.Mu, p.Sigma, p.Tau}
		mirror := EMG{p.Area, -p.Mu, p.Sigma, -p.Tau}
		top := p.Area / (2.5 * math.Hypot(p.Sigma, p.Tau))
		for _, v := range p.Points {
			// 1e-9 of the value, and below σ/τ = 20 the Edgeworth series' 1e-7 of the height
			tol := 1e-9 * v[1]
			if p.Tau < 0.05*math.Hypot(p.Sigma, p.Tau) {
				tol += 1e-7 * top
			}
			if got := g.At(v[0]); math.Abs(got-v[1]) > tol+1e-250 {
				t.Errorf("σ %v τ %v at %v: %v, want %v", p.Sigma, p.Tau, v[0], got, v[1])
			}
			if got, want := mirror.At(-v[0]), g.At(v[0]); got != want {
				t.Errorf("mirrored: %v, want %v", got, want)
			}
		}
	}
}

// The derivatives against central differences, across the change to the series and for fronting peaks.
func TestEMGGradient(t *testing.T) {
	for _, gamma := range []float64{-0.9, -0.3, -0.01, -1e-4, -1e-6, 0, 1e-6, 1e-4, 1.2e-4, 1.3e-4, 0.001, 0.05, 0.4, 0.9} {
		for _, at := range []float64{1, 2.2, 2.9, 3, 3.4, 4.5, 6, 12} {
			m := newMoments(3, 0.7, gamma)
			g, dm, ds, dg := m.gradient(at)
			if g != m.value(at) {
				t.Errorf("γ %v: value %v and %v", gamma, g, m.value(at))
			}
			value := func(mean, s, gamma float64) float64 { e := newMoments(mean, s, gamma); return e.value(at) }
			const h = 1e-5
			hg := math.Min(1e-4, math.Max(math.Abs(gamma)*1e-3, 1e-9))
			for _, v := range []struct {
				name           string
				got, want, tol float64
			}{
				{"mean", dm, (value(3+h, 0.7, gamma) - value(3-h, 0.7, gamma)) / (2 * h), 1e-7},
				{"s", ds, (value(3, 0.7+h, gamma) - value(3, 0.7-h, gamma)) / (2 * h), 1e-7},
				{"γ", dg, (value(3, 0.7, gamma+hg) - value(3, 0.7, gamma-hg)) / (2 * hg), 1e-5},
			} {
				if math.Abs(v.got-v.want) > v.tol && !(gamma == 0 && v.name == "γ" && math.Abs(v.got-v.want) < 1e-3) {
					t.Errorf("γ %v at %v: derivative with respect to %s %v, difference %v", gamma, at, v.name, v.got, v.want)
				}
			}
		}
	}
}
