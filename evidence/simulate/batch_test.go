package simulate

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

// small is a batch of an analyte with two ions, its internal standard and a neighbour, in solvent and in matrix.
func small() *Batch {
	channel := func(id string, from, to float64) Channel {
		return Channel{ID: id, Transition: trace.Transition{PrecursorMZ: 240.2, ProductMZ: 148.1, Polarity: trace.Positive}, StartMin: from, EndMin: to, StepMin: 1. / 150}
	}
	b := &Batch{
		Seed: 11, Column: Column{SigmaMin: 0.026, TauMin: 0.012, DriftMin: 0.001, JitterMin: 0.001},
		Background: Background{Low: 900, High: 1500, Drift: 0.3, Wave: 0.04, Electronic: 110, Gain: 30},
		Scatter:    Scatter{Volume: 0.005, Yield: 0.03, Differential: 0.006, Ion: 0.006},
		Carryover:  0.0005,
		Channels:   []Channel{channel("a", 1.7, 2.9), channel("b", 1.7, 2.9), channel("s", 1.7, 2.9)},
		Substances: []Substance{
			{"analyte", "group", 2.3, []Ion{{"a", 80}, {"b", 40}}},
			{"standard", "group", 2.28, []Ion{{"s", 80}}},
			{"neighbour", "other", 2.45, []Ion{{"a", 80}}},
		},
	}
	for i, amount := range []float64{0, 100, 1000, 0, 500} {
		in := Injection{ID: fmt.Sprint("i", i), Yield: 0.8, Amounts: []Amount{{"analyte", amount, 0.01}, {"standard", 500, 0.006}, {"neighbour", 40, 0.03}}}
		if amount == 0 {
			in = Injection{ID: in.ID, Yield: 1}
		}
		b.Injections = append(b.Injections, in)
	}
	return b
}

// quiet is small without any scatter, drift or carry-over.
func quiet() *Batch {
	b := small()
	b.Column.DriftMin, b.Column.JitterMin, b.Scatter, b.Carryover = 0, 0, Scatter{}, 0
	for _, in := range b.Injections {
		for k := range in.Amounts {
			in.Amounts[k].RSD = 0
		}
	}
	return b
}

func acquired(t testing.TB, b *Batch, i int) []trace.Chromatogram {
	t.Helper()
	list, err := b.Acquire(i)
	if err != nil {
		t.Fatal(err)
	}
	return list
}

func same(a, b trace.Chromatogram) bool {
	return a.ID == b.ID && a.Transition == b.Transition && slices.Equal(a.TimeMin, b.TimeMin) && slices.Equal(a.Intensity, b.Intensity)
}

// TestOthersStay: an injection at the end, a channel or a substance more leaves every trace that it has no part in as it was, to the
// last bit.
func TestOthersStay(t *testing.T) {
	more := small()
	more.Injections = append(more.Injections, Injection{ID: "last", Yield: 1, Amounts: []Amount{{"analyte", 7, 0.01}}})
	more.Channels = append([]Channel{{ID: "new", StartMin: 0, EndMin: 1, StepMin: 0.1}}, more.Channels...)
	more.Substances = append([]Substance{{"new", "group", 0.5, []Ion{{"new", 10}}}}, more.Substances...)
	for i := range more.Injections {
		more.Injections[i].Amounts = append([]Amount{{"new", 50, 0.1}}, more.Injections[i].Amounts...)
	}
	plain := small()
	for i := range plain.Injections {
		with := acquired(t, more, i)[1:]
		for k, c := range acquired(t, plain, i) {
			if !same(c, with[k]) {
				t.Errorf("injection %d, channel %q has changed", i, c.ID)
			}
			if !same(c, acquired(t, small(), i)[k]) {
				t.Errorf("injection %d, channel %q is not the same twice", i, c.ID)
			}
		}
	}
	other := small()
	other.Seed++
	if same(acquired(t, plain, 1)[0], acquired(t, other, 1)[0]) {
		t.Error("another seed gives the same trace")
	}
}

// TestNoiseApart: two channels, and one channel in two injections, share no noise.
func TestNoiseApart(t *testing.T) {
	b := quiet()
	b.Background = Background{Low: 1000, High: 1000, Electronic: 10}
	b.Substances[0].Ions = nil
	b.Substances[1].Ions = nil
	b.Substances[2].Ions = nil
	for i := range b.Channels {
		b.Channels[i].StepMin = 1e-4
	}
	traces := [][]float64{acquired(t, b, 0)[0].Intensity, acquired(t, b, 0)[1].Intensity, acquired(t, b, 1)[0].Intensity}
	n := len(traces[0])
	for i, x := range traces {
		for _, y := range traces[:i] {
			r := 0.0
			for k := range x {
				r += (x[k] - 1000) * (y[k] - 1000) / 100 / float64(n)
			}
			if math.Abs(r) > 5/math.Sqrt(float64(n)) {
				t.Errorf("trace %d shares its noise with another: correlation %.3f", i, r)
			}
		}
	}
}

// TestTruthByHand: without scatter the truth is what can be worked out by hand.
func TestTruthByHand(t *testing.T) {
	b := quiet()
	b.Carryover, b.Column.DriftMin = 0.01, 0.001
	want := []struct {
		substance, channel string
		amount, area, apex float64
	}{
		{"analyte", "a", 1001, 1001 * 0.8 * 80, 2.302}, // 1000 ng/mL, and 1 % of the 100 ng/mL before
		{"analyte", "b", 1001, 1001 * 0.8 * 40, 2.302},
		{"standard", "s", 505, 505 * 0.8 * 80, 2.282},
		{"neighbour", "a", 40.4, 40.4 * 0.8 * 80, 2.452},
	}
	got := b.Truth(2)
	if len(got) != len(want) {
		t.Fatalf("%d peaks, want %d", len(got), len(want))
	}
	for i, w := range want {
		g := got[i]
		if g.Injection != "i2" || g.Substance != w.substance || g.Channel != w.channel || math.Abs(g.NGPerML-w.amount) > 1e-9 ||
			math.Abs(g.Peak.Area-w.area) > 1e-6 || math.Abs(g.Peak.Apex()-w.apex) > 1e-9 {
			t.Errorf("peak %d is %+v with its apex at %g, want %+v", i, g, g.Peak.Apex(), w)
		}
	}
	blank := b.Truth(3) // carry-over alone, not suppressed
	if len(blank) != 4 || math.Abs(blank[0].NGPerML-10) > 1e-9 || math.Abs(blank[0].Peak.Area-800) > 1e-6 {
		t.Errorf("the blank holds %+v, want 10 ng/mL of the analyte first", blank)
	}
	if first := b.Truth(0); len(first) != 0 {
		t.Errorf("the first injection holds %+v, want nothing", first)
	}
}

// TestSuppression: matrix acts on analyte and internal standard alike; their ratio stays, but for the differential part.
func TestSuppression(t *testing.T) {
	free, heavy := quiet(), quiet()
	heavy.Injections[1].Yield = 0.4
	a, b := free.Truth(1), heavy.Truth(1)
	for i := range a {
		if math.Abs(b[i].Peak.Area/a[i].Peak.Area-0.5) > 1e-12 {
			t.Errorf("%s: area %g with half the yield, %g before", a[i].Substance, b[i].Peak.Area, a[i].Peak.Area)
		}
	}
}

// TestVolume: the injected volume acts on everything in an injection alike, and on each injection by itself.
func TestVolume(t *testing.T) {
	b, exact := quiet(), quiet()
	b.Scatter.Volume = 0.05
	var factors []float64
	for _, i := range []int{1, 2, 4} {
		want := exact.Truth(i)
		for k, p := range b.Truth(i) {
			f := p.Peak.Area / want[k].Peak.Area
			if k == 0 {
				factors = append(factors, f)
			} else if math.Abs(f-factors[len(factors)-1]) > 1e-12 {
				t.Errorf("injection %d: %s by %.6f, the first substance by %.6f", i, p.Substance, f, factors[len(factors)-1])
			}
		}
	}
	for i, f := range factors {
		if math.Abs(f-1) < 1e-6 || math.Abs(f-1) > 0.25 || slices.Contains(factors[:i], f) {
			t.Errorf("factors %v, want three that scatter by 5 %%", factors)
		}
	}
}

// TestScatter: over many injections each figure scatters by the root of the sum of the squares of what enters it, within five standard
// deviations of a standard deviation, s/√(2n).
func TestScatter(t *testing.T) {
	const n = 4000
	b := small()
	b.Carryover, b.Column.DriftMin = 0, 0
	b.Injections = nil
	for i := range n {
		b.Injections = append(b.Injections, Injection{ID: fmt.Sprint(i), Yield: 1, Amounts: []Amount{{"analyte", 100, 0.01}, {"standard", 100, 0.006}}})
	}
	var area, ratio, ions, apex []float64
	for i := range n {
		p := b.Truth(i)
		area = append(area, p[0].Peak.Area/8000)
		ratio = append(ratio, p[0].Peak.Area/p[2].Peak.Area)
		ions = append(ions, 2*p[1].Peak.Area/p[0].Peak.Area)
		apex = append(apex, p[0].Peak.Apex()-2.3)
	}
	hyp := func(s ...float64) float64 {
		sum := 0.0
		for _, v := range s {
			sum += v * v
		}
		return math.Sqrt(sum)
	}
	for _, m := range []struct {
		name         string
		x            []float64
		mean, spread float64
	}{
		{"area", area, 1, hyp(0.005, 0.03, 0.006, 0.006, 0.01)},                           // volume, yield, differential, ion, preparation
		{"ratio to the standard", ratio, 1, hyp(0.006, 0.006, 0.006, 0.006, 0.01, 0.006)}, // twice differential and ion, two preparations
		{"ratio of ions", ions, 1, hyp(0.006, 0.006)},
		{"retention", apex, 0, 0.001},
	} {
		mean, variance, _ := moments(m.x)
		if sd := math.Sqrt(variance); math.Abs(sd/m.spread-1) > 5/math.Sqrt(2*n)+0.005 { // 0.5 %: products, not sums
			t.Errorf("%s scatters by %.5f, want %.5f", m.name, sd, m.spread)
		}
		if math.Abs(mean-m.mean) > 5*m.spread/math.Sqrt(n)+0.0005 {
			t.Errorf("%s: mean %.5f, want %g", m.name, mean, m.mean)
		}
	}
}

// TestAcquireSums: a trace is its background plus every peak of its channel.
func TestAcquireSums(t *testing.T) {
	b := quiet()
	b.Background = Background{Low: 1000, High: 1000}
	for _, c := range acquired(t, b, 1) {
		for i, x := range c.TimeMin {
			want := 1000.0
			for _, p := range b.Truth(1) {
				if p.Channel == c.ID {
					want += p.Peak.At(x)
				}
			}
			if math.Abs(c.Intensity[i]-want) > want*1e-7 { // 32 bits
				t.Fatalf("channel %q at %g min: %g, want %g", c.ID, x, c.Intensity[i], want)
			}
		}
	}
}

func TestAcquireRefuses(t *testing.T) {
	for _, tt := range []struct {
		name string
		harm func(b *Batch)
		want string
	}{
		{"width 0", func(b *Batch) { b.Column.SigmaMin = 0 }, "Column.SigmaMin"},
		{"tailing not a number", func(b *Batch) { b.Column.TauMin = math.NaN() }, "Column.TauMin"},
		{"carry-over below 0", func(b *Batch) { b.Carryover = -0.1 }, "Carryover"},
		{"scatter without end", func(b *Batch) { b.Scatter.Ion = math.Inf(1) }, "Scatter.Ion"},
		{"noise below 0", func(b *Batch) { b.Background.Gain = -1 }, "Background.Gain"},
		{"channel twice", func(b *Batch) { b.Channels[1].ID = "a" }, `channel "a" a second time`},
		{"substance twice", func(b *Batch) { b.Substances[1].Name = "analyte" }, `substance "analyte" a second time`},
		{"injection twice", func(b *Batch) { b.Injections[1].ID = "i0" }, `injection "i0" a second time`},
		{"ion without channel", func(b *Batch) { b.Substances[0].Ions[0].Channel = "z" }, `channel "z"`},
		{"amount without substance", func(b *Batch) { b.Injections[1].Amounts[0].Substance = "z" }, `holds "z"`},
		{"channel without points", func(b *Batch) { b.Channels[0].StepMin = 0 }, `channel "a"`},
		{"amount not a number", func(b *Batch) { b.Injections[1].Amounts[0].NGPerML = math.Inf(1) }, "32-bit"},
	} {
		b := small()
		tt.harm(b)
		if _, err := b.Acquire(1); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: error %v, want one with %s", tt.name, err, tt.want)
		}
	}
}

func BenchmarkAcquire(b *testing.B) {
	batch := small()
	b.Run("channels=3/points=181", func(b *testing.B) {
		for b.Loop() {
			if _, err := batch.Acquire(1); err != nil {
				b.Fatal(err)
			}
		}
	})
}
