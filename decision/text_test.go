package decision

import "testing"

func TestText(t *testing.T) {
	for _, tt := range []struct {
		v      float64
		digits int
		want   string
	}{
		{0, 3, "0"}, {5, 3, "5"}, {1200, 4, "1200"}, {1234.56, 4, "1235"}, {123456, 4, "123500"}, {0.012345, 3, "0.0123"}, {0.5, 3, "0.5"},
		{1.005, 3, "1.00"}, {-12.345, 3, "-12.3"}, {2.5e-5, 3, "2.50e-05"}, {9.995, 3, "10.0"}, {1e12, 3, "1.00e+12"},
	} {
		if got := Text(tt.v, tt.digits); got != tt.want {
			t.Errorf("%g to %d digits: %s, want %s", tt.v, tt.digits, got, tt.want)
		}
	}
	for _, tt := range []struct {
		v, u       float64
		value, unc string
	}{
		{1471.47, 120.5, "1470", "120"}, {0.01234, 0.00056, "0.01234", "0.00056"}, {1.2345, 0.0995, "1.23", "0.10"}, {12.0, 3.0, "12.0", "3.0"},
		{1234, 9.96, "1234", "10"}, {5, 0, "5", "0"},
	} {
		if a, b := TextWithU(tt.v, tt.u); a != tt.value || b != tt.unc {
			t.Errorf("%v ± %v: %s ± %s, want %v ± %v", tt.v, tt.u, a, b, tt.value, tt.unc)
		}
	}
}

// TestApart: a value beyond a limit is never written like the limit.
func TestApart(t *testing.T) {
	for _, tt := range []struct {
		show         shower
		v, limit     float64
		value, other string
	}{
		{minutes, 2.41, 2.41, "2.410 min", "2.410 min"}, {minutes, 2.4101, 2.41, "2.4101 min", "2.4100 min"}, {minutes, 2.5, 2.41, "2.500 min", "2.410 min"},
		{percent, 0.2000001, 0.2, "20.00001 %", "20 %"}, {nanograms, 1200.04, 1200, "1200.04 ng/mL", "1200 ng/mL"}, {inUnit("ug/mL"), 1200.04, 1200, "1.20004 ug/mL", "1.2 ug/mL"},
	} {
		v, l := apart(tt.show, tt.v, tt.limit)
		if v.Text != tt.value || l[0].Text != tt.other || v.Value != tt.v {
			t.Errorf("%g beside %g: %s and %s, want %s and %s", tt.v, tt.limit, v.Text, l[0].Text, tt.value, tt.other)
		}
	}
}
