package jcamp

import (
	"fmt"
	"strconv"
)

// An encoding is a form of ordinates whose first character stands for a digit, and its sign, too. From memory of version 4.24, section 5:
//
//	        0  1  2  3  4  5  6  7  8  9
//	SQZ  +  @  A  B  C  D  E  F  G  H  I     the ordinate
//	SQZ  −     a  b  c  d  e  f  g  h  i
//	DIF  +  %  J  K  L  M  N  O  P  Q  R     the difference from the ordinate before
//	DIF  −     j  k  l  m  n  o  p  q  r
//	DUP        S  T  U  V  W  X  Y  Z  s     how many times the number before stands there, itself included
type encoding byte

const (
	affn encoding = iota // or PAC, which begins with a digit, a sign or a point as well
	sqz
	dif
	dup
	none
)

// leads tells of each first character its encoding and digit.
var leads = func() (t [256]struct {
	of    encoding
	digit int8
}) {
	for i := range t {
		t[i].of = none
	}
	for _, c := range []byte("+-.0123456789") {
		t[c].of = affn
	}
	for i, c := range []byte("@ABCDEFGHI") {
		t[c].of, t[c].digit = sqz, int8(i)
	}
	for i, c := range []byte("abcdefghi") {
		t[c].of, t[c].digit = sqz, -int8(i+1)
	}
	for i, c := range []byte("%JKLMNOPQR") {
		t[c].of, t[c].digit = dif, int8(i)
	}
	for i, c := range []byte("jklmnopqr") {
		t[c].of, t[c].digit = dif, -int8(i+1)
	}
	for i, c := range []byte("STUVWXYZs") {
		t[c].of, t[c].digit = dup, int8(i+1)
	}
	return t
}()

// ordinates reads the ordinates of (X++(Y..Y)), line by line.
type ordinates struct {
	y        []float64
	limit    int
	last     float64 // the ordinate read last
	step     float64 // the difference read last
	dif      bool    // whether the ordinate read last was a difference, also when repeated
	checks   int     // Y-checks that held
	decimals int     // most decimals of any
}

// A fault is what is wrong at a byte of a line.
type fault struct {
	at              int
	got, want, hint string
	full            bool // there are too many points
	before          bool // it is the line before that is wrong
}

const numberTooLarge = "a whole number up to 9007199254740992"

// line reads what follows the abscissa in b[i:]. checked tells whether the first ordinate was the Y-check of the line before.
func (o *ordinates) line(b []byte, i int) (checked bool, f *fault) {
	first, comma := true, false
	difBefore := o.dif
	for i < len(b) {
		c := b[i]
		if blank(c) || c == ',' {
			if c == ',' && comma {
				return checked, &fault{at: i, got: "a comma without an ordinate", want: "an ordinate between commas"}
			}
			comma = comma || c == ','
			i++
			continue
		}
		comma = false
		lead := leads[c]
		start := i
		switch lead.of {
		case affn:
			fig, end, ok := number(b, i, true)
			if !ok {
				return checked, &fault{at: i, got: clipped(b[i:]), want: "a number"}
			}
			if fig.last < 0 && end < len(b)-1 && (b[end]|0x20) == 'e' && b[end+1]-'0' <= 9 {
				return checked, &fault{at: i, got: clipped(b[i:]), want: "an exponent with a sign and two or three digits", hint: "E is also a digit of the form SQZ: write ordinates without exponents"}
			}
			o.decimals = max(o.decimals, -fig.last)
			o.last, o.dif = fig.value, false
			i = end
		case sqz, dif:
			n, end, ok := leading(b, i+1, lead.digit)
			if !ok {
				return checked, &fault{at: i, got: clipped(b[i:]), want: numberTooLarge}
			}
			i = end
			if lead.of == sqz {
				o.last, o.dif = n, false
				break
			}
			if first {
				return checked, &fault{at: start, got: fmt.Sprintf("%s, a difference", clipped(b[start:end])), want: "an ordinate at the beginning of a line"}
			}
			o.last += n
			o.step, o.dif = n, true
			if o.last > exact || o.last < -exact {
				return checked, &fault{at: start, got: clipped(b[start:end]), want: numberTooLarge}
			}
		case dup:
			n, end, ok := leading(b, i+1, lead.digit)
			if !ok || first || n < 1 {
				return checked, &fault{at: start, got: fmt.Sprintf("%s, a repeat count", clipped(b[start:])), want: "one from 1 to 9007199254740992 after an ordinate of the line"}
			}
			i = end
			if f := o.repeat(int(n)-1, start); f != nil {
				return checked, f
			}
			continue
		default:
			return checked, &fault{at: i, got: clipped(b[i : i+1]), want: "an ordinate in AFFN, PAC, SQZ, DIF or DUP form", hint: hintOf(c)}
		}
		if first && difBefore {
			first, checked = false, true
			if before := o.y[len(o.y)-1]; o.last != before {
				return checked, &fault{before: true, got: fmt.Sprintf("the ordinate %s at the end of the line", plain(before)),
					want: fmt.Sprintf("%s, with which the next line begins (Y-check)", plain(o.last)), hint: "the file is damaged in this line, or the first ordinate of the next: " + exportHint}
			}
			o.checks++
			continue
		}
		first = false
		if len(o.y) >= o.limit {
			return checked, &fault{at: start, full: true}
		}
		o.y = append(o.y, o.last)
	}
	if first {
		return checked, &fault{at: len(b), got: "a line without ordinates", want: "an ordinate after the abscissa"}
	}
	return checked, nil
}

// repeat puts the ordinate read last, or the difference, n more times.
func (o *ordinates) repeat(n, at int) *fault {
	if n > o.limit-len(o.y) {
		return &fault{at: at, full: true}
	}
	for range n {
		if o.dif {
			o.last += o.step
			if o.last > exact || o.last < -exact {
				return &fault{at: at, got: "an ordinate of " + plain(o.last), want: numberTooLarge}
			}
		}
		o.y = append(o.y, o.last)
	}
	return nil
}

// leading reads the digits after a first one, which carries the sign.
func leading(b []byte, i int, first int8) (v float64, end int, ok bool) {
	m, negative := int64(first), first < 0
	if negative {
		m = -m
	}
	for ; i < len(b) && b[i]-'0' <= 9; i++ {
		if m = 10*m + int64(b[i]-'0'); m > exact {
			return 0, i, false
		}
	}
	if negative {
		m = -m
	}
	return float64(m), i, true
}

func hintOf(c byte) string {
	switch c {
	case '?':
		return "the file marks an ordinate as missing; such tables are not read"
	case ';':
		return "semicolons stand between points of the form (XY..XY) only"
	}
	return exportHint
}

func plain(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) }

// clipped quotes the beginning of what stands in a line.
func clipped(b []byte) string { return strconv.Quote(string(b[:min(len(b), 20)])) }
