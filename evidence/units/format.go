package units

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"
)

// In converts a value in the family's base unit into another of its units, for people; the shortest decimal of the value is
// scaled, so that 1200 ng/mL is 1.2 ug/mL.
func (f Family) In(value float64, symbol string) (float64, error) {
	u, ok := f.unit(symbol)
	if !ok {
		return 0, fmt.Errorf("got unit %q, want %s", symbol, f.Want())
	}
	r, ok := new(big.Rat).SetString(strconv.FormatFloat(value, 'e', -1, 64))
	if !ok {
		return 0, fmt.Errorf("got %v, want a finite number", value)
	}
	v, _ := r.Quo(r, ratio(u)).Float64()
	if math.IsInf(v, 0) || (v == 0) != (r.Sign() == 0) {
		return 0, fmt.Errorf("got %v %s, want a number within the range of a double in %s", value, f.base, symbol)
	}
	return v, nil
}

// Format writes a value in the family's base unit in another of its units, with the symbol after it: the shortest decimal of
// the value, its point shifted. Parse reads the same value back, except where the unit holds a factor of 60.
func (f Family) Format(value float64, symbol string) (string, error) {
	u, ok := f.unit(symbol)
	if !ok {
		return "", fmt.Errorf("got unit %q, want %s", symbol, f.Want())
	}
	if math.IsNaN(value) || math.IsInf(value, 0) {
		return "", fmt.Errorf("got %v, want a finite number", value)
	}
	shift := -u.exp
	if u.num != 1 || u.den != 1 {
		v, err := f.In(value, symbol)
		if err != nil {
			return "", err
		}
		value, shift = v, 0
	}
	return decimal(value, shift) + " " + u.symbol, nil
}

// decimal writes the shortest decimal of value·10^shift: in full where that is short, else with an exponent.
func decimal(value float64, shift int) string {
	if value == 0 {
		return "0"
	}
	text := strconv.FormatFloat(math.Abs(value), 'e', -1, 64)
	mantissa, exponent, _ := strings.Cut(text, "e")
	digits := strings.Replace(mantissa, ".", "", 1)
	e, err := strconv.Atoi(exponent)
	if err != nil {
		panic("units: internal error: number " + text)
	}
	e += shift
	sign := ""
	if value < 0 {
		sign = "-"
	}
	switch {
	case e < -7 || e > 20:
		if len(digits) > 1 {
			digits = digits[:1] + "." + digits[1:]
		}
		return fmt.Sprintf("%s%se%d", sign, digits, e)
	case e < 0:
		return sign + "0." + strings.Repeat("0", -e-1) + digits
	case e+1 >= len(digits):
		return sign + digits + strings.Repeat("0", e+1-len(digits))
	}
	return sign + digits[:e+1] + "." + digits[e+1:]
}
