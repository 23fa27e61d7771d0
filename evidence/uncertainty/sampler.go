package uncertainty

import (
	"fmt"
	"slices"
)

// A sampler draws the inputs of one trial after the other.
type sampler struct {
	inputs []drawn
	joint  []int       // inputs of the multivariate normal distribution, by index
	lower  [][]float64 // its Cholesky factor, over joint
}

// drawn is how one input is drawn.
type drawn struct {
	shape  Shape
	value  float64
	scale  float64 // half width of the bounded, otherwise u
	top    float64
	dof    float64
	single bool // not in joint
}

// newSampler checks the distributions. Correlated inputs must be normal: their joint distribution is not known otherwise.
func newSampler(inputs []Input, r [][]float64) (*sampler, error) {
	s := &sampler{}
	for i, in := range inputs {
		if err := in.checkDistribution(); err != nil {
			return nil, err
		}
		d := drawn{shape: in.Distribution.Shape, value: in.Value, scale: in.StdU, top: in.Distribution.Top, single: true}
		if d.shape == "" {
			d.shape = Normal
		}
		if a, ok := in.Distribution.HalfWidth(in.StdU); ok {
			d.scale = a
		}
		if in.DoF != nil {
			d.dof = *in.DoF
		}
		if r != nil && correlated(r[i], i) {
			if d.shape != Normal {
				return nil, fmt.Errorf("input %q: a correlated input of shape %q: only normal inputs can be drawn jointly", in.Name, d.shape)
			}
			d.single = false
			s.joint = append(s.joint, i)
		}
		s.inputs = append(s.inputs, d)
	}
	sub := make([][]float64, len(s.joint))
	for k, i := range s.joint {
		for _, j := range s.joint {
			sub[k] = append(sub[k], r[i][j])
		}
	}
	var err error
	s.lower, err = cholesky(sub)
	return s, err
}

func correlated(row []float64, i int) bool {
	return slices.ContainsFunc(row[:i], nonZero) || slices.ContainsFunc(row[i+1:], nonZero)
}

func nonZero(v float64) bool { return v != 0 }

// draw fills x with the inputs of the next trial: those drawn jointly first, then the others in their order. z has room for as many
// numbers as are drawn jointly.
func (s *sampler) draw(g *generator, x, z []float64) {
	for k := range s.joint {
		z[k] = g.normal()
	}
	for k, i := range s.joint {
		sum := 0.0
		for j, l := range s.lower[k][:k+1] {
			sum += float64(l * z[j])
		}
		d := &s.inputs[i]
		x[i] = d.value + float64(d.scale*sum)
	}
	for i := range s.inputs {
		d := &s.inputs[i]
		if !d.single {
			continue
		}
		if d.scale == 0 {
			x[i] = d.value
			continue
		}
		x[i] = d.value + float64(d.scale*d.deviate(g))
	}
}

// deviate is a standard deviate of the input's shape.
func (d *drawn) deviate(g *generator) float64 {
	switch d.shape {
	case Normal:
		return g.normal()
	case Student:
		return g.student(d.dof)
	case Rectangular:
		return g.symmetric()
	case Triangular:
		return g.trapezoid(0)
	case Trapezoidal:
		return g.trapezoid(d.top)
	default:
		return g.arcSine()
	}
}
