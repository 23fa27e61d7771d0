package fullscan

import (
	"os"
	"os/exec"
	"strconv"
	"strings"
	"testing"
)

// plainReader is an mzML reader such as one writes in an afternoon: ElementTree, base64, zlib and numpy. It sums all intensities.
const plainReader = `
import sys, base64, zlib, numpy
import xml.etree.ElementTree as ET
ns = "{http://psi.hupo.org/ms/mzml}"
total = 0.0
for event, spectrum in ET.iterparse(sys.argv[1]):
    if spectrum.tag != ns + "spectrum":
        continue
    for array in spectrum.iter(ns + "binaryDataArray"):
        terms = {p.get("accession") for p in array.iter(ns + "cvParam")}
        raw = zlib.decompress(base64.b64decode(array.find(ns + "binary").text))
        values = numpy.frombuffer(raw, "<f8" if "MS:1000523" in terms else "<f4")
        if "MS:1000515" in terms:
            total += float(values.sum(dtype="f8"))
    spectrum.clear()
print(repr(total))
`

// BenchmarkAgainstPython reads every array of a run here and by a plain reader in Python (target: ten times as fast on two cores).
func BenchmarkAgainstPython(b *testing.B) {
	python := ""
	for _, name := range []string{"/usr/bin/python3", "python3"} {
		if path, err := exec.LookPath(name); err == nil && exec.Command(path, "-c", "import numpy").Run() == nil {
			python = path
			break
		}
	}
	if python == "" {
		b.Skip("python3 with numpy is not on this machine")
	}
	path := runFile(b, 100<<20)
	sum := 0.0
	b.Run("by=reader", func(b *testing.B) {
		b.SetBytes(size(b, path))
		for b.Loop() {
			var err error
			if sum, err = total(path); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("by=python", func(b *testing.B) {
		b.SetBytes(size(b, path))
		for b.Loop() {
			c := exec.Command(python, "-c", plainReader, path)
			c.Stderr = os.Stderr
			out, err := c.Output()
			if err != nil {
				b.Fatal(err)
			}
			if got, err := strconv.ParseFloat(strings.TrimSpace(string(out)), 64); err != nil || got < sum*(1-1e-6) || got > sum*(1+1e-6) {
				b.Fatalf("the plain reader finds %s, want %g", out, sum)
			}
		}
	})
}
