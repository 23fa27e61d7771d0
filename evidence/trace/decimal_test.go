package trace

import (
	"regexp"
	"strconv"
	"testing"
)

func TestDecimal(t *testing.T) {
	for text, want := range map[string]float64{
		"0": 0, "4.2817": 4.2817, "+1.5": 1.5, "-.5": -0.5, "7.": 7, "1e3": 1000, "1E-3": 0.001, "12.5e+2": 1250, "007": 7, "1e-400": 0,
	} {
		if got, ok := Decimal(text); !ok || got != want {
			t.Errorf("%q: got %v, %t, want %v", text, got, ok, want)
		}
	}
	for _, text := range []string{
		"", " 1", "1 ", ".", "-", "+", "e5", "1e", "1e+", "1.2.3", "--1", "1,5", "0x10", "0x1p-2", "1_000", "inf", "-Inf", "infinity", "NaN", "1e400", "-1e400",
		"١", "1f", "1\x00",
	} {
		if got, ok := Decimal(text); ok {
			t.Errorf("%q was read as %v", text, got)
		}
	}
}

// FuzzDecimal compares with the same rule as a regular expression, and strconv.
func FuzzDecimal(f *testing.F) {
	for _, s := range []string{"1", "-1.5e-7", ".", "1e999", "0x1"} {
		f.Add(s)
	}
	rule := regexp.MustCompile(`\A[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?\z`)
	f.Fuzz(func(t *testing.T, text string) {
		got, ok := Decimal(text)
		want, err := strconv.ParseFloat(text, 64)
		if valid := rule.MatchString(text) && err == nil; ok != valid || ok && got != want {
			t.Errorf("%q: got %v, %t, want %v, %t", text, got, ok, want, valid)
		}
	})
}
