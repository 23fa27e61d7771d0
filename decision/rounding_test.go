package decision

import (
	"math"
	"math/big"
	"testing"

	"pgregory.net/rapid"
)

func TestRounding(t *testing.T) {
	for _, tt := range []struct {
		v      float64
		rule   string
		digits int
		want   float64
	}{
		{1199.9999, "truncate", 2, 1100}, {1200, "truncate", 2, 1200}, {1299.99, "truncate", 2, 1200}, {0.29, "truncate", 2, 0.29}, {-1299, "truncate", 2, -1200},
		{math.Nextafter(1300, 0), "truncate", 2, 1200}, {1300, "truncate", 2, 1300}, {0.3 - 1e-17, "truncate", 1, 0.3}, {9.99, "truncate", 1, 9},
		{174.675, "up", 2, 180}, {1164.5, "up", 2, 1200}, {1200, "up", 2, 1200}, {49.87, "up", 2, 50}, {99.1, "up", 2, 100},
		{2.5, "half-even", 1, 2}, {3.5, "half-even", 1, 4}, {0.125, "half-even", 2, 0.12}, {-2.5, "half-even", 1, -2}, {2.675, "half-even", 3, 2.68}, {9.96, "half-even", 2, 10},
		{123.456, "none", 2, 123.456}, {0, "truncate", 2, 0},
	} {
		if got := roundValue(tt.v, tt.rule, tt.digits); got != tt.want {
			t.Errorf("%.17g %s to %d digits: %v, want %v", tt.v, tt.rule, tt.digits, got, tt.want)
		}
	}
}

// TestRoundingAgainstFloats holds the exact rounding against big.Float's, which rounds in binary: the two agree but for what the
// shortest decimal differs from the double, so that they are compared on whole numbers, where there is none.
func TestRoundingAgainstFloats(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v, digits := rapid.IntRange(1, 1<<50).Draw(t, "v"), rapid.IntRange(1, 6).Draw(t, "digits")
		unit := 1
		for n := v; n >= 10; n /= 10 {
			unit *= 10
		}
		for range digits - 1 {
			unit = max(1, unit/10)
		}
		if got, want := roundValue(float64(v), "truncate", digits), float64(v/unit*unit); got != want {
			t.Fatalf("truncate %d to %d digits: %v, want %v", v, digits, got, want)
		}
		if got, want := roundValue(float64(v), "up", digits), float64((v+unit-1)/unit*unit); got != want {
			t.Fatalf("up %d to %d digits: %v, want %v", v, digits, got, want)
		}
		even, _ := new(big.Float).SetString(big.NewRat(int64(v), int64(unit)).FloatString(30))
		if got, want := roundValue(float64(v), "half-even", digits), toEven(even)*float64(unit); got != want {
			t.Fatalf("half-even %d to %d digits: %v, want %v", v, digits, got, want)
		}
	})
}

func toEven(f *big.Float) float64 {
	v, _ := f.Float64()
	return math.RoundToEven(v)
}
