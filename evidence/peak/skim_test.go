package peak

import (
	"math"
	"testing"

	"assaywrit/evidence/trace"
)

func byMethod(t *testing.T, c trace.Chromatogram, k Cluster) map[string]Separation {
	t.Helper()
	list, err := Separate(c, k, JointOptions{})
	if err != nil {
		t.Fatal(err)
	}
	m := map[string]Separation{}
	for _, s := range list {
		m[s.Method] = s
	}
	return m
}

// Shapes of straight pieces, whose areas are those of triangles. The main peak rises from 0 at 0 to 10 at 10 and falls straight to 0 at 50;
// a rider of height 2 and base 8 sits on its tail from 26 to 34.
//
// Truth: elementary geometry. The tangent is the tail itself.
func TestSkimOfTriangles(t *testing.T) {
	c := trace.Chromatogram{ID: "triangles"}
	for i := range 601 {
		x := float64(i) / 10
		y := 0.0
		switch {
		case x <= 10:
			y = x
		case x <= 50:
			y = 10 - (x-10)/4
		}
		y += max(0, 2-math.Abs(x-30)/2)
		c.TimeMin, c.Intensity = append(c.TimeMin, x), append(c.Intensity, y)
	}
	m := byMethod(t, c, Cluster{0, 50, []float64{10, 30}, Line{0, 0, 50, 0}, NoiseModel{WhiteSD: 0.001}})
	want := map[string][2]float64{
		SeparateTangent: {250, 8}, // half of 50 × 10, half of 8 × 2
		SeparateDrop:    {5*10 + 16*(10+6)/2, 8 + 24*6/2.},
		// less the triangles under the line from 0 to the valley (26, 6) and from there to (50, 0)
		SeparateValley: {5*10 + 16*(10+6)/2 - 26*6/2, 8},
	}
	for name, areas := range want {
		s := m[name]
		for i := range areas {
			if s.Refused != "" || math.Abs(s.Areas[i]-areas[i]) > 1e-9*areas[i]+1e-9 {
				t.Errorf("%s: %+v, want %v", name, s, areas)
				break
			}
		}
	}
}

// A rider far down the tail of a peak that decays exponentially. Truth: the areas that the curves were made with. The exponential skim
// is within 3 % of the rider, where the perpendicular is wrong by a multiple and the tangent by a quarter.
func TestExponentialSkim(t *testing.T) {
	for _, noise := range []float64{0, 0.01} {
		one, two := emg{1000, 10, 1, 5}, emg{12, 27, 0.8, 0.1}
		c := made(900, 0.1, 3, 0, noise, seeded(2), one, two)
		a, _ := one.apex()
		b, _ := two.apex()
		m := byMethod(t, c, Cluster{3, 85, []float64{a, b}, Line{3, 3, 85, 3}, NoiseModel{WhiteSD: noise}})
		rel := func(method string) float64 {
			s := m[method]
			if s.Refused != "" {
				t.Fatalf("%s: %s", method, s.Refused)
			}
			if sum := s.Areas[0] + s.Areas[1]; method != SeparateFit && math.Abs(sum-1012) > 1 {
				t.Errorf("%s: areas add up to %v, want 1012", method, sum)
			}
			return s.Areas[1]/two.area - 1
		}
		drop, tangent, exponent, fit := rel(SeparateDrop), rel(SeparateTangent), rel(SeparateExponent), rel(SeparateFit)
		t.Logf("noise %v: rider wrong by %+.1f %% (drop), %+.1f %% (tangent), %+.2f %% (exponential), %+.3f %% (fit)", noise, 100*drop, 100*tangent, 100*exponent, 100*fit)
		if math.Abs(exponent) > 0.03 || drop < 1 || math.Abs(tangent) < math.Abs(exponent) || math.Abs(fit) > 0.01 {
			t.Errorf("noise %v: drop %+.3f, tangent %+.3f, exponential %+.3f, fit %+.3f", noise, drop, tangent, exponent, fit)
		}
	}
}

// What does not apply says so.
func TestSeparateRefusals(t *testing.T) {
	front := madeCluster(emg{1, 3, 0.3, 0}, emg{10, 5, 0.5, 0})
	for _, name := range []string{SeparateTangent, SeparateExponent} {
		if s := byMethod(t, front.c, front.k)[name]; s.Refused != RefusedNoRider || s.Areas != nil {
			t.Errorf("%s: %+v", name, s)
		}
	}
	shoulder := madeCluster(emg{10, 3, 0.5, 0}, emg{1, 4, 0.5, 0})
	for _, name := range []string{SeparateDrop, SeparateValley, SeparateTangent, SeparateExponent} {
		if s := byMethod(t, shoulder.c, shoulder.k)[name]; s.Refused != RefusedNoValley || s.Areas != nil {
			t.Errorf("%s: %+v", name, s)
		}
	}
	alone := madeCluster(emg{10, 3, 0.5, 0})
	for _, name := range []string{SeparateDrop, SeparateValley, SeparateTangent, SeparateExponent} {
		if s := byMethod(t, alone.c, alone.k)[name]; s.Refused != RefusedOnePeak {
			t.Errorf("%s: %+v", name, s)
		}
	}
}

type madeOf struct {
	c trace.Chromatogram
	k Cluster
}

func madeCluster(peaks ...emg) madeOf {
	m := madeOf{made(161, 0.05, 0, 0, 0, nil, peaks...), Cluster{0, 8, nil, Line{0, 0, 8, 0}, NoiseModel{WhiteSD: 0.001}}}
	for _, g := range peaks {
		a, _ := g.apex()
		m.k.ApexesMin = append(m.k.ApexesMin, a)
	}
	return m
}

// The local baselines join the signal. Truth: by hand.
func TestLocalBaselines(t *testing.T) {
	m := madeCluster(emg{10, 2.5, 0.4, 0}, emg{10, 5, 0.4, 0})
	l, err := ForcedCommon(m.c, 1, 7)
	if err != nil || l.StartMin != m.c.TimeMin[20] || l.EndCounts != m.c.Intensity[140] {
		t.Errorf("%+v, %v", l, err)
	}
	lines, err := ValleyToValley(m.c, 1, 7, m.k.ApexesMin)
	if err != nil || len(lines) != 2 || lines[0].EndMin != m.c.TimeMin[75] || lines[1].StartCounts != m.c.Intensity[75] || lines[0].StartCounts != m.c.Intensity[20] {
		t.Errorf("%+v, %v", lines, err)
	}
	if _, err := ValleyToValley(m.c, 1, 7, []float64{4.5, 5}); err == nil {
		t.Error("a valley where the trace only rises")
	}
}

func TestClusters(t *testing.T) {
	g := emg{1, 0.4, 0.03, 0.01}
	_, h := g.apex()
	near, far := g, g
	near.mu, far.mu = 0.53, 1
	r, err := Detect(made(220, 0.4/60, h/10, 0, h/1000, seeded(1), g, near, far), Parameters{SmoothingPoints: 7, MinSN: 3, Shared: Drop})
	if err != nil || len(r.Peaks) != 3 {
		t.Fatal(err, r)
	}
	list := Clusters(r)
	if len(list) != 2 || len(list[0].ApexesMin) != 2 || len(list[1].ApexesMin) != 1 || list[0].StartMin != r.Peaks[0].StartMin || list[0].EndMin != r.Peaks[1].EndMin {
		t.Errorf("%+v", list)
	}
}
