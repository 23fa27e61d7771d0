package trace

import (
	"math"
	"strings"
	"testing"
)

func TestCheck(t *testing.T) {
	for _, tt := range []struct {
		name            string
		time, intensity []float64
		point           int
		inIntensity     bool
		got             string // "" where nothing is wrong
	}{
		{"empty", nil, nil, 0, false, ""},
		{"one point", []float64{0}, []float64{0}, 0, false, ""},
		{"rising", []float64{-1, 0, 1e-300, 2}, []float64{3, -4, 0, 1e300}, 0, false, ""},
		{"next number", []float64{1, math.Nextafter(1, 2)}, []float64{0, 0}, 0, false, ""},
		{"fewer times", []float64{1}, []float64{1, 2}, 2, false, "1 times and 2 intensities"},
		{"fewer intensities", []float64{1, 2}, []float64{1}, 2, true, "2 times and 1 intensities"},
		{"same time", []float64{1, 2, 2}, []float64{0, 0, 0}, 3, false, "a time of 2 min"},
		{"earlier time", []float64{1, 3, 2}, []float64{0, 0, 0}, 3, false, "a time of 2 min"},
		{"not a number, time", []float64{1, math.NaN(), 2}, []float64{0, 0, 0}, 2, false, "a time of NaN"},
		{"infinite time", []float64{1, 2, math.Inf(1)}, []float64{0, 0, 0}, 3, false, "a time of +Inf"},
		{"not a number", []float64{1, 2}, []float64{math.NaN(), 0}, 1, true, "an intensity of NaN"},
		{"infinite", []float64{1, 2}, []float64{0, math.Inf(-1)}, 2, true, "an intensity of -Inf"},
	} {
		c := Chromatogram{TimeMin: tt.time, Intensity: tt.intensity}
		b := c.Check()
		switch {
		case tt.got == "" && b != nil:
			t.Errorf("%s: got %+v, want nothing wrong", tt.name, b)
		case tt.got != "" && (b == nil || b.Got != tt.got || b.Point != tt.point || b.InIntensity != tt.inIntensity || b.Want == ""):
			t.Errorf("%s: got %+v, want %q at point %d", tt.name, b, tt.got, tt.point)
		}
	}
}

func TestSyntaxError(t *testing.T) {
	for want, err := range map[string]*SyntaxError{
		"f:3:4: got a, want b": {File: "f", Line: 3, Column: 4, Got: "a", Want: "b", Hint: "c"},
		"f:3: got a, want b":   {File: "f", Line: 3, Got: "a", Want: "b"},
		"f: got a, want b":     {File: "f", Column: 4, Got: "a", Want: "b"},
	} {
		if got := err.Error(); got != want {
			t.Errorf("got %q, want %q", got, want)
		}
	}
	if text := (&SyntaxError{Hint: "advice"}).Error(); strings.Contains(text, "advice") {
		t.Error("the advice is a line of its own")
	}
}
