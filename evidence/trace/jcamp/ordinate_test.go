package jcamp

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"
)

// decodeLines decodes one table of the form (X++(Y..Y)) with abscissae from 0 in steps of 1.
func decodeLines(lines string) (Table, error) {
	tables, _, err := Decode("lines", strings.NewReader("##TITLE=t\n##FIRSTX=0\n##DELTAX=1\n##XYDATA=(X++(Y..Y))\n"+lines+"##END=\n"))
	if err != nil {
		return Table{}, err
	}
	return tables[0], nil
}

// TestWorkedExample decodes the ten ordinates with which JCAMP-DX 4.24 shows its forms (table in section 5, from memory).
func TestWorkedExample(t *testing.T) {
	const want = "[1 2 3 3 2 1 0 -1 -2 -3]"
	for form, line := range map[string]string{
		"FIX":                   "0  1  2  3  3  2  1  0 -1 -2 -3",
		"AFFN":                  "0 1 2 3 3 2 1 0 -1 -2 -3",
		"PAC":                   "0+1+2+3+3+2+1+0-1-2-3",
		"SQZ":                   "0ABCCBA@abc",
		"SQZ after AFFN":        "0 1BCCBA@abc",
		"DIF":                   "0AJJ%jjjjjj",
		"DIF after AFFN":        "0 1JJ%jjjjjj",
		"DIFDUP":                "0AJT%jX",
		"DIFDUP after AFFN":     "0 1JT%jX",
		"SQZDUP":                "0ABCTBA@abc",
		"mixed":                 "0 1B+3C2TjA@Sa -2 c",
		"exponents":             "0 10E-01 2 3.0 3 2 1 0 -1.0E+00 -2 -3",
		"with commas":           "0, 1, 2,3 3,2,1, 0,-1, -2, -3",
		"with tabs and comment": "0\t1\t2 3 3 2 1 0 -1 -2 -3 $$ 7 8",
	} {
		if form == "mixed" { // 2 as two SQZ digits would be another number
			line = "0 1B+3CjA@Sa-2c"
		}
		table, err := decodeLines(line + "\n")
		if err != nil || fmt.Sprint(table.Y) != want || len(table.X) != 10 || table.X[9] != 9 {
			t.Errorf("%s %q: got %v, %v, want %s", form, line, table.Y, err, want)
		}
	}
}

// TestChecksAcrossLines: a line that ends in a difference, also repeated, is checked by the next one; one that ends in an ordinate is not.
func TestChecksAcrossLines(t *testing.T) {
	for lines, want := range map[string]string{
		"0AJJ\n2CJ\n":     "[1 2 3 4] 1",
		"0AJT\n2CJ\n3D\n": "[1 2 3 4] 2",
		"0ABC\n3D\n":      "[1 2 3 4] 0",
		"0AJC\n3DJ\n4E\n": "[1 2 3 4 5] 1",
		"0AS\n1BT\n":      "[1 2 2] 0",
		"0AJ\n\n1BJ\n":    "[1 2 3] 1",
		"0AJ\r1BJ\r2C\r":  "[1 2 3] 2",
		"0AJ\r\n1BJ":      "[1 2 3] 1",
	} {
		table, err := decodeLines(lines + "\n")
		if got := fmt.Sprint(table.Y, " ", table.YChecks); err != nil || got != want {
			t.Errorf("%q: got %s, %v, want %s", lines, got, err, want)
		}
	}
}

// first writes a number with a first character that stands for a digit and the sign. plus begins with the character for 0.
func first(n int64, plus, minus string) string {
	digits := strconv.FormatInt(n, 10)
	if n < 0 {
		return string(minus[digits[1]-'1']) + digits[2:]
	}
	return string(plus[digits[0]-'0']) + digits[1:]
}

// encode writes ordinates as DIFDUP, independently of the decoder. Abscissae count the points from 0.
func encode(y []int64, perLine int) string {
	var b strings.Builder
	for start := 0; start < len(y); {
		fmt.Fprintf(&b, "%d%s", start, first(y[start], "@ABCDEFGHI", "abcdefghi"))
		i := start + 1
		for i < len(y) && i < start+perLine {
			d := y[i] - y[i-1]
			n := 1
			for i+n < len(y) && y[i+n]-y[i+n-1] == d {
				n++
			}
			b.WriteString(first(d, "%JKLMNOPQR", "jklmnopqr"))
			if n > 1 {
				b.WriteString(first(int64(n), "?STUVWXYZs", "")) // s stands for 9
			}
			i += n
		}
		b.WriteByte('\n')
		if i == len(y) {
			if i > start+1 {
				fmt.Fprintf(&b, "%d%s\n", i-1, first(y[i-1], "@ABCDEFGHI", "abcdefghi"))
			}
			break
		}
		start = i - 1
		if perLine == 1 {
			start = i
		}
	}
	return b.String()
}

// FuzzDIFDUP writes ordinates, reads them again, and reads all but one character.
func FuzzDIFDUP(f *testing.F) {
	for seed := range uint64(20) {
		f.Add(seed, uint16(seed*7+1), uint8(seed+2), uint16(seed))
	}
	f.Fuzz(func(t *testing.T, seed uint64, n uint16, perLine uint8, drop uint16) {
		r := rand.New(rand.NewPCG(seed, 1))
		y := make([]int64, int(n)%2000+1)
		width := int64(1) << (seed % 40)
		for i := range y {
			if i > 0 && r.IntN(3) > 0 {
				y[i] = y[i-1] + int64(r.IntN(3)-1)*(r.Int64N(width)+1)/2
			} else {
				y[i] = r.Int64N(2*width) - width
			}
		}
		text := encode(y, max(2, int(perLine)))
		table, err := decodeLines(text)
		if err != nil {
			t.Fatalf("%v in\n%s", err, text)
		}
		if len(table.Y) != len(y) {
			t.Fatalf("%d points, want %d", len(table.Y), len(y))
		}
		for i := range y {
			if table.Y[i] != float64(y[i]) || table.X[i] != float64(i) {
				t.Fatalf("point %d: got %v, %v, want %d", i, table.X[i], table.Y[i], y[i])
			}
		}
		at := int(drop) % len(text)
		if table, err := decodeLines(text[:at] + text[at+1:]); err == nil {
			for _, v := range append(table.X, table.Y...) {
				if math.IsNaN(v) || math.IsInf(v, 0) {
					t.Fatal("a number that is none")
				}
			}
		}
	})
}

// TestNumber compares with the conversion of the standard library.
func TestNumber(t *testing.T) {
	for _, text := range []string{"0", "1", "-1", "+2.5", ".5", "7.", "4.2817", "1e3", "1E-3", "-12.5e+2", "9007199254740993", "123456789012345678901234567890", "0.1234567890123456789", "1e22", "1e23", "1e-300", "1e-400", "4.9e-324", "1.7976931348623157e308"} {
		want, _ := strconv.ParseFloat(text, 64)
		if got, ok := whole(text); !ok || got.value != want {
			t.Errorf("%s: got %v, %t, want %v", text, got.value, ok, want)
		}
	}
	for _, text := range []string{"", "-", ".", "1e", "e5", "1e400", "1,5", "NaN", "inf", "0x1", "1_0", " 1", "--1"} {
		if got, ok := whole(text); ok {
			t.Errorf("%q was read as %v", text, got.value)
		}
	}
}
