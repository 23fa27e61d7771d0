package decision

import (
	"math"
	"testing"
)

// TestToleranceEdges: a value on the limit is inside; one unit of the last place beyond it is outside.
func TestToleranceEdges(t *testing.T) {
	tests := []struct {
		kind               string
		absolute, relative *float64
		ref, low, high     float64
	}{
		{"absolute", new(0.1), nil, 0.6, 0.5, 0.7},
		{"relative", nil, new(0.2), 0.4, 0.32, 0.48},
		{"relative", nil, new(0.3), 0.7, 0.49, 0.91},
		{"greater-of", new(0.1), new(0.01), 2.31, 2.21, 2.41},
		{"greater-of", new(0.1), new(0.01), 12, 11.88, 12.12},
		{"greater-of", new(0.1), new(0.01), 10, 9.9, 10.1},
		{"smaller-of", new(0.2), new(0.01), 12, 11.88, 12.12},
		{"smaller-of", new(0.2), new(0.01), 30, 29.8, 30.2},
	}
	for _, tt := range tests {
		w := around(tt.ref, halfWidth(tt.kind, tt.absolute, tt.relative, tt.ref))
		for _, v := range []struct {
			at     float64
			inside bool
		}{
			{tt.low, true}, {tt.high, true}, {tt.ref, true},
			{math.Nextafter(tt.low, -1), false}, {math.Nextafter(tt.high, 100), false},
			{math.Nextafter(tt.low, 100), true}, {math.Nextafter(tt.high, -1), true},
		} {
			if w.holds(v.at) != v.inside {
				t.Errorf("%s about %g: %.17g inside is %v (window %.17g to %.17g)", tt.kind, tt.ref, v.at, !v.inside, w.low, w.high)
			}
		}
	}
}

// TestBands: the windows of the single table of relative abundances (TD IDCR, from memory): 60 gives 50 to 70, 40 gives 32 to 48,
// 10 gives 5 to 15; 25 and 50 belong to the middle band, as the set says.
func TestBands(t *testing.T) {
	bands := doping(t).Identification.Abundance
	for _, tt := range []struct{ ref, low, high float64 }{
		{0.60, 0.50, 0.70}, {0.40, 0.32, 0.48}, {0.10, 0.05, 0.15}, {1, 0.9, 1.1}, {0.50, 0.40, 0.60}, {0.25, 0.20, 0.30}, {0, -0.05, 0.05},
	} {
		b := bandFor(bands, tt.ref)
		if w := around(tt.ref, halfWidth(b.Kind, b.Absolute, b.Relative, tt.ref)); w.low != tt.low || w.high != tt.high {
			t.Errorf("%g: %.17g to %.17g, want %g to %g", tt.ref, w.low, w.high, tt.low, tt.high)
		}
	}
	for _, tt := range []struct {
		ref  float64
		band int
	}{{math.Nextafter(0.5, 1), 0}, {0.5, 1}, {math.Nextafter(0.5, 0), 1}, {math.Nextafter(0.25, 1), 1}, {0.25, 1}, {math.Nextafter(0.25, 0), 2}} {
		if got := bandFor(bands, tt.ref); got.Clause != bands[tt.band].Clause {
			t.Errorf("%.17g: band %q, want %q", tt.ref, got.Clause, bands[tt.band].Clause)
		}
	}
}

func TestDistance(t *testing.T) {
	w := window{low: 0.2, high: 0.6, floor: new(0.3)}
	for _, tt := range []struct{ v, want float64 }{{0.4, 1}, {0.2, 0}, {0.6, 0}, {0.5, 0.5}, {0.8, -1}} {
		if got := w.distance(tt.v); math.Abs(got-tt.want) > 1e-15 {
			t.Errorf("%g: %g, want %g", tt.v, got, tt.want)
		}
	}
	if w.shownLow() != 0.3 {
		t.Errorf("shown from %g", w.shownLow())
	}
	if d := (window{low: 1, high: 1}).distance(1); d != 0 {
		t.Errorf("a window without width: %g", d)
	}
}
