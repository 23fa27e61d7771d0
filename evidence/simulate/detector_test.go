package simulate

import (
	"math"
	"strings"
	"testing"
)

// moments of numbers: mean, variance, and the correlation of neighbours.
func moments(x []float64) (mean, variance, lag1 float64) {
	n := float64(len(x))
	for _, v := range x {
		mean += v / n
	}
	var c float64
	for i, v := range x {
		variance += (v - mean) * (v - mean) / (n - 1)
		if i > 0 {
			c += (v - mean) * (x[i-1] - mean) / (n - 1)
		}
	}
	return mean, variance, c / variance
}

// TestNoise: over a constant signal the mean is the signal, the variance that of the electronics plus Gain times the signal, and
// neighbours have nothing to do with each other, all within five standard deviations of those statistics for normal noise.
func TestNoise(t *testing.T) {
	const n = 200000
	for _, d := range []Detector{
		{Baseline: 1000, Electronic: 50},
		{Baseline: 1000, Gain: 4},
		{Baseline: 1200, Electronic: 110, Gain: 30},
		{Baseline: 50000, Electronic: 110, Gain: 30},
		{Baseline: 3e6, Electronic: 110, Gain: 30},
	} {
		_, y, err := d.Record(nil, 0, n-1, 1, NewStream(3, "noise"))
		if err != nil {
			t.Fatal(err)
		}
		want := d.Electronic*d.Electronic + d.Gain*d.Baseline
		mean, variance, lag := moments(y)
		if math.Abs(mean-d.Baseline) > 5*math.Sqrt(want/n) {
			t.Errorf("%+v: mean %.2f", d, mean)
		}
		if math.Abs(variance/want-1) > 5*math.Sqrt(2./n) {
			t.Errorf("%+v: variance %.1f, want %.1f", d, variance, want)
		}
		if math.Abs(lag) > 5/math.Sqrt(n) {
			t.Errorf("%+v: correlation of neighbours %.4f", d, lag)
		}
	}
}

// TestBackgroundShape: without noise the trace is start, drift and wave, and the wave stays within its half height, once up and down.
func TestBackgroundShape(t *testing.T) {
	_, y, err := Detector{Baseline: 1000, Drift: -200, Wave: 40}.Record(nil, 2, 3, 1./200, NewStream(3, "shape"))
	if err != nil {
		t.Fatal(err)
	}
	if len(y) != 201 {
		t.Fatalf("%d points, want 201", len(y))
	}
	low, high, turns := math.Inf(1), math.Inf(-1), 0
	for i := range y {
		w := y[i] - (1000 - float64(i))
		low, high = min(low, w), max(high, w)
		if i > 1 && (y[i]-y[i-1]+1)*(y[i-1]-y[i-2]+1) < -1e-9 {
			turns++
		}
	}
	if low < -40.001 || high > 40.001 || low > -39 || high < 39 || turns != 2 {
		t.Errorf("the wave goes from %.3f to %.3f with %d turns, want -40 to 40 and 2", low, high, turns)
	}
}

// TestAreaOfRecord: without noise, the trapezoid area of the recorded points above the true baseline is that of the peaks, as far as
// 32-bit numbers hold it.
func TestAreaOfRecord(t *testing.T) {
	peaks := []Peak{{Area: 4000, Mu: 2.30, Sigma: 0.026, Tau: 0.012}, {Area: 900, Mu: 2.45, Sigma: 0.026, Tau: 0}}
	times, y, err := Detector{Baseline: 1000}.Record(peaks, 1.7, 2.9, 1./150, NewStream(3, "area"))
	if err != nil {
		t.Fatal(err)
	}
	if len(times) != 181 || times[0] != 1.7 || times[180] != 2.9 {
		t.Fatalf("%d points from %g to %g, want 181 from 1.7 to 2.9", len(times), times[0], times[len(times)-1])
	}
	area := 0.0
	for i := 1; i < len(y); i++ {
		area += ((y[i]+y[i-1])/2 - 1000) * (times[i] - times[i-1])
	}
	if math.Abs(area-4900) > 4900*1e-6 { // times are written with six decimals
		t.Errorf("area %.6f, want 4900", area)
	}
	for i, v := range y {
		if v != float64(float32(v)) {
			t.Errorf("point %d: %v does not fit 32 bits", i+1, v)
		}
	}
}

// TestNeverBelowZero: a detector does not count below nothing.
func TestNeverBelowZero(t *testing.T) {
	_, y, err := Detector{Electronic: 100}.Record(nil, 0, 1, 0.001, NewStream(3, "zero"))
	if err != nil {
		t.Fatal(err)
	}
	zeros := 0
	for _, v := range y {
		if v < 0 {
			t.Fatalf("an intensity of %g", v)
		}
		if v == 0 {
			zeros++
		}
	}
	if math.Abs(float64(zeros)/1001-0.5) > 5*0.5/math.Sqrt(1001) {
		t.Errorf("%d of 1001 points are zero, want about half", zeros)
	}
}

func TestRecordRefuses(t *testing.T) {
	flat := Detector{Baseline: 1}
	for _, tt := range []struct {
		name             string
		d                Detector
		start, end, step float64
		want             string
	}{
		{"no step", flat, 0, 1, 0, "want 2 to"},
		{"a step back", flat, 0, 1, -0.1, "want 2 to"},
		{"an end before the start", flat, 1, 0, 0.1, "want 2 to"},
		{"one point", flat, 0, 0.05, 0.1, "want 2 to"},
		{"too many points", flat, 0, 1, 1e-9, "want 2 to"},
		{"a step that is not a number", flat, 0, 1, math.NaN(), "want 2 to"},
		{"an end that is not a number", flat, 0, math.NaN(), 1, "want 2 to"},
		{"an end without end", flat, 0, math.Inf(1), 1, "want 2 to"},
		{"more than 32 bits hold", Detector{Baseline: 1e39}, 0, 1, 0.1, "32-bit"},
		{"a baseline that is not a number", Detector{Baseline: math.NaN()}, 0, 1, 0.1, "32-bit"},
	} {
		_, _, err := tt.d.Record(nil, tt.start, tt.end, tt.step, NewStream(3))
		if err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: error %v, want one with %q", tt.name, err, tt.want)
		}
	}
}
