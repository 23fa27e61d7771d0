package peak

import (
	"math"
	"math/rand/v2"
	"testing"

	"assaywrit/evidence/trace"
)

// demo are the parameters used where a test needs none of its own.
var demo = Parameters{SmoothingPoints: 9, MinSN: 3, MinWidthMin: 0.02, Shared: Drop, ValleyFraction: 0.01}

// An emg is an exponentially modified Gaussian; its area is exactly area. Formula as in testdata/peaks/emg_closed_form.json.
type emg struct{ area, mu, sigma, tau float64 }

func (g emg) at(t float64) float64 {
	z := (t - g.mu) / g.sigma
	if g.tau == 0 {
		return g.area / (g.sigma * math.Sqrt(2*math.Pi)) * math.Exp(-z*z/2)
	}
	// exp(a)·erfc(b) by the scaled complementary error function where b is large
	b := (g.sigma/g.tau - z) / math.Sqrt2
	if b > 5 {
		return g.area / (2 * g.tau) * math.Exp(-z*z/2) * erfcx(b)
	}
	r := g.sigma / g.tau
	return g.area / (2 * g.tau) * math.Exp(r*r/2-(t-g.mu)/g.tau) * math.Erfc(b)
}

// erfcx is exp(x²)·erfc(x) for x > 5, by its continued fraction (Abramowitz & Stegun 7.1.14, from memory).
func erfcx(x float64) float64 {
	f := 0.0
	for k := 60; k > 0; k-- {
		f = float64(k) / 2 / (x + f)
	}
	return 1 / (math.Sqrt(math.Pi) * (x + f))
}

func (g emg) apex() (t, height float64) {
	lo, hi := g.mu-4*g.sigma, g.mu+4*g.sigma
	for range 100 {
		a, b := lo+(hi-lo)/3, hi-(hi-lo)/3
		if g.at(a) < g.at(b) {
			lo = a
		} else {
			hi = b
		}
	}
	return (lo + hi) / 2, g.at((lo + hi) / 2)
}

// made draws points at times from 0 in steps, with peaks on a baseline of offset and slope, and normal noise of sd.
func made(points int, step, offset, slope, sd float64, rng *rand.Rand, peaks ...emg) trace.Chromatogram {
	c := trace.Chromatogram{ID: "made"}
	for i := range points {
		t := float64(i) * step
		y := offset + slope*t
		for _, p := range peaks {
			y += p.at(t)
		}
		if sd > 0 {
			y += sd * rng.NormFloat64()
		}
		c.TimeMin = append(c.TimeMin, t)
		c.Intensity = append(c.Intensity, y)
	}
	return c
}

func seeded(n uint64) *rand.Rand { return rand.New(rand.NewPCG(n, 7)) }

func traceOf(id string, times, values []float64) trace.Chromatogram {
	return trace.Chromatogram{ID: id, TimeMin: times, Intensity: values}
}

// only returns the one peak of c.
func only(t *testing.T, c trace.Chromatogram, p Parameters) Peak {
	t.Helper()
	r, err := Detect(c, p)
	if err != nil {
		t.Fatal(err)
	}
	if len(r.Peaks) != 1 {
		t.Fatalf("%s: %d peaks, want 1: %+v", c.ID, len(r.Peaks), r.Peaks)
	}
	return r.Peaks[0]
}

// nearest returns the peak of c with its apex nearest to a time.
func nearest(t *testing.T, c trace.Chromatogram, p Parameters, at float64) Peak {
	t.Helper()
	r, err := Detect(c, p)
	if err != nil {
		t.Fatal(err)
	}
	if len(r.Peaks) == 0 {
		t.Fatalf("%s: no peaks", c.ID)
	}
	best := r.Peaks[0]
	for _, k := range r.Peaks {
		if math.Abs(k.ApexMin-at) < math.Abs(best.ApexMin-at) {
			best = k
		}
	}
	return best
}
