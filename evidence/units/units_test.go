package units

import (
	"fmt"
	"regexp"
	"strconv"
	"testing"

	"pgregory.net/rapid"
)

// Expected values are the definitions of the units (SI Brochure, 9th ed.: prefixes; 1 min = 60 s).
func TestParse(t *testing.T) {
	tests := []struct {
		family Family
		text   string
		want   float64
	}{
		{Concentration, "150 ng/mL", 150},
		{Concentration, "1.2 ug/mL", 1200},
		{Concentration, "1.2 µg/mL", 1200}, // U+00B5
		{Concentration, "1.2 μg/ml", 1200}, // U+03BC
		{Concentration, "0.15ug/l", 0.15},  // 1 ug/L = 1 ng/mL
		{Concentration, "7 mg/L", 7000},
		{Concentration, "500 pg/mL", 0.5},
		{Concentration, "1e-3 mg/mL", 1000},
		{Time, "2.31 min", 2.31},
		{Time, "138.6 s", 2.31},
		{Time, "0.5 h", 30},
		{Volume, "0.092 L", 92},
		{InjectionVolume, "5 µL", 5},
		{Length, "10 cm", 100},
		{Flow, "400 uL/min", 0.4},
		{Fraction, "15 %", 0.15},
		{Fraction, "0.1%", 0.001},
		{Fraction, "0.15", 0.15},
	}
	for _, tt := range tests {
		got, err := tt.family.Parse(tt.text)
		if err != nil || got != tt.want {
			t.Errorf("%q: %v, %v; want exactly %v", tt.text, got, err, tt.want)
		}
		if !regexp.MustCompile(tt.family.Pattern()).MatchString(tt.text) {
			t.Errorf("%q does not match the pattern %s", tt.text, tt.family.Pattern())
		}
	}
}

func TestRefused(t *testing.T) {
	tests := []struct {
		family Family
		text   string
	}{
		{Concentration, "150"}, {Concentration, "150 mL"}, {Concentration, "150 NG/ML"}, {Concentration, "150 ng"}, {Concentration, ""},
		{Concentration, "1,5 ng/mL"}, {Concentration, "0x10 ng/mL"}, {Concentration, "1_000 ng/mL"}, {Concentration, "Inf ng/mL"},
		{Concentration, "1.2.3 ng/mL"}, {Concentration, "1e999 ng/mL"}, {Time, "2.31"}, {Time, "2.31 m"}, {Volume, "5 %"}, {Fraction, "15 percent"},
	}
	for _, tt := range tests {
		if got, err := tt.family.Parse(tt.text); err == nil {
			t.Errorf("%q was read as %v", tt.text, got)
		}
	}
}

// TestNoConfusion: the same digits in two units never give the same quantity, and the ratio is exactly that of the units.
func TestNoConfusion(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		digits := strconv.FormatFloat(float64(rapid.IntRange(1, 999999).Draw(t, "n"))/100, 'f', -1, 64)
		ng, err1 := Concentration.Parse(digits + " ng/mL")
		ug, err2 := Concentration.Parse(digits + " ug/mL")
		if err1 != nil || err2 != nil || ug == ng {
			t.Fatalf("%v %v %v %v", ng, ug, err1, err2)
		}
		back, err := Concentration.In(ug, "ug/mL")
		if err != nil || strconv.FormatFloat(back, 'f', -1, 64) != digits {
			t.Fatalf("%s ug/mL came back as %v (%v)", digits, back, err)
		}
	})
}

func ExampleFamily_Parse() {
	v, _ := Concentration.Parse("1.2 ug/mL")
	fmt.Println(v, "ng/mL")
	_, err := Concentration.Parse("150 mL")
	fmt.Println(err)
	// Output:
	// 1200 ng/mL
	// got "150 mL", want a mass concentration such as "150 ng/mL" (units: ng/mL, ug/mL, mg/mL, pg/mL, g/L, mg/L, ug/L, ng/L)
}
