package jcamp

import (
	"strconv"

	"assaywrit/evidence/trace"
)

// powers of ten that a float64 holds exactly.
var powers = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22}

// exact is the largest whole number up to which a float64 holds every one.
const exact = 1 << 53

// A figure is a decimal number of the file. Its last digit stands for ten to the power last.
type figure struct {
	value float64
	last  int
}

// unit is what one step of the last digit is worth, or the nearest power of ten that a float64 holds.
func (f figure) unit() float64 {
	if f.last < 0 && f.last >= -22 {
		return 1 / powers[-f.last]
	}
	if f.last >= 0 && f.last <= 22 {
		return powers[f.last]
	}
	v, _ := trace.Decimal("1e" + strconv.Itoa(min(max(f.last, -300), 300)))
	return v
}

// number reads the decimal number at b[i:] in AFFN form and returns where it ends; ok is false where there is none, or one beyond 64 bits.
// packed tells that the letter E may also be a digit of another form: then it begins an exponent only where a sign and two or three digits
// follow, as the standard says (from memory).
func number(b []byte, i int, packed bool) (f figure, end int, ok bool) {
	start, digits, negative := i, 0, false
	var m uint64
	if i < len(b) && (b[i] == '+' || b[i] == '-') {
		negative = b[i] == '-'
		i++
	}
	for ; i < len(b) && b[i]-'0' <= 9; i++ {
		if m < exact {
			m = 10*m + uint64(b[i]-'0')
		} else {
			m = 1 << 63
		}
		digits++
	}
	if i < len(b) && b[i] == '.' {
		for i++; i < len(b) && b[i]-'0' <= 9; i++ {
			if m < exact {
				m = 10*m + uint64(b[i]-'0')
			} else {
				m = 1 << 63
			}
			digits++
			f.last--
		}
	}
	if digits == 0 {
		return figure{}, start, false
	}
	if i < len(b) && (b[i] == 'E' || b[i] == 'e') {
		if e, after := exponent(b, i+1, packed); after > 0 {
			f.last += e
			i = after
		}
	}
	switch {
	case m <= exact && f.last >= 0 && f.last <= 22:
		f.value = float64(float64(m) * powers[f.last])
	case m <= exact && f.last < 0 && f.last >= -22:
		f.value = float64(m) / powers[-f.last]
	default:
		if f.value, ok = trace.Decimal(string(b[start:i])); !ok {
			return figure{}, start, false
		}
		return f, i, true
	}
	if negative {
		f.value = -f.value
	}
	return f, i, true
}

// exponent reads what follows an E. after is 0 where that is no exponent.
func exponent(b []byte, i int, packed bool) (e, after int) {
	negative, signed := false, false
	if i < len(b) && (b[i] == '+' || b[i] == '-') {
		negative, signed = b[i] == '-', true
		i++
	}
	start := i
	for ; i < len(b) && b[i]-'0' <= 9; i++ {
		e = min(10*e+int(b[i]-'0'), 9999)
	}
	if n := i - start; n == 0 || packed && (!signed || n < 2 || n > 3) {
		return 0, 0
	}
	if negative {
		e = -e
	}
	return e, i
}

// whole reads a text that is one number.
func whole(s string) (figure, bool) {
	f, end, ok := number([]byte(s), 0, false)
	return f, ok && end == len(s)
}
