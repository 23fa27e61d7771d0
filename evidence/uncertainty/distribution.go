package uncertainty

import (
	"fmt"
	"math"
)

// A Distribution is the shape that an input is drawn from; its place and width follow from the input's Value and StdU. The zero value
// is the normal distribution.
type Distribution struct {
	Shape Shape `json:"shape,omitempty"`
	// Top is the width of a trapezoid's top over that of its base, 0 to 1 (0 is a triangle, 1 a rectangle).
	Top float64 `json:"top,omitempty"`
}

// Shape of a distribution.
type Shape string

// The shapes, with the half width a that a standard uncertainty u stands for (JCGM 101:2008, 6.4; from memory).
const (
	Normal      Shape = "normal"
	Student     Shape = "t"           // scaled and shifted, with the input's degrees of freedom ν: u is the scale, as in a type A evaluation, so the standard deviation is u·√(ν/(ν−2)), for ν > 2
	Rectangular Shape = "rectangular" // a = u·√3
	Triangular  Shape = "triangular"  // a = u·√6
	Trapezoidal Shape = "trapezoidal" // a = u·√(6/(1+Top²))
	UShaped     Shape = "u-shaped"    // arc sine: a = u·√2
)

// HalfWidth is the half width of a bounded distribution of standard uncertainty u; ok is false for the others.
func (d Distribution) HalfWidth(u float64) (a float64, ok bool) {
	switch d.Shape {
	case Rectangular:
		return float64(u * math.Sqrt(3)), true
	case Triangular:
		return float64(u * math.Sqrt(6)), true
	case Trapezoidal:
		return float64(u * math.Sqrt(6/(1+float64(d.Top*d.Top)))), true
	case UShaped:
		return float64(u * math.Sqrt2), true
	}
	return 0, false
}

// StandardUncertainty is u of a bounded distribution of half width a; ok is false for the others.
func (d Distribution) StandardUncertainty(a float64) (u float64, ok bool) {
	one, ok := d.HalfWidth(1)
	if !ok {
		return 0, false
	}
	return a / one, true
}

// check refuses shapes that are not known, and widths that mean nothing.
func (in Input) checkDistribution() error {
	switch d := in.Distribution; d.Shape {
	case "", Normal, Rectangular, Triangular, UShaped:
	case Trapezoidal:
		if !(d.Top >= 0 && d.Top <= 1) {
			return fmt.Errorf("input %q: a trapezoid whose top is %g of its base, want 0 to 1", in.Name, d.Top)
		}
	case Student:
		if in.DoF == nil || math.IsInf(*in.DoF, 1) {
			return fmt.Errorf("input %q: a t distribution without finite degrees of freedom", in.Name)
		}
		if *in.DoF <= 2 {
			return fmt.Errorf("input %q: a t distribution with %g degrees of freedom has no standard deviation: want more than 2", in.Name, *in.DoF)
		}
	default:
		return fmt.Errorf("input %q: the distribution %q, want one of: %s, %s, %s, %s, %s, %s", in.Name, d.Shape, Normal, Student, Rectangular, Triangular, Trapezoidal, UShaped)
	}
	return nil
}
