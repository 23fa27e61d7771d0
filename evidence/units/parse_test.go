package units

import (
	"fmt"
	"math"
	"math/big"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// Expected values are the definitions of the units (The International System of Units, 9th ed.: table 7, prefixes; table 8, min,
// h and L).
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
		{Concentration, "2 g/L", 2e6},
		{Concentration, "500 pg/mL", 0.5},
		{Concentration, "500 ng/L", 0.5},
		{Concentration, "1e-3 mg/mL", 1000},
		{Concentration, "1.001 ug/mL", 1001},  // the product of doubles 1.001·1000 is 1000.9999999999999
		{Concentration, "0.0079 mg/mL", 7900}, // 0.0079·1e6 is 7900.000000000001
		{Concentration, "150\u00a0ng/mL", 150},
		{Concentration, " 150  ng/mL ", 150},
		{Concentration, "+150 ng/mL", 150},
		{Concentration, "-150 ng/mL", -150},
		{Time, "2.31 min", 2.31},
		{Time, "138.6 s", 2.31},
		{Time, "0.5 h", 30},
		{Volume, "0.092 L", 92},
		{Volume, "92 ml", 92},
		{InjectionVolume, "5 µL", 5},
		{InjectionVolume, "0.005 mL", 5},
		{Length, "10 cm", 100},
		{Length, "0.1 m", 100},
		{Flow, "400 uL/min", 0.4},
		{Fraction, "15 %", 0.15},
		{Fraction, "15\u202f%", 0.15},
		{Fraction, "0.1%", 0.001},
		{Fraction, "0.15", 0.15},
		{Fraction, "0", 0},
		{Fraction, "150 %", 1.5},
	}
	for _, tt := range tests {
		got, err := tt.family.Parse(tt.text)
		if err != nil || got != tt.want {
			t.Errorf("%q: %v, %v; want exactly %v", tt.text, got, err, tt.want)
		}
		if text := strings.TrimSpace(tt.text); !regexp.MustCompile(tt.family.Pattern()).MatchString(text) {
			t.Errorf("%q does not match the pattern %s", text, tt.family.Pattern())
		}
	}
}

func TestRefused(t *testing.T) {
	tests := []struct {
		family Family
		text   string
	}{
		{Concentration, "150"}, {Concentration, "150 mL"}, {Concentration, "150 NG/ML"}, {Concentration, "150 ng"}, {Concentration, ""},
		{Concentration, "1,5 ng/mL"}, {Concentration, "1,500 ng/mL"}, {Concentration, "0x10 ng/mL"}, {Concentration, "1_000 ng/mL"},
		{Concentration, "Inf ng/mL"}, {Concentration, "NaN ng/mL"}, {Concentration, "1.2.3 ng/mL"}, {Concentration, "1e999 ng/mL"},
		{Concentration, "1e-400 ng/mL"}, {Concentration, "1e-9999 ng/mL"}, {Concentration, "ng/mL"}, {Concentration, "1 000 ng/mL"},
		{Concentration, ".5 ng/mL"}, {Concentration, "5. ng/mL"}, {Concentration, "007 ng/mL"}, {Concentration, "--5 ng/mL"},
		{Concentration, "1e ng/mL"}, {Concentration, "5 ng/mL 6 ng/mL"}, {Concentration, "5 ng / mL"}, {Concentration, "5 Mg/mL"},
		{Concentration, "5 mg/ML"}, {Concentration, "150 ng/dL"}, {Concentration, "١٥٠ ng/mL"}, {Concentration, "5\nng/mL"},
		{Concentration, strings.Repeat("9", 65) + " ng/mL"},
		{Time, "2.31"}, {Time, "2.31 m"}, {Time, "2.31 MIN"}, {Time, "2:31 min"}, {Volume, "5 %"}, {Volume, "5 ul/min"},
		{Fraction, "15 percent"}, {Fraction, "15"}, {Fraction, "1"}, {Fraction, "1.5"}, {Fraction, "1e-2"}, {Fraction, "% 15"},
	}
	for _, tt := range tests {
		if got, err := tt.family.Parse(tt.text); err == nil {
			t.Errorf("%q was read as %v", tt.text, got)
		}
	}
}

func TestParseIn(t *testing.T) {
	if v, err := Concentration.ParseIn("1.2", "µg/ml"); err != nil || v != 1200 {
		t.Errorf("1.2 µg/ml: %v, %v", v, err)
	}
	for _, tt := range [][2]string{{"1.2", "mL"}, {"1.2 ug/mL", "ug/mL"}, {"1,2", "ug/mL"}, {"", "ug/mL"}} {
		if v, err := Concentration.ParseIn(tt[0], tt[1]); err == nil {
			t.Errorf("%q in %s was read as %v", tt[0], tt[1], v)
		}
	}
}

// decimals draws a plain decimal number.
func decimals(t *rapid.T) string {
	whole := rapid.StringMatching(`0|[1-9][0-9]{0,8}`).Draw(t, "whole")
	return whole + rapid.StringMatching(`(\.[0-9]{1,9})?`).Draw(t, "rest")
}

// TestNearestDouble compares with math/big at 400 bits: the value read is the double nearest to the exact one.
func TestNearestDouble(t *testing.T) {
	powers := map[string]string{"ng/mL": "1", "ug/mL": "1000", "mg/mL": "1000000", "pg/mL": "0.001", "mg/L": "1000", "ng/L": "0.001"}
	rapid.Check(t, func(t *rapid.T) {
		digits := decimals(t)
		symbol := rapid.SampledFrom([]string{"ng/mL", "ug/mL", "mg/mL", "pg/mL", "mg/L", "ng/L"}).Draw(t, "unit")
		got, err := Concentration.Parse(digits + " " + symbol)
		if err != nil {
			t.Fatal(err)
		}
		x, _, _ := big.ParseFloat(digits, 10, 400, big.ToNearestEven)
		p, _, _ := big.ParseFloat(powers[symbol], 10, 400, big.ToNearestEven)
		want, _ := x.Mul(x, p).Float64()
		if got != want {
			t.Fatalf("%s %s = %v, want %v", digits, symbol, got, want)
		}
	})
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

// TestNoOtherFamily: no unit of one family is read by a family of another kind.
func TestNoOtherFamily(t *testing.T) {
	for tag, f := range byTag {
		for other, g := range byTag {
			if f.name == g.name { // the two kinds of volumes share units
				continue
			}
			for _, u := range g.units {
				if v, err := f.Parse("0.5 " + u.symbol); err == nil {
					t.Errorf("0.5 %s of %s was read as %v %s", u.symbol, other, v, tag)
				}
			}
		}
	}
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{"150 ng/mL", "1.2 ug/mL", "15 %", "0.15", "1e-3 mg/mL", "0x10 ng/mL", "1,5 min", "-0 mL", ""} {
		f.Add(s)
	}
	patterns := map[string]*regexp.Regexp{}
	for tag, family := range byTag {
		patterns[tag] = regexp.MustCompile(family.Pattern())
	}
	f.Fuzz(func(t *testing.T, text string) {
		for tag, family := range byTag {
			_ = family.Hint(text)
			v, err := family.Parse(text)
			if err != nil {
				continue
			}
			if math.IsNaN(v) || math.IsInf(v, 0) {
				t.Errorf("%q was read as %v", text, v)
			}
			if !patterns[tag].MatchString(strings.TrimSpace(text)) {
				t.Errorf("%q was read and does not match the pattern of %s", text, tag)
			}
		}
	})
}

func ExampleParseNumber() {
	v, _ := ParseNumber("12.50")
	fmt.Println(v)
	_, err := ParseNumber("0x1F")
	fmt.Println(err)
	// Output:
	// 12.5
	// got "0x1F", want a decimal number such as 12.5
}
