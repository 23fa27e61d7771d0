package peak

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// Published weights: Savitzky and Golay (1964), table I (from memory): 5 points 17, 12, -3 over 35; 7 points 7, 6, 3, -2 over 21;
// 9 points 59, 54, 39, 14, -21 over 231.
func TestPublishedWeights(t *testing.T) {
	for m, want := range map[int][]float64{
		5: {17. / 35, 12. / 35, -3. / 35},
		7: {7. / 21, 6. / 21, 3. / 21, -2. / 21},
		9: {59. / 231, 54. / 231, 39. / 231, 14. / 231, -21. / 231},
	} {
		w := evenWeights(m)
		for k := range want {
			if math.Abs(w[k]-want[k]) > 1e-15 {
				t.Errorf("%d points, weight %d: %v, want %v", m, k, w[k], want[k])
			}
		}
	}
}

// Uneven times: the parabola fitted by gonum's QR decomposition gives the same values.
func TestUnevenSmoothing(t *testing.T) {
	const n, m = 60, 9
	rng := seeded(4)
	x, y, s := make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range x {
		x[i] = 3 + 0.01*(float64(i)+0.8*rng.Float64())
		y[i] = 1000 + 50*rng.NormFloat64()
	}
	smooth(x, y, s, m)
	for i := range x {
		from, degree := i-m/2, 2
		if from < 0 || from+m > n {
			from, degree = min(max(from, 0), n-m), 1
		}
		a := mat.NewDense(m, degree+1, nil)
		b := mat.NewVecDense(m, nil)
		for k := range m {
			for d := range degree + 1 {
				a.Set(k, d, math.Pow((x[from+k]-x[i])*100, float64(d)))
			}
			b.SetVec(k, y[from+k])
		}
		var c mat.VecDense
		if err := c.SolveVec(a, b); err != nil {
			t.Fatal(err)
		}
		if math.Abs(s[i]-c.AtVec(0)) > 1e-8 {
			t.Errorf("point %d: %v, want %v", i, s[i], c.AtVec(0))
		}
	}
}

// Even and nearly even times give nearly the same.
func TestEvenSmoothing(t *testing.T) {
	const n = 40
	rng := seeded(4)
	x, z, y := make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range x {
		x[i] = 0.01 * float64(i)
		z[i] = x[i] + 0.0001*rng.Float64()
		y[i] = 1000 + 50*rng.NormFloat64()
	}
	a, b := make([]float64, n), make([]float64, n)
	smooth(x, y, a, 9)
	smooth(z, y, b, 9)
	if !even(x) || even(z) {
		t.Fatal("the two ways were not both taken")
	}
	for i := range a {
		if math.Abs(a[i]-b[i]) > 3 {
			t.Errorf("point %d: %v and %v", i, a[i], b[i])
		}
	}
}
