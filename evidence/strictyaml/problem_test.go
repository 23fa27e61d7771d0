package strictyaml

import (
	"errors"
	"fmt"
	"strings"
	"testing"
)

func TestProblemText(t *testing.T) {
	tests := []struct {
		p    Problem
		want string
	}{
		{Problem{File: "case.yaml", Line: 12, Column: 9, Key: "sample.collected", Got: `"14.03.2026"`, Want: "a time"}, `case.yaml:12:9: sample.collected: got "14.03.2026", want a time`},
		{Problem{File: "case.yaml", Line: 12, Got: "x", Want: "y"}, `case.yaml:12: got x, want y`},
		{Problem{File: "raw/1.mzML", Got: "x", Want: "y"}, `raw/1.mzML: got x, want y`},
		{Problem{File: "case.yaml", Column: 9, Key: "criteria", Got: "x", Want: "y"}, `case.yaml: criteria: got x, want y`},
	}
	for _, tt := range tests {
		if got := tt.p.Error(); got != tt.want {
			t.Errorf("%q, want %q", got, tt.want)
		}
	}
}

func TestProblemsAreOneError(t *testing.T) {
	ps := Problems{{File: "b", Line: 1, Got: "1"}, {File: "a", Line: 9, Got: "2"}, {File: "a", Line: 2, Column: 5, Got: "3"}, {File: "a", Line: 2, Column: 5, Got: "4"}, {File: "a", Line: 2, Column: 1, Got: "5"}}
	ps.Sort()
	var order []string
	for _, p := range ps {
		order = append(order, p.Got)
	}
	if got := strings.Join(order, ""); got != "53421" {
		t.Errorf("order %s, want 53421", got)
	}
	var found Problems
	if err := fmt.Errorf("case: %w", ps); !errors.As(err, &found) || len(found) != 5 {
		t.Error("problems are lost in a wrapped error")
	}
}

func TestQuote(t *testing.T) {
	if got := Quote("14.03.2026"); got != `"14.03.2026"` {
		t.Error(got)
	}
	long := strings.Repeat("µ", 100000)
	if got := Quote(long); len(got) > 300 || !strings.Contains(got, "100000 characters") {
		t.Errorf("%d bytes: %s", len(got), got)
	}
}
