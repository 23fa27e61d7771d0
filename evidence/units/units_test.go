package units

import (
	"fmt"
	"regexp"
	"strings"
	"testing"
)

// TestHint: a refused text comes with advice where its fault is plain.
func TestHint(t *testing.T) {
	tests := []struct {
		family     Family
		text, want string
	}{
		{Concentration, "1,5 ng/mL", "decimal point"},
		{Concentration, "1.200,5 ng/mL", "separators of thousands"},
		{Concentration, "150", "write the unit after the number, such as 150 ng/mL"},
		{Concentration, "150 NG/ML", "write ng/mL if that is meant"},
		{Concentration, ".5 ng/mL", "a zero before"},
		{Concentration, "5. ng/mL", "a digit after"},
		{Concentration, "007 ng/mL", "zeros in front"},
		{Concentration, "150 mL", ""},
		{Concentration, "much", ""},
		{Time, "2.31 MIN", "write min"},
		{Fraction, "15", "write 15 %"},
		{Fraction, "1", "write 1 %"},
		{Fraction, ".15", "a zero before"},
	}
	for _, tt := range tests {
		if _, err := tt.family.Parse(tt.text); err == nil {
			t.Errorf("%q was read", tt.text)
		}
		if got := tt.family.Hint(tt.text); !strings.Contains(got, tt.want) || (tt.want == "" && got != "") {
			t.Errorf("%q: hint %q, want %q", tt.text, got, tt.want)
		}
	}
}

func TestFamilies(t *testing.T) {
	for tag, f := range byTag {
		if tag != f.base && tag != "fraction" {
			t.Errorf("family %s has base %s", tag, f.base)
		}
		if v, err := f.Parse(f.Example()); err != nil || v <= 0 {
			t.Errorf("the example %q of %s: %v, %v", f.Example(), tag, v, err)
		}
		if !strings.Contains(f.Want(), f.Example()) {
			t.Errorf("%q does not give the example", f.Want())
		}
		if got, ok := ForTag(tag); !ok || got.name != f.name {
			t.Errorf("ForTag(%q) = %v, %v", tag, got.name, ok)
		}
		for _, u := range f.units {
			if !f.Has(u.symbol) || Symbol(u.symbol) != u.symbol {
				t.Errorf("%s has no %s", tag, u.symbol)
			}
			if !regexp.MustCompile(f.Pattern()).MatchString("1.5 " + u.symbol) {
				t.Errorf("the pattern of %s refuses 1.5 %s", tag, u.symbol)
			}
		}
	}
	if _, ok := ForTag("kg"); ok {
		t.Error("there is a family kg")
	}
	if Fraction.Bare() == Time.Bare() {
		t.Error("a bare number is a fraction, not a time")
	}
}

func ExampleFamily_Parse() {
	v, _ := Concentration.Parse("1.2 ug/mL")
	fmt.Println(v, Concentration.Base())
	_, err := Concentration.Parse("150 mL")
	fmt.Println(err)
	// Output:
	// 1200 ng/mL
	// got "150 mL", want a mass concentration such as "150 ng/mL" (units: ng/mL, ug/mL, mg/mL, pg/mL, g/L, mg/L, ug/L, ng/L)
}
