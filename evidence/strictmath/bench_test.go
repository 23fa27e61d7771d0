package strictmath

import (
	"fmt"
	"testing"
)

func BenchmarkFunctions(b *testing.B) {
	for _, f := range []struct {
		name string
		f    func(float64) float64
	}{
		{"Exp", Exp}, {"Log", Log}, {"Pow", func(x float64) float64 { return Pow(x, 2.5) }}, {"Erf", Erf}, {"Erfc", Erfc}, {"Erfcx", Erfcx}, {"NormQuantile", func(x float64) float64 { return NormQuantile(x / 3) }},
		{"TSF", func(x float64) float64 { return TSF(x, 10) }}, {"TQuantile", func(x float64) float64 { return TQuantile(x/3, 10) }},
	} {
		b.Run("function="+f.name, func(b *testing.B) {
			x := 0.0
			for b.Loop() {
				x += 1e-3
				if x > 2.9 {
					x = 1e-3
				}
				f.f(x)
			}
		})
	}
}

func BenchmarkDot(b *testing.B) {
	for _, n := range []int{10, 10000} {
		x, y := between(n, -1, 1), between(n+1, -1, 1)[:n]
		b.Run(fmt.Sprintf("terms=%d", n), func(b *testing.B) {
			for b.Loop() {
				Dot(x, y)
			}
		})
	}
}

func BenchmarkWeightedLeastSquares(b *testing.B) {
	for _, size := range []struct{ rows, columns int }{{8, 2}, {30, 2}, {1000, 2}, {1000, 6}} {
		rows := make([][]float64, size.rows)
		x := between(size.rows, -1, 1)
		for i := range rows {
			p := 1.0
			for range size.columns {
				rows[i] = append(rows[i], p)
				p = float64(p * x[i])
			}
		}
		y := between(size.rows+1, 0, 1)[:size.rows]
		b.Run(fmt.Sprintf("rows=%d/columns=%d", size.rows, size.columns), func(b *testing.B) {
			for b.Loop() {
				if _, err := WeightedLeastSquares(rows, y, nil); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
