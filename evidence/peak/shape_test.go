package peak

import (
	"math"
	"testing"

	"assaywrit/evidence/trace"
)

// Apex, height and widths of the six closed forms, sampled finely enough that the straight pieces between points matter less
// than the tolerance, at times that fall on nothing in particular.
func TestClosedForms(t *testing.T) {
	var truth struct {
		Peaks []struct {
			Area, Mu, Sigma, Tau float64
			Apex                 float64      `json:"apex_time"`
			Height               float64      `json:"height"`
			Width                float64      `json:"width_50"`
			Tailing              float64      `json:"usp_tailing (W0.05/2f)"`
			Plates               float64      `json:"plates_half_width (5.54 (tR/w50)^2)"`
			Points               [][2]float64 `json:"points"`
		} `json:"peaks"`
	}
	readJSON(t, "emg_closed_form.json", &truth)
	if len(truth.Peaks) != 6 {
		t.Fatalf("%d closed forms, want 6", len(truth.Peaks))
	}
	near := func(i int, what string, got, want, within float64) {
		t.Helper()
		if math.Abs(got-want) > within*math.Abs(want) {
			t.Errorf("closed form %d: %s %v, want %v within %v", i, what, got, want, within)
		}
	}
	for i, g := range truth.Peaks {
		f := emg{g.Area, g.Mu, g.Sigma, g.Tau}
		for _, p := range g.Points { // the tests' own formula against forty digits
			if p[1] > 1e-300 {
				near(i, "value", f.at(p[0]), p[1], 1e-9)
			}
		}
		w := math.Hypot(g.Sigma, g.Tau)
		c := trace.Chromatogram{ID: "closed form"}
		step := w / 400
		for k := 0; k < 400*22; k++ {
			at := g.Mu + step*(float64(k-400*7)+0.37)
			c.TimeMin = append(c.TimeMin, at)
			c.Intensity = append(c.Intensity, f.at(at))
		}
		k := only(t, c, Parameters{SmoothingPoints: 21, MinSN: 3, Shared: Drop})
		near(i, "area", k.Area, g.Area, 3e-4)
		near(i, "height", k.Height, g.Height, 1e-4)
		if math.Abs(k.ApexMin-g.Apex) > 1e-5*w {
			t.Errorf("closed form %d: apex %v, want %v within %v", i, k.ApexMin, g.Apex, 1e-5*w)
		}
		near(i, "width", *k.WidthHalfMin, g.Width, 1e-4)
		near(i, "symmetry", *k.Symmetry, g.Tailing, 1e-3)
		near(i, "plates", *k.Plates, g.Plates, 3e-4)
	}
}

// Two Gaussians, tR 4.00 (σ 0.050) and 4.40 (σ 0.055): plates of the second by 5.54 are 6394.02, and the resolution by half
// widths and 1.18 is 1.90895. Worked out from USP <621> / Ph. Eur. 2.2.46; the form by base widths, 1.90476, is not used.
func TestPlatesAndResolution(t *testing.T) {
	c := made(8000, 0.001, 0, 0, 0, nil, emg{100, 4, 0.05, 0}, emg{100, 4.4, 0.055, 0})
	r, err := Detect(c, Parameters{SmoothingPoints: 21, MinSN: 3, Shared: Drop})
	if err != nil {
		t.Fatal(err)
	}
	if len(r.Peaks) != 2 {
		t.Fatalf("%d peaks, want 2", len(r.Peaks))
	}
	a, b := r.Peaks[0], r.Peaks[1]
	if math.Abs(*b.Plates-6394.02) > 2 {
		t.Errorf("plates %v, want 6394.02 within 2 (straight pieces between points)", *b.Plates)
	}
	if math.Abs(*a.ResolutionPos-1.90895) > 0.0003 || *a.ResolutionPos != *b.ResolutionPre {
		t.Errorf("resolution %v and %v, want 1.90895 within 0.0003", *a.ResolutionPos, *b.ResolutionPre)
	}
	if a.ResolutionPre != nil || b.ResolutionPos != nil {
		t.Error("a resolution to a neighbour that is not there")
	}
}

// On a parabola the vertex comes out whatever the spacing: closed form.
func TestApexOfParabola(t *testing.T) {
	times := []float64{0, 1, 2.5, 3, 3.25, 5}
	s := shape{t: times, left: 0, right: 5, top: 3, base: line{0, 0, 5, 0}}
	for _, x := range times {
		s.y = append(s.y, 10-(x-2.9)*(x-2.9))
	}
	if got := s.apex(); math.Abs(got-2.9) > 1e-14 {
		t.Errorf("apex %v, want 2.9", got)
	}
	s.y = []float64{0, 1, 7, 7, 7, 1} // flat top
	if got := s.apex(); got != 2.875 {
		t.Errorf("apex of a flat top %v, want its middle 2.875", got)
	}
	s.y = []float64{0, 1, 7, 7, 3, 1} // two equal points are no flat top
	if got := s.apex(); got < 2.5 || got > 3 {
		t.Errorf("apex between two equal points %v, want 2.5 to 3", got)
	}
}

// Figures that cannot be had are absent.
func TestAbsentFigures(t *testing.T) {
	g := emg{1, 0.6, 0.035, 0.015}
	_, h := g.apex()
	if k := only(t, made(180, 0.4/60, 0, 0, h/10, seeded(1), g), demo); k.Symmetry != nil {
		t.Errorf("symmetry %v at S/N %v, want none", *k.Symmetry, k.SignalToNoise)
	}
	if k := only(t, made(180, 0.4/60, 0, 0, h/200, seeded(1), g), demo); k.Symmetry == nil || k.WidthHalfMin == nil || k.Plates == nil {
		t.Errorf("figures missing at S/N %v", k.SignalToNoise)
	}
	// a valley above half height hides both widths there
	r, err := Detect(made(180, 0.4/60, 0, 0, h/1000, seeded(1), emg{1, 0.5, 0.03, 0}, emg{1, 0.58, 0.03, 0}), demo)
	if err != nil || len(r.Peaks) != 2 {
		t.Fatalf("%v, %d peaks, want 2", err, len(r.Peaks))
	}
	for i, k := range r.Peaks {
		if k.WidthHalfMin != nil || k.Plates != nil || k.Symmetry != nil || k.ResolutionPre != nil || k.ResolutionPos != nil {
			t.Errorf("peak %d: figures that a valley hides: %+v", i, k)
		}
	}
}
