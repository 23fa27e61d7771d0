package decision

import (
	"math"
	"math/big"
	"strconv"
	"strings"

	"assaywrit/evidence/units"
)

// Text writes v for people with at most a number of significant digits, rounded half to even, without an exponent from 0.0001 to
// 10^9. A value that has fewer digits is written as it is: 5, not 5.00.
func Text(v float64, digits int) string {
	if v == 0 {
		return "0"
	}
	if short := strconv.FormatFloat(v, 'f', -1, 64); len(strings.Trim(strings.Replace(strings.TrimLeft(short, "-0."), ".", "", 1), "0")) < digits && math.Abs(v) >= 1e-4 && math.Abs(v) < 1e9 {
		return short
	}
	r := roundValue(v, "half-even", digits)
	if a := math.Abs(r); a < 1e-4 || a >= 1e9 {
		return strconv.FormatFloat(r, 'e', digits-1, 64)
	}
	return fixed(r, places(r, digits))
}

// places is the number of decimals that leave digits significant digits of r, none for large numbers.
func places(r float64, digits int) int {
	text := strconv.FormatFloat(math.Abs(r), 'e', -1, 64)
	exp, _ := strconv.Atoi(text[strings.IndexByte(text, 'e')+1:])
	return max(0, digits-1-exp)
}

func fixed(v float64, decimals int) string { return decimal(v).FloatString(decimals) }

// TextWithU writes a value and its uncertainty for people: the uncertainty to two significant digits and the value to the same
// place (GUM 7.2.6).
func TextWithU(v, u float64) (value, uncertainty string) {
	if !(u > 0) {
		return Text(v, 3), Text(u, 2)
	}
	ru := roundValue(u, "half-even", 2)
	unit := significant(ru, 2)
	q := new(big.Rat).Quo(decimal(v), unit)
	rounded := new(big.Rat).Mul(roundHalfEven(q), unit)
	decimals := places(ru, 2)
	return rounded.FloatString(decimals), fixed(ru, decimals)
}

// A shower makes a figure of a number, with more digits than usual where it is asked to.
type shower func(v float64, more int) *Figure

// figure is a number with its text for people.
func figure(v float64, unit string, digits int) *Figure {
	text := Text(v, digits)
	if unit != "" {
		text += " " + unit
	}
	return &Figure{Value: v, Unit: unit, Text: text}
}

func count(v float64, _ int) *Figure        { return figure(v, "", 12) }
func ratio(v float64, more int) *Figure     { return figure(v, "", 3+more) }
func nanograms(v float64, more int) *Figure { return figure(v, "ng/mL", 4+more) }

func minutes(v float64, more int) *Figure {
	return &Figure{Value: v, Unit: "min", Text: fixed(v, 3+more) + " min"}
}

// relative is a quotient near 1.
func relative(v float64, more int) *Figure { return &Figure{Value: v, Text: fixed(v, 4+more)} }

// percent is a fraction shown in per cent.
func percent(v float64, more int) *Figure {
	shown, _ := mul(v, 100)
	return &Figure{Value: v, Unit: "1", Text: Text(shown, 3+more) + " %"}
}

// inUnit keeps a concentration in ng/mL and shows it in the unit of the method.
func inUnit(unit string) shower {
	return func(v float64, more int) *Figure {
		f := nanograms(v, more)
		if shown, err := units.Concentration.In(v, unit); err == nil {
			f.Text = Text(shown, 4+more) + " " + unit
		}
		return f
	}
}

// read is the number that a figure's text shows.
func read(f *Figure) float64 {
	text, _, _ := strings.Cut(f.Text, " ")
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		panic("decision: internal error: figure " + f.Text)
	}
	return v
}

// apart shows a value beside its limits with as many digits as it takes to tell them apart: a value that lies beyond a limit never
// reads as the limit.
func apart(show shower, v float64, limits ...float64) (value *Figure, shown []*Figure) {
	for more := 0; ; more++ {
		value, shown = show(v, more), nil
		same := false
		for _, l := range limits {
			f := show(l, more)
			shown = append(shown, f)
			same = same || l != v && read(f) == read(value)
		}
		if !same || more > 17 {
			return value, shown
		}
	}
}
