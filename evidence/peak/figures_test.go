package peak

import (
	"math"
	"testing"
)

// gauss is the pair of the published definitions' worked numbers: tR 4.00 (σ 0.050) and 4.40 (σ 0.055).
func gaussPair(t *testing.T) (a, b *Figures) {
	t.Helper()
	of := func(g emg) *Figures { // each alone: their overlap is not what is tested
		c := made(3001, 0.002, 0, 0, 0, nil, g)
		k, err := Integrate(c, g.mu-0.5, g.mu+0.5, 0)
		if err != nil {
			t.Fatal(err)
		}
		f, err := FiguresOf(c, k, System{VoidMin: 1, ColumnLengthMM: 100, PeakToPeakNoise: 0.01})
		if err != nil {
			t.Fatal(err)
		}
		return f
	}
	return of(emg{1, 4, 0.05, 0}), of(emg{1, 4.4, 0.055, 0})
}

// Source: closed forms of the Gaussian in the formulas of USP <621> and Ph. Eur. 2.2.46: wh = 2.3548 σ, wb = 4 σ, N = (tR/σ)² = 6400 by base
// width and by moments, 6394.02 with the constant 5.54, Rs by base 1.90476, by half width with 1.18 1.90895.
func TestFiguresOfGaussians(t *testing.T) {
	a, b := gaussPair(t)
	p := PairOf(a, b, 0.05)
	// the tangents' cubic is steeper than the curve by 0.1 %
	for _, v := range []struct {
		name        string
		got         *float64
		want, inRel float64
	}{
		{"half width", a.WidthHalfMin, 0.0500 * 2.354820045, 2e-4},
		{"base width", a.WidthBaseMin, 0.2, 1e-3},
		{"5 % width", a.Width5PctMin, 0.05 * 2 * math.Sqrt(2*math.Log(20)), 2e-3},
		{"symmetry", a.Symmetry, 1, 2e-3},
		{"N by half width", b.PlatesHalf, 6394.02, 5e-4},
		{"N by base", b.PlatesBase, 6400, 4e-3},
		{"N by moments", b.PlatesMoments, 6400, 3e-3},
		{"plate height", b.PlateHeightMM, 100 / 6394.02, 5e-4},
		{"retention factor", b.RetentionFactor, 3.4, 1e-5},
		{"2H/h", a.SignalToNoise, 2 / (0.05 * math.Sqrt(2*math.Pi)) / 0.01, 1e-3},
		{"Rs by half width", p.ResolutionHalf, 1.90895, 5e-4},
		{"Rs by base", p.ResolutionBase, 1.90476, 2e-3},
		{"separation factor", p.SeparationFactor, 3.4 / 3, 1e-5},
		{"peak to valley", p.PeakToValley, 1 / (0.055 * math.Sqrt(2*math.Pi)) / 0.05, 1e-3},
		{"relative retention", &p.RelativeRetention, 1.1, 1e-5},
	} {
		if v.got == nil {
			t.Errorf("%s: absent", v.name)
		} else if math.Abs(*v.got/v.want-1) > v.inRel {
			t.Errorf("%s: %v, want %v within %v", v.name, *v.got, v.want, v.inRel)
		}
	}
}

// Tailing peaks against the closed form of the curve.
//
// Source: testdata/peaks/emg_closed_form.json, 40 digits.
func TestFiguresOfEMG(t *testing.T) {
	var file struct {
		Peaks []struct {
			Area, Mu, Sigma, Tau, Mean, Variance float64
			Apex                                 float64 `json:"apex_time"`
			W50                                  float64 `json:"width_50"`
			W5                                   float64 `json:"width_5"`
			Tailing                              float64 `json:"usp_tailing (W0.05/2f)"`
			Plates                               float64 `json:"plates_half_width (5.54 (tR/w50)^2)"`
		}
	}
	readJSON(t, "emg_closed_form.json", &file)
	for _, p := range file.Peaks {
		g := emg{p.Area, p.Mu, p.Sigma, p.Tau}
		step := (p.Sigma + p.Tau) / 50
		start := p.Mu - 8*p.Sigma
		n := int((16*p.Sigma+25*p.Tau)/step) + 1
		c := made(n, step, 0, 0, 0, nil)
		for i := range c.TimeMin {
			c.TimeMin[i] += start
			c.Intensity[i] = g.at(c.TimeMin[i])
		}
		k, err := Integrate(c, c.TimeMin[0], c.TimeMin[n-1], 0)
		if err != nil {
			t.Fatal(err)
		}
		f, err := FiguresOf(c, k, System{})
		if err != nil {
			t.Fatal(err)
		}
		for _, v := range []struct {
			name        string
			got         *float64
			want, inRel float64
		}{
			{"apex", &f.RetentionMin, p.Apex, 1e-5}, {"half width", f.WidthHalfMin, p.W50, 1e-3}, {"5 % width", f.Width5PctMin, p.W5, 1e-3},
			{"symmetry", f.Symmetry, p.Tailing, 4e-3}, {"plates", f.PlatesHalf, p.Plates, 2e-3}, {"M1", f.MeanMin, p.Mean, 1e-5}, {"M2", f.VarianceMin2, p.Variance, 1e-3},
		} {
			if v.got == nil || math.Abs(*v.got/v.want-1) > v.inRel {
				t.Errorf("σ %v τ %v, %s: %v, want %v", p.Sigma, p.Tau, v.name, value(v.got), v.want)
			}
		}
	}
}

func TestPercentAreas(t *testing.T) {
	got, err := PercentAreas([]float64{1, 3, 0})
	if err != nil || got[0] != 25 || got[1] != 75 || got[2] != 0 {
		t.Errorf("%v, %v", got, err)
	}
	for _, bad := range [][]float64{nil, {0, 0}, {1, -1}, {math.NaN()}} {
		if _, err := PercentAreas(bad); err == nil {
			t.Errorf("%v passed", bad)
		}
	}
}

func TestHindrances(t *testing.T) {
	a, b := gaussPair(t)
	pair := PairOf(a, b, 0)
	good := &Peak{Area: 1}
	limits := QuantityLimits{MinSignalToNoise: 10, MinResolution: 1.5, MinPointsHalf: 10, MaxSymmetry: 1.8, MinSymmetry: 0.8}
	if list := Hindrances(good, a, []PairFigures{pair}, limits); len(list) != 0 {
		t.Errorf("a good peak: %+v", list)
	}
	strict := QuantityLimits{MinSignalToNoise: 1e5, MinResolution: 2, MinPointsHalf: 500, MaxSymmetry: 0.9}
	list := Hindrances(&Peak{Flags: []string{FlagSaturated, FlagCutAtEnd, FlagSpike}}, a, []PairFigures{pair}, strict)
	want := []string{CannotSignalToNoise, CannotResolution, CannotPoints, CannotSymmetry, CannotSaturated, CannotCut, CannotSpike, CannotNegative}
	for i := range want {
		if i >= len(list) || list[i].Reason != want[i] || list[i].Got == "" || list[i].Want == "" {
			t.Fatalf("%+v, want %q", list, want)
		}
	}
	// what is limited but unknown is a reason, what is neither is none
	list = Hindrances(good, &Figures{PointsAboveHalf: 20}, []PairFigures{{}}, limits)
	want = []string{CannotNoNoise, CannotNoResolution, CannotNoSymmetry}
	for i := range want {
		if i >= len(list) || list[i].Reason != want[i] {
			t.Fatalf("%+v, want %q", list, want)
		}
	}
	if list := Hindrances(good, &Figures{}, nil, QuantityLimits{}); len(list) != 0 {
		t.Errorf("no limits: %+v", list)
	}
}
