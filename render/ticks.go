package render

import (
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/plot"
)

// ticks puts a few marks at steps of 1, 2 or 5 times a power of ten.
type ticks struct{ most int }

func (t ticks) Ticks(low, high float64) []plot.Tick {
	span := high - low
	if !(span > 0) || math.IsInf(span, 0) {
		return nil
	}
	step := niceStep(span / float64(t.most))
	var list []plot.Tick
	for k := math.Ceil(low / step); k*step <= high+step*1e-9; k++ {
		v := k * step
		list = append(list, plot.Tick{Value: v, Label: axisNumber(v, step)})
	}
	return list
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

// axisNumber writes a tick's value: plain up to five digits, with a power of ten beyond.
func axisNumber(v, step float64) string {
	if math.Abs(v) < step/1e6 {
		return "0"
	}
	if a := math.Abs(v); a >= 1e5 || a < 1e-3 {
		exp := int(math.Floor(math.Log10(a) + 1e-9))
		m := strconv.FormatFloat(math.Round(v/math.Pow(10, float64(exp))*100)/100, 'f', -1, 64)
		return m + "×10" + superscript(exp)
	}
	decimals := max(0, -int(math.Floor(math.Log10(step)+1e-9)))
	return strconv.FormatFloat(v, 'f', decimals, 64)
}

func superscript(n int) string {
	var b strings.Builder
	for _, r := range strconv.Itoa(n) {
		if r == '-' {
			b.WriteRune('⁻')
		} else {
			b.WriteRune([]rune("⁰¹²³⁴⁵⁶⁷⁸⁹")[r-'0'])
		}
	}
	return b.String()
}

// compact writes areas and heights: up to five digits plain, with a power of ten beyond.
func compact(v float64, digits int) string {
	if a := math.Abs(v); a >= 1e5 || a > 0 && a < 1e-3 {
		exp := int(math.Floor(math.Log10(a)))
		return number(v/math.Pow(10, float64(exp)), digits) + "×10" + superscript(exp)
	}
	return number(v, digits)
}
