package render

import (
	"math"
	"strconv"

	"gonum.org/v1/plot"
)

// ticks puts a few marks at steps of 1, 2 or 5 times a power of ten.
type ticks struct{ most int }

func (t ticks) Ticks(low, high float64) []plot.Tick {
	values, step := steps(low, high, t.most)
	list := make([]plot.Tick, len(values))
	for i, v := range values {
		list[i] = plot.Tick{Value: v, Label: axisNumber(v, step)}
	}
	return list
}

// steps are the values at which marks stand, at most one more than asked for, and their distance.
func steps(low, high float64, most int) (values []float64, step float64) {
	span := high - low
	if !(span > 0) || math.IsInf(span, 0) {
		return nil, 0
	}
	step = niceStep(span / float64(most))
	for k := math.Ceil(low/step - 1e-9); k*step <= high+step*1e-9; k++ {
		values = append(values, k*step)
	}
	return values, step
}

// niceStep is the next step of 1, 2 or 5 times a power of ten that is not below raw.
func niceStep(raw float64) float64 {
	p := math.Pow(10, math.Floor(math.Log10(raw)))
	for _, m := range []float64{1, 2, 5} {
		if m*p >= raw*(1-1e-9) {
			return m * p
		}
	}
	return 10 * p
}

// axisNumber writes the value of a mark, with as many decimals as its step needs: plain up to five digits, with a power of ten beyond.
func axisNumber(v, step float64) string {
	if math.Abs(v) < step/1e6 {
		return "0"
	}
	if a := math.Abs(v); a >= 1e5 || a < 1e-3 {
		exp := int(math.Floor(math.Log10(a) + 1e-9))
		m := strconv.FormatFloat(math.Round(v/math.Pow(10, float64(exp))*100)/100, 'f', -1, 64)
		return typeset(m) + "×10" + superscript(exp)
	}
	return fixed(v, max(0, -int(math.Floor(math.Log10(step)+1e-9))))
}
