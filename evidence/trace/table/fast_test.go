package table

import (
	"bytes"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

// FuzzPlain: what the fast way reads is what strconv reads, and where it ends belongs to no number any more.
func FuzzPlain(f *testing.F) {
	for _, s := range []string{"0", "-12.50", "123456789012345", "0.000000000000001", ".5", "7.", "-", "1e5", "99999999.9999999"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		v, end, ok := plain([]byte(text), 0, '.')
		if !ok {
			return
		}
		want, err := strconv.ParseFloat(text[:end], 64)
		if err != nil || v != want || math.Signbit(v) != math.Signbit(want) {
			t.Fatalf("%q: %v, want %v (%v)", text[:end], v, want, err)
		}
	})
}

// TestFastIsTheSame reads lines the fast way and the careful way, which takes over where a blank stands beside a number.
func TestFastIsTheSame(t *testing.T) {
	for _, mark := range []byte{'.', ','} {
		layout := Layout{Separator: ';', DecimalMark: mark, HeaderLines: 1, TimeColumn: 2, TimeUnit: "s", Columns: []Column{{Column: 4, ID: "a"}, {Column: 1, ID: "b"}}}
		var plain, blanks strings.Builder
		for _, b := range []*strings.Builder{&plain, &blanks} {
			b.WriteString("a;b;c;d;e\n")
		}
		for i := range 500 {
			values := []string{fmt.Sprint(i*7%13 - 5), fmt.Sprintf("%.4f", float64(i)*0.37+0.01), "text", fmt.Sprintf("%.*f", i%8, float64(i*i)*1.7), ""}
			for k := range values {
				values[k] = strings.ReplaceAll(values[k], ".", string(mark))
			}
			fmt.Fprintln(&plain, strings.Join(values, ";"))
			fmt.Fprintln(&blanks, strings.Join(values, " ;"))
		}
		a, err := Read("a", strings.NewReader(plain.String()), layout)
		if err != nil {
			t.Fatal(err)
		}
		b, err := Read("b", strings.NewReader(blanks.String()), layout)
		if err != nil {
			t.Fatal(err)
		}
		if fmt.Sprint(a.Chromatograms) != fmt.Sprint(b.Chromatograms) || len(a.Chromatograms[0].TimeMin) != 500 {
			t.Errorf("mark %q: the two differ", mark)
		}
	}
}

// TestEncodings reads one table in every encoding; the header holds a letter that each writes its own way.
func TestEncodings(t *testing.T) {
	const text = "Zeit;µAU\r\n1,5;-2\r\n1,6;30,25\r\n"
	wide := func(big bool) string {
		var b bytes.Buffer
		for _, c := range "\ufeff" + text { // all within 16 bits
			if big {
				b.Write([]byte{byte(c >> 8), byte(c)})
			} else {
				b.Write([]byte{byte(c), byte(c >> 8)})
			}
		}
		return b.String()
	}
	layout := Layout{Separator: ';', DecimalMark: ',', HeaderLines: 1, TimeColumn: 1, TimeUnit: "min", Columns: []Column{{Column: 2, ID: "a", Unit: "µAU"}}}
	for _, tt := range []struct{ encoding, text string }{
		{"", text}, {"utf-8", text}, {"utf-8", "\ufeff" + text}, {"utf-16", wide(false)}, {"utf-16", wide(true)}, {"latin-1", strings.Replace(text, "µ", "\xb5", 1)},
	} {
		layout.Encoding = tt.encoding
		f, err := Read("x", strings.NewReader(tt.text), layout)
		if err != nil {
			t.Errorf("%s: %v", tt.encoding, err)
			continue
		}
		want := trace.Chromatogram{ID: "a", Kind: trace.Other, Unit: "µAU", TimeMin: []float64{1.5, 1.6}, Intensity: []float64{-2, 30.25}}
		if fmt.Sprint(f.Chromatograms[0]) != fmt.Sprint(want) {
			t.Errorf("%s: got %+v", tt.encoding, f.Chromatograms[0])
		}
	}
	for _, tt := range []struct{ encoding, text, want string }{
		{"utf-16", text, "1:1: got text without a byte-order mark"},
		{"utf-16", wide(false)[:33], "2:6: got half a character at the end"},
		{"utf-16", "\xff\xfe1\x00\x00\xd8", "1:2: got half a pair of UTF-16"},
		{"latin-1", "\ufeff" + text, "1:1: got a byte-order mark"},
		{"utf-8", strings.Replace(text, "µ", "\xb5", 1), "1:6: got text that is not UTF-8"},
	} {
		layout.Encoding = tt.encoding
		if _, err := Read("x", strings.NewReader(tt.text), layout); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: got %v, want %s", tt.encoding, err, tt.want)
		}
	}
}

// TestBlanks as separators count as one.
func TestBlanks(t *testing.T) {
	layout := Layout{Separator: ' ', DecimalMark: '.', TimeColumn: 1, TimeUnit: "min", Columns: []Column{{Column: 2, ID: "a"}}}
	f, err := Read("x", strings.NewReader("  1.0   5\n  2.0  -6 \n 10.0 700\n"), layout)
	if err != nil || fmt.Sprint(f.Chromatograms[0].TimeMin, f.Chromatograms[0].Intensity) != "[1 2 10] [5 -6 700]" {
		t.Errorf("got %+v, %v", f, err)
	}
	if _, err := Read("x", strings.NewReader("  1.0   5\n  2.0\n"), layout); err == nil || !strings.Contains(err.Error(), "2:1: got a line of 1 fields") {
		t.Errorf("got %v", err)
	}
}
