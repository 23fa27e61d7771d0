package main

import (
	"go/build"
	"os/exec"
	"slices"
	"strings"
	"testing"
)

// layers lists the packages from the top down: each may import those after it, never one before it.
var layers = []string{
	"assaywrit/cmd/assaywrit",
	"assaywrit/render",
	"assaywrit/templates",
	"assaywrit/decision",
	"assaywrit/evidence",
	"assaywrit/evidence/simulate/demo",
	"assaywrit/evidence/simulate",
	"assaywrit/evidence/draft",
	"assaywrit/evidence/casefile",
	"assaywrit/evidence/calibration",
	"assaywrit/evidence/validation",
	"assaywrit/evidence/uncertainty",
	"assaywrit/evidence/separation",
	"assaywrit/evidence/peak",
	"assaywrit/evidence/trace/formats",
	"assaywrit/evidence/trace/fullscan",
	"assaywrit/evidence/trace/andi",
	"assaywrit/evidence/trace/netcdf",
	"assaywrit/evidence/trace/jcamp",
	"assaywrit/evidence/trace/mzml",
	"assaywrit/evidence/trace/mzml/inflate",
	"assaywrit/evidence/trace/table",
	"assaywrit/evidence/trace",
	"assaywrit/evidence/bundle",
	"assaywrit/evidence/bundle/identity",
	"assaywrit/evidence/bundle/cms",
	"assaywrit/evidence/canonical",
	"assaywrit/evidence/strictyaml",
	"assaywrit/evidence/units",
	"assaywrit/evidence/strictmath",
}

// TestLayers fails on an arrow that points back, and on a package that the list does not know.
func TestLayers(t *testing.T) {
	out, err := exec.Command("go", "list", "-f", "{{.ImportPath}} {{join .Imports \" \"}}", "assaywrit/...").Output()
	if err != nil {
		t.Fatal(err)
	}
	for _, line := range strings.Split(strings.TrimSpace(string(out)), "\n") {
		fields := strings.Fields(line)
		from := slices.Index(layers, fields[0])
		if from < 0 {
			t.Errorf("package %s has no layer: put it into the list, and into DEVELOPERS.md", fields[0])
			continue
		}
		for _, imported := range fields[1:] {
			if !strings.HasPrefix(imported, "assaywrit/") {
				continue
			}
			if to := slices.Index(layers, imported); to >= 0 && to <= from {
				t.Errorf("%s imports %s, which lies above it", fields[0], imported)
			}
		}
	}
}

// separate lists what a package must not reach by any way: files know nothing of chemistry, and numerical packages nothing
// of files.
var separate = map[string][]string{
	"assaywrit/evidence/bundle":      {"assaywrit/evidence/peak", "assaywrit/evidence/trace", "assaywrit/evidence/casefile", "assaywrit/evidence/calibration"},
	"assaywrit/evidence/peak":        {"os", "io/fs", "assaywrit/evidence/casefile"},
	"assaywrit/evidence/calibration": {"io/fs", "assaywrit/evidence/casefile"},
	"assaywrit/evidence/uncertainty": {"io/fs", "assaywrit/evidence/casefile"},
	"assaywrit/evidence":             {"assaywrit/decision", "assaywrit/render", "assaywrit/evidence/bundle"},
	"assaywrit/decision":             {"assaywrit/render", "assaywrit/evidence/bundle", "assaywrit/evidence/trace/mzml"},
}

func TestSeparate(t *testing.T) {
	for name, never := range separate {
		p, err := build.Import(name, ".", 0)
		if err != nil {
			t.Fatal(err)
		}
		for _, imported := range p.Imports {
			if slices.Contains(never, imported) {
				t.Errorf("%s imports %s, which it must know nothing of", name, imported)
			}
		}
	}
}
