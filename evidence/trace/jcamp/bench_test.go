package jcamp

import (
	"bytes"
	"fmt"
	"runtime"
	"strings"
	"testing"
)

// traceOf is a chromatogram of n points in DIFDUP form.
func traceOf(n int) []byte {
	y := make([]int64, n)
	for i := range y {
		z := int64(i%500) - 250
		y[i] = 1000 + max(0, 60000-z*z) + int64(i*7919%13)
	}
	header := strings.NewReplacer("NPOINTS= 10", fmt.Sprintf("NPOINTS= %d", n), "FIRSTX= 1.00", "FIRSTX= 0", "LASTX= 1.09", fmt.Sprintf("LASTX= %g", float64(n-1)/100)).Replace(someHeader)
	return []byte(header + "##XYDATA= (X++(Y..Y))\n" + encode(y, 30) + "##END=\n")
}

// pagesOf is a run of n mass spectra.
func pagesOf(n int) []byte {
	times := make([]string, n)
	for i := range times {
		times[i] = fmt.Sprint(i)
	}
	text := run("SECONDS", times...)
	points := strings.Repeat("101.25, 741.0\n", 40)
	return []byte(strings.NewReplacer("NPOINTS= 2", "NPOINTS= 42", "65.2, 20\n", "65.2, 20\n"+points).Replace(text))
}

func BenchmarkRead(b *testing.B) {
	for name, data := range map[string][]byte{"difdup/points=100000": traceOf(100000), "pages=2000/points=84000": pagesOf(2000)} {
		b.Run(name, func(b *testing.B) {
			b.SetBytes(int64(len(data)))
			b.ReportAllocs()
			for b.Loop() {
				if _, err := Read("bench.jdx", bytes.NewReader(data)); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// TestMemory reads files that make much out of little. All that is allocated, freed or not, stays under 16 times the size and 64 MiB; the
// bytes of the file itself are counted.
func TestMemory(t *testing.T) {
	const size = 4 << 20
	head := "##TITLE=t\n##DELTAX=1\n##FIRSTX=0\n"
	many := func(s string) string { return strings.Repeat(s, size/len(s)) }
	for name, text := range map[string]string{
		"repeat":            head + "##XYDATA=(X++(Y..Y))\n0AS999999999999999\n##END=\n",
		"repeat with count": head + "##NPOINTS=1000000000000\n##XYDATA=(X++(Y..Y))\n0A" + strings.Repeat("S99999999", 10) + "\n##END=\n",
		"repeat to limit":   head + "##XYDATA=(X++(Y..Y))\n0AS1048570\n##END=\n",
		"claimed points":    many(head + "##NPOINTS=1000000\n##XYDATA=(X++(Y..Y))\n0AS99999\n##END=\n"),
		"differences":       head + "##XYDATA=(X++(Y..Y))\n0A" + many("%") + "\n##END=\n",
		"half":              head + "##XYDATA=(X++(Y..Y))\n0A" + many("%J0") + "\n##END=\n",
		"short lines":       head + "##XYDATA=(X++(Y..Y))\n" + many("1A\n") + "##END=\n",
		"pairs":             head + "##XYDATA=(XY..XY)\n" + many("1 1\n") + "##END=\n",
		"pages":             "##TITLE=t\n##DATA TYPE=MASS SPECTRUM\n" + many("##PAGE=T=1\n##XYDATA=(XY..XY)\n1 1\n") + "##END=\n",
		"blocks":            many("##TITLE=\n##END=\n"),
		"small blocks":      many("##TITLE=\n##XYPOINTS=(XY..XY)\n1 1\n##END=\n"),
		"records":           "##TITLE=t\n" + many("##ORIGIN=1\n") + "##END=\n",
		"carriage returns":  head + many("\r"),
		"long value":        head + "##OWNER=" + many("\xe9") + "\n##XYDATA=(XY..XY)\n1 1\n##END=\n",
		"variables":         "##TITLE=t\n##SYMBOL=X,Y" + strings.Repeat(",", 60) + "\n" + many("##PAGE=N=1\n##DATA TABLE=(XY..XY)\n1 1\n") + "##END=\n",
		"changed variables": "##TITLE=t\n" + many("##SYMBOL=X,Y"+strings.Repeat(",", 60)+"\n##DATA TABLE=(XY..XY)\n1 1\n") + "##END=\n",
	} {
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		_, err := Read("hostile.jdx", strings.NewReader(text))
		runtime.ReadMemStats(&after)
		used := after.TotalAlloc - before.TotalAlloc
		if most := 16*uint64(len(text)) + 64<<20; used > most {
			t.Errorf("%s: %d bytes allocated for %d, want at most %d (%v)", name, used, len(text), most, err)
		}
		t.Logf("%s: %.1f MiB for %.1f (%v)", name, float64(used)/(1<<20), float64(len(text))/(1<<20), err)
	}
}
