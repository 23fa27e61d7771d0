package uncertainty

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// A Model is a measurement model y = f(x₁ … x_N). It must give the same value for the same inputs, keep nothing of x, and may be
// called from several goroutines at once. Where it is not defined it returns NaN.
type Model func(x []float64) float64

// An Input is one input quantity of a model. StdU is in the unit of Value.
type Input struct {
	Name  string  `json:"name"`
	Type  string  `json:"type"` // "A" or "B" (GUM 4.2, 4.3)
	Value float64 `json:"value"`
	StdU  float64 `json:"std_u"`
	// DoF is required of type A. Absent of type B it counts as infinite, and the result says so.
	DoF    *float64 `json:"degrees_of_freedom,omitempty"`
	Source string   `json:"source"`
	// Sensitivity is ∂f/∂x where it is known; absent, it is worked out from the model.
	Sensitivity *float64 `json:"sensitivity,omitempty"`
	// Distribution is what the Monte Carlo method draws from. First-order propagation needs StdU alone.
	Distribution Distribution `json:"distribution"`
	// Together names a set of simultaneous observations that inputs were evaluated from (as in GUM H.2): their correlation then
	// has the degrees of freedom that they share.
	Together string `json:"together,omitempty"`
}

// A Correlation is the correlation coefficient of two inputs, by their names.
type Correlation struct {
	A string  `json:"a"`
	B string  `json:"b"`
	R float64 `json:"r"`
}

// ErrNotCorrelation is the error for coefficients that no set of quantities can have.
var ErrNotCorrelation = errors.New("the correlation coefficients contradict each other: their matrix is not positive semidefinite")

// checkInputs refuses what cannot be used, by name.
func checkInputs(inputs []Input) error {
	if len(inputs) == 0 {
		return errors.New("a model without inputs: want at least one")
	}
	for i, in := range inputs {
		switch {
		case in.Name == "":
			return fmt.Errorf("input %d has no name", i+1)
		case slices.ContainsFunc(inputs[:i], func(o Input) bool { return o.Name == in.Name }):
			return fmt.Errorf("input %q: a second one of that name", in.Name)
		case in.Type != "A" && in.Type != "B":
			return fmt.Errorf("input %q: type %q, want A or B", in.Name, in.Type)
		case math.IsNaN(in.Value) || math.IsInf(in.Value, 0) || !(in.StdU >= 0) || math.IsInf(in.StdU, 0):
			return fmt.Errorf("input %q: %g with u = %g, want finite numbers and u of zero or more", in.Name, in.Value, in.StdU)
		case in.DoF != nil && !(*in.DoF > 0):
			return fmt.Errorf("input %q: %g degrees of freedom, want more than zero", in.Name, *in.DoF)
		case in.DoF == nil && in.Type == "A" && in.StdU > 0:
			return fmt.Errorf("input %q: type A without degrees of freedom: state them (number of observations less parameters)", in.Name)
		case in.Sensitivity != nil && (math.IsNaN(*in.Sensitivity) || math.IsInf(*in.Sensitivity, 0)):
			return fmt.Errorf("input %q: a sensitivity of %g, want a finite one", in.Name, *in.Sensitivity)
		}
	}
	return nil
}

// correlationMatrix makes the matrix of the inputs, with ones on its diagonal; nil where no two are correlated.
func correlationMatrix(inputs []Input, correlations []Correlation) ([][]float64, error) {
	if len(correlations) == 0 {
		return nil, nil
	}
	n := len(inputs)
	r := make([][]float64, n)
	for i := range r {
		r[i] = make([]float64, n)
		r[i][i] = 1
	}
	index := func(name string) int { return slices.IndexFunc(inputs, func(in Input) bool { return in.Name == name }) }
	seen := map[[2]int]bool{}
	for _, c := range correlations {
		i, j := index(c.A), index(c.B)
		switch {
		case i < 0 || j < 0:
			return nil, fmt.Errorf("a correlation of %q with %q: want the names of two inputs", c.A, c.B)
		case i == j:
			return nil, fmt.Errorf("a correlation of %q with itself", c.A)
		case seen[[2]int{min(i, j), max(i, j)}]:
			return nil, fmt.Errorf("a second correlation of %q with %q", c.A, c.B)
		case !(c.R >= -1 && c.R <= 1):
			return nil, fmt.Errorf("a correlation of %g between %q and %q: want -1 to 1", c.R, c.A, c.B)
		}
		seen[[2]int{min(i, j), max(i, j)}] = true
		r[i][j], r[j][i] = c.R, c.R
	}
	if _, err := cholesky(r); err != nil {
		return nil, err
	}
	return r, nil
}

// cholesky is the lower triangle L with L·Lᵀ = r, for a matrix with ones on its diagonal. A pivot that is 0 within rounding gives a
// column of zeros, so that coefficients of ±1 are allowed.
//
// Source: G. H. Golub and C. F. Van Loan, Matrix Computations, 4th ed. (2013), 4.2 (from memory).
func cholesky(r [][]float64) ([][]float64, error) {
	const rounding = 1e-12
	n := len(r)
	l := make([][]float64, n)
	for i := range l {
		l[i] = make([]float64, n)
		for j := 0; j <= i; j++ {
			s := r[i][j]
			for k := range j {
				s -= float64(l[i][k] * l[j][k])
			}
			switch {
			case i == j && s < -rounding:
				return nil, ErrNotCorrelation
			case i == j && s > rounding:
				l[i][i] = math.Sqrt(s)
			case i == j:
				l[i][i] = 0
			case l[j][j] > 0:
				l[i][j] = s / l[j][j]
			case math.Abs(s) > 1e-6:
				return nil, ErrNotCorrelation
			}
		}
	}
	return l, nil
}
