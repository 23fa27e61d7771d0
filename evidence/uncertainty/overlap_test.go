package uncertainty

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
)

func TestCheckOverlap(t *testing.T) {
	intermediate := Coverer{"intermediate precision", []Effect{EffectRepeatability, EffectBetweenRun, EffectVolume, EffectCalibrationFit}}
	bias := Coverer{"bias", []Effect{EffectMethodBias, EffectReferenceValue}}
	if err := CheckOverlap([]Coverer{intermediate, bias, {"purity", []Effect{EffectCalibratorValue}}}); err != nil {
		t.Error(err)
	}
	err := CheckOverlap([]Coverer{intermediate, bias, {"pipettes", []Effect{EffectVolume}}, {"aliquots", []Effect{EffectRepeatability, EffectSubsampling}}})
	var o *OverlapError
	if !errors.As(err, &o) || len(o.Overlaps) != 2 || o.Overlaps[0].Effect != EffectRepeatability || !slices.Equal(o.Overlaps[1].Components, []string{"intermediate precision", "pipettes"}) {
		t.Errorf("%v", err)
	}
	if err := CheckOverlap([]Coverer{{"thaw", []Effect{"thawing"}}}, "thawing"); err != nil {
		t.Error(err)
	}
	for want, c := range map[string][]Coverer{
		`"a" does not say`:        {{"a", nil}},
		`"a" covers "volumes"`:    {{"a", []Effect{"volumes"}}},
		"names volume twice":      {{"a", []Effect{EffectVolume, EffectVolume}}},
		"second one of that name": {{"a", []Effect{EffectVolume}}, {"a", []Effect{EffectMass}}},
	} {
		if err := CheckOverlap(c); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("want %q, got %v", want, err)
		}
	}
}

func ExampleCheckOverlap() {
	fmt.Println(CheckOverlap([]Coverer{
		{"intermediate precision", []Effect{EffectRepeatability, EffectBetweenRun, EffectVolume}},
		{"pipette", []Effect{EffectVolume}},
	}))
	// Output: counted twice: volume is covered by "intermediate precision" and "pipette": leave one of them out, or split it
}

// TestBias: Nordtest report TR 537, section 5.3 (from memory): one certified material of 11.5 ± 0.5 (95 %), found 11.9 with a relative
// standard deviation of 2.24 % in twelve days: u(bias) = 4.2 %; three materials with biases of 3.48, -0.9 and 2.4 % and u of 2.21, 1.8
// and 1.8 %: RMS 2.5 %, mean u 1.9 %, and 3.1 % from these rounded ones.
func TestBias(t *testing.T) {
	one, err := Bias([]Reference{{Name: "material", Bias: 0.4 / 11.5, UReference: 0.5 / 1.96 / 11.5, SD: 0.0224, N: 12}})
	if err != nil || math.Abs(one.StdU-0.042) > 0.0005 || one.DoF != 11 {
		t.Errorf("%+v, %v", one, err)
	}
	three, err := Bias([]Reference{{Bias: 0.0348, UReference: 0.0221}, {Bias: -0.009, UReference: 0.018}, {Bias: 0.024, UReference: 0.018}})
	if err != nil || math.Abs(three.RMSBias-0.025) > 0.0005 || math.Abs(three.StdU-0.0314) > 0.0005 || three.DoF != 3 {
		t.Errorf("%+v, %v", three, err)
	}
	for want, refs := range map[string][]Reference{
		"at least one": nil, "finite numbers": {{Bias: math.NaN()}}, "two": {{Bias: 0.1, N: 1}}, `"r": bias`: {{Name: "r", UReference: -1}}, "too large": {{Bias: 1e200}, {Bias: 1e200}},
	} {
		if b, err := Bias(refs); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("want %q, got %+v, %v", want, b, err)
		}
	}
	if u, err := AssignedValue(0.1, 25, true); err != nil || math.Abs(u-0.025) > 1e-15 {
		t.Errorf("%g, %v", u, err)
	}
	if u, err := AssignedValue(0.1, 1, false); err == nil {
		t.Errorf("one laboratory gave %g", u)
	}
}
