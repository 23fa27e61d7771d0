package casefile

import (
	"fmt"
	"strings"
	"testing"
)

// TestDecimalMark: a number that can be read in two ways, a thousandfold apart, is read only where another number of the file shows
// which way is meant.
func TestDecimalMark(t *testing.T) {
	tests := []struct {
		name, separator string
		amounts         string // of four calibrators
		want            string // as read, or in the problem
	}{
		{"whole numbers", ";", "50 100 500 1000", "[50 100 500 1000]"},
		{"points", ";", "0.5 1.25 10.5 1000", "[0.5 1.25 10.5 1000]"},
		{"commas", ";", "0,5 1,25 10,5 1000", "[0.5 1.25 10.5 1000]"},
		{"commas with three decimals", ";", "0,125 1,250 10,500 100,000", "[0.125 1.25 10.5 100]"},
		{"points with three decimals", "\t", "0.125 1.250 10.500 100.000", "[0.125 1.25 10.5 100]"},
		{"points with three decimals, beside commas between columns", ",", "1.125 1.250 10.500 100.000", "[1.125 1.25 10.5 100]"},
		{"large numbers with commas", ";", "1000,500 1 2 3", "[1000.5 1 2 3]"},
		{"exponents", ";", "1,5E+02 1E+03 2E+03 3E+03", "[150 1000 2000 3000]"},
		{"two ways, comma", ";", "1,200 2,400 4,800 9,600", `3:48: nominal a: got "1,200" … write 1200, or 1,2`},
		{"two ways, point", ";", "1.200 2.400 4.800 9.600", `3:48: nominal a: got "1.200" … write 1200, or 1.2`},
		{"two ways beside whole numbers", "\t", "50 100 500 1,000", `6:48: nominal a: got "1,000" … write 1000, or 1`},
		{"two ways with three real decimals", ";", "1,234 2 3 4", `3:48: nominal a: got "1,234" … write 1234, or 1,2340`},
		{"both marks", ";", "0.5 1,25 10 20", `4:48: nominal a: got "1,25" … other numbers of the file have '.' before their decimals`},
		{"both marks, in two ways", ";", "0,5 1.250 10 20", `4:48: nominal a: got "1.250" … other numbers of the file have ',' before their decimals`},
		{"thousands and decimals", ";", "1.200,5 1 2 3", `3:48: nominal a: got "1.200,5" … without separators of thousands`},
		{"thousands twice", ";", "1.200.000 1 2 3", `3:48: nominal a: got "1.200.000" … without separators of thousands`},
		{"comma between columns", ",", `"1,5" 2 3 4`, `3:48: nominal a: got "1,5" … the comma separates the columns`},
		{"naked comma", ";", ",5 2 3 4", `3:48: nominal a: got ",5" … a zero before`},
		{"zeros in front", ";", "050 2 3 4", `3:48: nominal a: got "050" … zeros in front`},
		{"hexadecimal", ";", "0x50 2 3 4", `3:48: nominal a: got "0x50"`},
		{"infinity", ";", "Inf 2 3 4", `3:48: nominal a: got "Inf"`},
		{"too large", ";", "1E999 2 3 4", `3:48: nominal a: got "1E999"`},
		{"blank inside", ";", "1 200", `3:48: nominal a: got "1 200"`},
	}
	for _, tt := range tests {
		amounts := strings.Fields(tt.amounts)
		if tt.name == "blank inside" {
			amounts = []string{tt.amounts}
		}
		text := "injection,file,role,acquired,operator,nominal a [ng/mL]\nB,raw/b,matrix-blank,2026-03-18T08:00:00+01:00,P-2,\n"
		for i := range amounts {
			text += fmt.Sprintf("%d,raw/%d,calibrator,2026-03-18T08:10:00+01:00,P,AMOUNT%d\n", i, i, i)
		}
		text = strings.ReplaceAll(text, ",", tt.separator)
		for i, a := range amounts {
			text = strings.Replace(text, fmt.Sprintf("AMOUNT%d", i), a, 1)
		}
		rows, _, problems := readSequence("s", []byte(text))
		var got string
		if len(problems) > 0 {
			got = fmt.Sprint(problems[0].Error(), "\n", problems[0].Hint)
		} else {
			var values []float64
			for _, r := range rows[1:] {
				values = append(values, r.Nominal[0].NGPerML)
			}
			got = fmt.Sprint(values)
		}
		for _, part := range strings.Split(tt.want, " … ") {
			if !strings.Contains(got, part) {
				t.Errorf("%s: %s\nwant %s", tt.name, got, tt.want)
			}
		}
	}
}

// TestDilutionShowsTheMark: the mark of one column holds for the others.
func TestDilutionShowsTheMark(t *testing.T) {
	text := "injection;file;role;acquired;operator;dilution;nominal a [ng/mL]\nC;raw/c;calibrator;2026-03-18T08:00:00+01:00;P;;1,200\nS;raw/s;sample;2026-03-18T08:10:00+01:00;P;2,5;\n"
	rows, _, problems := readSequence("s", []byte(text))
	if len(problems) > 0 || rows[0].Nominal[0].NGPerML != 1.2 || rows[1].Dilution != 2.5 {
		t.Errorf("%v %v", rows, problems)
	}
}
