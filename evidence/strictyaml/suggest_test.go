package strictyaml

import (
	"strings"
	"testing"
)

func TestSuggest(t *testing.T) {
	options := []string{"calibrator", "control", "carryover-blank", "negative-control", "zero", "at", "by", "P-3", "raw/010.mzML"}
	tests := []struct{ name, want string }{
		{"calibratr", "calibrator"}, {"Calibrator", "calibrator"}, {"callibrator", "calibrator"}, {"contorl", "control"},
		{"carryover_blank", "carryover-blank"}, {"CarryoverBlank", "carryover-blank"}, {"negative control", "negative-control"}, {"zeor", "zero"},
		{"ta", "at"}, {"P-33", ""}, {"P-4", ""}, {"p3", "P-3"}, {"raw/009.mzML", ""}, {"raw/010.mzml", "raw/010.mzML"}, {"sample", ""}, {"x", ""}, {"", ""}, {"to", ""}, {strings.Repeat("a", 1<<20), ""},
	}
	for _, tt := range tests {
		want := tt.want
		if want != "" {
			want = `did you mean "` + want + `"?`
		}
		if got := Suggest(tt.name, options); got != want {
			t.Errorf("%.20q: %q, want %q", tt.name, got, want)
		}
	}
}

// Known distances: kitten to sitting is 3 (V. I. Levenshtein's measure, the usual textbook pair); ca to abc is 3 by optimal string
// alignment and 2 without its restriction (from memory).
func TestDistance(t *testing.T) {
	tests := []struct {
		a, b string
		want int
	}{
		{"kitten", "sitting", 3}, {"ca", "abc", 3}, {"", "abc", 3}, {"abc", "", 3}, {"same", "same", 0}, {"ab", "ba", 1},
	}
	for _, tt := range tests {
		if got := distance(tt.a, tt.b); got != tt.want {
			t.Errorf("%q to %q: %d, want %d", tt.a, tt.b, got, tt.want)
		}
	}
}
