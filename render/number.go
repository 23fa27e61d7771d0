package render

import (
	"math"
	"strconv"
	"strings"
	"time"

	"assaywrit/decision"
	evunits "assaywrit/evidence/units"
)

// Every number that people read is written by the functions of this file, and every rounding to significant digits is
// decision.Text, which the finding's sentences use as well. What is rounded here is never read back.

const missing = "–"

// number writes a value with so many significant digits; very small and very large ones with a power of ten.
func number(v float64, digits int) string { return typeset(decision.Text(v, digits)) }

// typeset gives a number the minus sign and the power of ten that people read.
func typeset(s string) string {
	mantissa, exp, ok := strings.Cut(s, "e")
	if ok {
		if n, err := strconv.Atoi(exp); err == nil {
			s = mantissa + "×10" + superscript(n)
		}
	}
	if strings.HasPrefix(s, "-") {
		s = "−" + s[1:]
	}
	return s
}

// fixed writes a value with so many decimals.
func fixed(v float64, decimals int) string {
	s := strconv.FormatFloat(v, 'f', decimals, 64)
	if strings.Trim(s, "-0.") == "" {
		s = strings.TrimPrefix(s, "-")
	}
	return typeset(s)
}

// signed is fixed with a sign before what is not zero.
func signed(v float64, decimals int) string {
	s := fixed(v, decimals)
	if !strings.HasPrefix(s, "−") && strings.Trim(s, "0.") != "" {
		return "+" + s
	}
	return s
}

// plain writes a value as it was stated, in its shortest decimal.
func plain(v float64) string { return typeset(strconv.FormatFloat(v, 'f', -1, 64)) }

// statedPercent writes a stated fraction in per cent, without the tail that binary arithmetic would give it.
func statedPercent(v float64) string { return number(v*100, 12) + " %" }

// percent writes a fraction in per cent, without the sign.
func percent(v float64, digits int) string { return number(v*100, digits) }

// powered writes areas and heights: up to five digits plain, with a power of ten beyond.
func powered(v float64, digits int) string {
	if a := math.Abs(v); a >= 1e5 || a > 0 && a < 1e-3 {
		exp := int(math.Floor(math.Log10(a)))
		text := decision.Text(v/math.Pow(10, float64(exp)), digits)
		if strings.HasPrefix(strings.TrimPrefix(text, "-"), "10") { // 9.9996 rounds up
			exp++
			text = decision.Text(v/math.Pow(10, float64(exp)), digits)
		}
		return typeset(text) + "×10" + superscript(exp)
	}
	return number(v, digits)
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

// opt writes what may be missing.
func opt[T any](v *T, write func(T) string) string {
	if v == nil {
		return missing
	}
	return write(*v)
}

func optNumber(v *float64, digits int) string {
	return opt(v, func(x float64) string { return number(x, digits) })
}

func optFixed(v *float64, decimals int) string {
	return opt(v, func(x float64) string { return fixed(x, decimals) })
}

func optSigned(v *float64, decimals int) string {
	return opt(v, func(x float64) string { return signed(x, decimals) })
}

func optPercent(v *float64, digits int) string {
	return opt(v, func(x float64) string { return percent(x, digits) })
}

// withU writes a value and its uncertainty to the same place (GUM 7.2.6).
func withU(v, u float64) (value, uncertainty string) {
	value, uncertainty = decision.TextWithU(v, u)
	return typeset(value), typeset(uncertainty)
}

// probability writes a probability so that it never looks certain.
func probability(p float64) string {
	switch {
	case p > 0.9999:
		return "> 99.99 %"
	case p < 0.0001:
		return "< 0.01 %"
	}
	return number(p*100, 4) + " %"
}

// inUnit converts ng/mL into the unit that people read.
func inUnit(v float64, unit string) float64 {
	x, err := evunits.Concentration.In(v, unit)
	if err != nil {
		panic("render: internal error: " + err.Error()) // the case file has checked the unit
	}
	return x
}

// unitText writes a unit with its micro sign.
func unitText(u string) string {
	if strings.HasPrefix(u, "ug/") || strings.HasPrefix(u, "uL") {
		return "µ" + u[1:]
	}
	return u
}

// when writes a time of the record for people: date, time to the minute (or second, where it has one), offset.
func when(text string) string {
	t, err := time.Parse(time.RFC3339, text)
	if err != nil {
		return text
	}
	if t.Second() != 0 {
		return t.Format("2006-01-02 15:04:05\u00a0-07:00")
	}
	return t.Format("2006-01-02 15:04\u00a0-07:00")
}
