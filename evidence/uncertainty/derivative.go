package uncertainty

import (
	"fmt"
	"math"
)

// sensitivities are the partial derivatives of the model at the inputs' values: those that are supplied, and the others by Ridders'
// extrapolation of central differences. The first differences span the larger of u and |x|/512 on either side, each next one half of
// that; the estimate with the smallest difference from its neighbours in the table is taken. An input without uncertainty that
// supplies nothing gets 0: nothing depends on it.
//
// Source: C. J. F. Ridders, Adv. Eng. Software 4 (1982) 75-76; JCGM 100:2008, 5.1.3 note 2 (both from memory).
func sensitivities(f Model, inputs []Input) ([]float64, error) {
	x := values(inputs)
	c := make([]float64, len(inputs))
	for i, in := range inputs {
		switch {
		case in.Sensitivity != nil:
			c[i] = *in.Sensitivity
		case in.StdU > 0:
			d, ok := ridders(f, x, i, max(in.StdU, math.Abs(in.Value)/512))
			if !ok {
				return nil, fmt.Errorf("input %q: the model has no finite values around %g, so its sensitivity cannot be worked out: state it", in.Name, in.Value)
			}
			c[i] = d
		}
	}
	return c, nil
}

func values(inputs []Input) []float64 {
	x := make([]float64, len(inputs))
	for i, in := range inputs {
		x[i] = in.Value
	}
	return x
}

// at is the model with one input moved by h. x is as before afterwards.
func at(f Model, x []float64, i int, h float64) float64 {
	old := x[i]
	x[i] = old + h
	y := f(x)
	x[i] = old
	return y
}

// ridders is ∂f/∂x[i]; ok is false where no step gives two finite values.
func ridders(f Model, x []float64, i int, h float64) (best float64, ok bool) {
	const rows = 10
	var table [rows][rows]float64
	least := math.Inf(1)
	filled := 0 // rows with finite values so far
	for try := 0; try < 40 && filled < rows; try++ {
		up, down := x[i]+h, x[i]-h
		d := (at(f, x, i, up-x[i]) - at(f, x, i, down-x[i])) / (up - down)
		h /= 2
		if math.IsNaN(d) || math.IsInf(d, 0) {
			if filled > 0 {
				break
			}
			continue // outside of where the model is defined: try nearer
		}
		table[0][filled] = d
		if filled == 0 {
			best, ok = d, true
		}
		power := 1.0
		for k := 1; k <= filled; k++ {
			power = float64(power * 4)
			table[k][filled] = (float64(table[k-1][filled]*power) - table[k-1][filled-1]) / (power - 1)
			e := max(math.Abs(table[k][filled]-table[k-1][filled]), math.Abs(table[k][filled]-table[k-1][filled-1]))
			if e <= least {
				least, best = e, table[k][filled]
			}
		}
		filled++
	}
	return best, ok
}

// secondOrder is the variance that terms of second order add: ΣΣ [½(∂²f/∂xᵢ∂xⱼ)² + ∂f/∂xᵢ·∂³f/∂xᵢ∂xⱼ²]·u²(xᵢ)·u²(xⱼ), by
// differences over u and u/2 with one extrapolation. It may be below zero.
//
// Source: JCGM 100:2008, 5.1.2 note (from memory): for independent inputs with symmetric distributions.
func secondOrder(f Model, inputs []Input, c []float64) (float64, error) {
	x := values(inputs)
	y := f(x)
	var sum float64
	for i := range inputs {
		for j := range inputs {
			ui, uj := inputs[i].StdU, inputs[j].StdU
			if ui == 0 || uj == 0 {
				continue
			}
			second := extrapolated(func(s float64) float64 {
				return mixedSecond(f, x, y, i, j, float64(s*ui), float64(s*uj)) / float64(s*s)
			})
			third := extrapolated(func(s float64) float64 {
				return mixedThird(f, x, i, j, float64(s*ui), float64(s*uj)) / float64(s*s*s)
			})
			sum += float64(0.5*second*second) + float64(c[i]*ui*third)
		}
	}
	if math.IsNaN(sum) || math.IsInf(sum, 0) {
		return 0, fmt.Errorf("the model has no finite values within two u of its inputs: the terms of second order cannot be worked out")
	}
	return sum, nil
}

// extrapolated removes the error of second order from a difference quotient over a step of 1 and of 1/2.
func extrapolated(d func(s float64) float64) float64 {
	return (float64(4*d(0.5)) - d(1)) / 3
}

// mixedSecond is ∂²f/∂xᵢ∂xⱼ times both steps.
func mixedSecond(f Model, x []float64, y float64, i, j int, hi, hj float64) float64 {
	if i == j {
		return at(f, x, i, hi) - float64(2*y) + at(f, x, i, -hi)
	}
	old := x[i]
	x[i] = old + hi
	d := at(f, x, j, hj) - at(f, x, j, -hj)
	x[i] = old - hi
	d -= at(f, x, j, hj) - at(f, x, j, -hj)
	x[i] = old
	return d / 4
}

// mixedThird is ∂³f/∂xᵢ∂xⱼ² times the steps.
func mixedThird(f Model, x []float64, i, j int, hi, hj float64) float64 {
	if i == j {
		return (at(f, x, i, float64(2*hi)) - float64(2*at(f, x, i, hi)) + float64(2*at(f, x, i, -hi)) - at(f, x, i, -float64(2*hi))) / 2
	}
	old := x[i]
	x[i] = old + hi
	d := at(f, x, j, hj) - float64(2*f(x)) + at(f, x, j, -hj)
	x[i] = old - hi
	d -= at(f, x, j, hj) - float64(2*f(x)) + at(f, x, j, -hj)
	x[i] = old
	return d / 2
}
