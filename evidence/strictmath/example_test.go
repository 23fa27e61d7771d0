package strictmath_test

import (
	"fmt"

	"assaywrit/evidence/strictmath"
)

func ExampleSum() {
	// In plain addition the ones would be lost beside 10^100.
	fmt.Println(strictmath.Sum([]float64{1, 1e100, 1, -1e100}))
	// Output: 2
}

func ExamplePow() {
	fmt.Println(strictmath.Pow(10, 3), strictmath.Pow(9, 0.5))
	// Output: 1000 3
}

func ExampleNormQuantile() {
	// The factors of a one-sided and of a two-sided 95 % statement with infinitely many degrees of freedom.
	fmt.Printf("%.3f %.3f\n", strictmath.NormQuantile(0.95), strictmath.NormQuantile(0.975))
	// Output: 1.645 1.960
}

func ExampleTQuantile() {
	// A two-sided 95 % statement with ten degrees of freedom.
	fmt.Printf("%.3f\n", strictmath.TQuantile(0.975, 10))
	// Output: 2.228
}

func ExampleWeightedLeastSquares() {
	// y = 1 + 2x, the third response with a hundredth of the weight of the others.
	rows := [][]float64{{1, 0}, {1, 1}, {1, 2}, {1, 3}}
	s, err := strictmath.WeightedLeastSquares(rows, []float64{1, 3, 6, 7}, []float64{1, 1, 0.01, 1})
	if err != nil {
		panic(err)
	}
	fmt.Printf("%.3f %.3f, %d degrees of freedom\n", s.Coef[0], s.Coef[1], s.DoF)
	// Output: 1.001 2.001, 2 degrees of freedom
}
