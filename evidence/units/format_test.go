package units

import (
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestFormat(t *testing.T) {
	tests := []struct {
		family Family
		value  float64
		symbol string
		want   string
	}{
		{Concentration, 1200, "ug/mL", "1.2 ug/mL"},
		{Concentration, 1200, "µg/ml", "1.2 ug/mL"},
		{Concentration, 1200, "ng/mL", "1200 ng/mL"},
		{Concentration, 0.15, "pg/mL", "150 pg/mL"},
		{Concentration, 2.1, "ug/mL", "0.0021 ug/mL"}, // the quotient of doubles 2.1/1000 is 0.0021000000000000003
		{Concentration, -40, "ng/mL", "-40 ng/mL"},
		{Concentration, 0, "ng/mL", "0 ng/mL"},
		{Concentration, 1e30, "ng/mL", "1e30 ng/mL"},
		{Concentration, 1.25e-12, "ng/mL", "1.25e-12 ng/mL"},
		{Time, 2.31, "min", "2.31 min"},
		{Time, 2.31, "s", "138.6 s"},
		{Time, 90, "h", "1.5 h"},
		{Fraction, 0.15, "%", "15 %"},
		{Fraction, 0.005, "%", "0.5 %"},
	}
	for _, tt := range tests {
		if got, err := tt.family.Format(tt.value, tt.symbol); err != nil || got != tt.want {
			t.Errorf("%v in %s: %q, %v; want %q", tt.value, tt.symbol, got, err, tt.want)
		}
	}
	for _, bad := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		if got, err := Concentration.Format(bad, "ng/mL"); err == nil {
			t.Errorf("%v was written as %q", bad, got)
		}
		if got, err := Concentration.In(bad, "ng/mL"); err == nil {
			t.Errorf("%v was converted to %v", bad, got)
		}
	}
	if got, err := Concentration.Format(1, "mL"); err == nil {
		t.Errorf("a concentration was written as %q", got)
	}
	if got, err := Concentration.In(math.SmallestNonzeroFloat64, "mg/mL"); err == nil {
		t.Errorf("a number too small was converted to %v", got)
	}
}

// TestRoundTrip: what Format writes, Parse reads as the same double.
func TestRoundTrip(t *testing.T) {
	families := []Family{Concentration, Volume, InjectionVolume, Length, Flow, Fraction}
	rapid.Check(t, func(t *rapid.T) {
		f := rapid.SampledFrom(families).Draw(t, "family")
		u := rapid.SampledFrom(f.units).Draw(t, "unit")
		value := rapid.Float64Range(-1e200, 1e200).Draw(t, "value")
		text, err := f.Format(value, u.symbol)
		if err != nil {
			t.Fatal(err)
		}
		back, err := f.Parse(text)
		if err != nil || back != value {
			t.Fatalf("%v was written %q and read as %v (%v)", value, text, back, err)
		}
	})
}

func ExampleFamily_Format() {
	v, _ := Concentration.Parse("0.15 ug/mL")
	text, _ := Concentration.Format(v, "ug/mL")
	fmt.Println(v, text)
	// Output:
	// 150 0.15 ug/mL
}
