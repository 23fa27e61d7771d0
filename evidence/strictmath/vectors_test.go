package strictmath

import (
	"encoding/csv"
	"fmt"
	"math"
	"math/big"
	"os"
	"strconv"
	"testing"
)

// TestAgainstVectors compares with testdata/vectors.csv: 30-digit values by mpmath 1.3, written by testdata/vectors.py. The limits are
// in units of the last place, which for a subnormal result is that of the subnormals.
func TestAgainstVectors(t *testing.T) {
	one := func(f func(float64) float64) func(x, y float64) float64 {
		return func(x, _ float64) float64 { return f(x) }
	}
	functions := map[string]struct {
		f     func(x, y float64) float64
		limit func(x, y float64) float64
	}{
		"Exp":          {one(Exp), ulpsAt(1)},
		"Log":          {one(Log), ulpsAt(1)},
		"Pow":          {Pow, ulpsAt(0.51)},
		"Erf":          {one(Erf), ulpsAt(1)},
		"Erfc":         {one(Erfc), ulpsAt(2.5)},
		"Erfcx":        {one(Erfcx), ulpsAt(3)},
		"NormCDF":      {one(NormCDF), ulpsAt(4)},
		"NormSF":       {one(NormSF), ulpsAt(4)},
		"NormQuantile": {one(NormQuantile), ulpsAt(3)},
		"TSF":          {TSF, ulpsAt(9)},
		"TQuantile":    {TQuantile, func(_, nu float64) float64 { return 9 * max(1, 0.5/nu) }},
	}
	type found struct {
		n           int
		worst, x, y float64
	}
	worst := map[string]*found{}
	for _, v := range vectors(t) {
		f, ok := functions[v.function]
		if !ok {
			t.Fatalf("no function %q", v.function)
		}
		w := worst[v.function]
		if w == nil {
			w = &found{}
			worst[v.function] = w
		}
		w.n++
		got := f.f(v.x, v.y)
		e := math.Inf(1)
		if rounded, _ := v.want.Float64(); math.IsInf(rounded, 0) && got == rounded {
			e = 0 // rightly overflows
		} else if !math.IsNaN(got) && !math.IsInf(got, 0) {
			e = ulps(got, v.want)
		}
		if !(e <= f.limit(v.x, v.y)) {
			t.Errorf("%s(%g, %g) = %g, want %.20g: %.3g ulp", v.function, v.x, v.y, got, v.want, e)
		}
		if e > w.worst {
			w.worst, w.x, w.y = e, v.x, v.y
		}
	}
	for name := range functions {
		w := worst[name]
		if w == nil {
			t.Errorf("no vector of %s", name)
			continue
		}
		t.Logf("%-12s %4d values, worst %.2f ulp at %g %g", name, w.n, w.worst, w.x, w.y)
	}
}

func ulpsAt(limit float64) func(x, y float64) float64 {
	return func(float64, float64) float64 { return limit }
}

type vector struct {
	function string
	x, y     float64
	want     *big.Float
}

func vectors(t testing.TB) []vector {
	t.Helper()
	f, err := os.Open("testdata/vectors.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil || len(rows) < 4000 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	var out []vector
	for i, r := range rows[1:] {
		v := vector{function: r[0], x: number(t, r[1])}
		if r[2] != "" {
			v.y = number(t, r[2])
		}
		want, _, err := big.ParseFloat(r[3], 10, 200, big.ToNearestEven)
		if err != nil {
			t.Fatal(fmt.Errorf("row %d: %w", i+2, err))
		}
		v.want = want
		out = append(out, v)
	}
	return out
}

func number(t testing.TB, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}
