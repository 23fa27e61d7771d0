package peak

import (
	"encoding/binary"
	"errors"
	"math"
	"testing"

	"assaywrit/evidence/trace"
)

// decode makes a trace of whatever bytes there are: the first ones choose the parameters, each other pair a step and a value.
func decode(b []byte) (trace.Chromatogram, Parameters) {
	p := Parameters{SmoothingPoints: 5, MinSN: 1, Shared: Drop}
	if len(b) < 4 {
		return trace.Chromatogram{}, p
	}
	p.SmoothingPoints = 5 + 2*int(b[0]%8)
	p.MinSN = 0.5 + float64(b[1])/16
	p.ValleyFraction = float64(b[2]%64) / 64
	if b[3]&1 == 1 {
		p.Shared = Valley
	}
	p.MinWidthMin = float64(b[3]>>4) / 8
	c := trace.Chromatogram{ID: "fuzz"}
	t := 0.0
	for b = b[4:]; len(b) >= 3; b = b[3:] {
		t += math.Ldexp(1+float64(b[0]&15), int(b[0]>>4)-10)
		v := float64(int16(binary.LittleEndian.Uint16(b[1:])))
		c.TimeMin = append(c.TimeMin, t)
		c.Intensity = append(c.Intensity, v)
	}
	return c, p
}

// Whatever the trace, the result is ordered, inside the trace and finite.
func FuzzDetect(f *testing.F) {
	rng := seeded(5)
	for n := range 40 {
		b := make([]byte, 4+3*(5+10*n))
		for i := range b {
			b[i] = byte(rng.Uint32())
		}
		if n%2 == 0 { // even steps, small numbers, with a hill
			for i := 4; i+2 < len(b); i += 3 {
				k := (i - 4) / 3
				b[i], b[i+2] = 0x50, byte(40*math.Exp(-math.Pow(float64(k-5*n)/8, 2)))
			}
		}
		f.Add(b)
	}
	f.Fuzz(func(t *testing.T, b []byte) {
		c, p := decode(b)
		r, err := Detect(c, p)
		if err != nil {
			var te *TraceError
			if !errors.As(err, &te) {
				t.Fatalf("error %T: %v", err, err)
			}
			return
		}
		sound(t, c, r)
		n := len(c.TimeMin)
		if k, err := Integrate(c, c.TimeMin[n/4], c.TimeMin[n-1-n/4], r.Noise); err == nil {
			finite(t, k)
		}
	})
}

func sound(t *testing.T, c trace.Chromatogram, r *Result) {
	t.Helper()
	if !(r.Noise >= 0) || math.IsInf(r.Noise, 0) {
		t.Fatalf("noise %v", r.Noise)
	}
	end := c.TimeMin[0]
	for i := range r.Peaks {
		k := &r.Peaks[i]
		finite(t, k)
		if k.StartMin < end || k.ApexMin < k.StartMin || k.EndMin < k.ApexMin || k.EndMin > c.TimeMin[len(c.TimeMin)-1] {
			t.Fatalf("peak %d: limits %v, apex %v, %v after %v", i, k.StartMin, k.ApexMin, k.EndMin, end)
		}
		if k.Height <= 0 || k.Points < 3 || k.SignalToNoise <= 0 {
			t.Fatalf("peak %d: height %v, points %d, signal-to-noise %v", i, k.Height, k.Points, k.SignalToNoise)
		}
		end = k.EndMin
	}
}

func finite(t *testing.T, k *Peak) {
	t.Helper()
	v := []float64{k.StartMin, k.ApexMin, k.EndMin, k.Area, k.Height, k.BaselineStartMin, k.BaselineStartCounts, k.BaselineEndMin,
		k.BaselineEndCounts, k.AreaStdU, k.Noise, k.SignalToNoise}
	for _, o := range []*float64{k.Symmetry, k.WidthHalfMin, k.Plates, k.ResolutionPre, k.ResolutionPos} {
		if o != nil {
			v = append(v, *o)
		}
	}
	for _, x := range v {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			t.Fatalf("not finite: %+v", k)
		}
	}
}
