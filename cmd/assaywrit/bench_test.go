package main

import (
	"bytes"
	"crypto/x509"
	"fmt"
	"os"
	"path/filepath"
	"testing"

	"assaywrit/evidence"
	"assaywrit/evidence/bundle"
	"assaywrit/evidence/casefile"
	"assaywrit/render"
)

// size names what a benchmark works on.
func size(a *assessment) string {
	traces := 0
	for _, inj := range a.evaluation.Record.Injections {
		traces += len(inj.Measurements)
	}
	return fmt.Sprintf("injections=%d/traces=%d", len(a.evaluation.Record.Injections), traces)
}

func BenchmarkLoad(b *testing.B) {
	a := demoAssessment(b)
	fsys := os.DirFS(filepath.Join(demoDir, "case"))
	b.Run(size(a), func(b *testing.B) {
		for b.Loop() {
			if _, err := casefile.Load(fsys); err != nil {
				b.Fatal(err)
			}
		}
	})
}

func BenchmarkEvaluate(b *testing.B) {
	a := demoAssessment(b)
	fsys := os.DirFS(filepath.Join(demoDir, "case"))
	b.Run(size(a), func(b *testing.B) {
		for b.Loop() {
			if _, err := evidence.Evaluate(fsys, a.folder, engine()); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// BenchmarkRender draws both PDFs.
func BenchmarkRender(b *testing.B) {
	a := demoAssessment(b)
	in := render.Input{
		Record: a.evaluation.Record, Finding: a.finding, Traces: a.evaluation, Criteria: a.set,
		EvidenceSHA256: hexSum(a.evidenceJSON), FindingSHA256: hexSum(a.findingJSON),
	}
	b.Run(size(a), func(b *testing.B) {
		for b.Loop() {
			var out bytes.Buffer
			if _, err := render.Finding(&out, in); err != nil {
				b.Fatal(err)
			}
			if _, err := render.Package(&out, in); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// BenchmarkSeal packs a payload that has been rendered already.
func BenchmarkSeal(b *testing.B) {
	a := demoAssessment(b)
	names, content := unzipped(b, demoBundle(b))
	var payload []bundle.Payload
	octets := 0
	for _, name := range names {
		if len(name) > 5 && name[:5] == "data/" {
			payload = append(payload, bundle.Payload{Path: name[5:], Data: content[name]})
			octets += len(content[name])
		}
	}
	b.Run(fmt.Sprintf("files=%d/kB=%d", len(payload), octets/1000), func(b *testing.B) {
		for b.Loop() {
			var out bytes.Buffer
			if _, err := bundle.Write(&out, a.header(), payload); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// BenchmarkWholeCase is the whole of build but for the disk: load, evaluate, decide, render, seal.
func BenchmarkWholeCase(b *testing.B) {
	a := demoAssessment(b)
	fsys := os.DirFS(filepath.Join(demoDir, "case"))
	b.Run(size(a), func(b *testing.B) {
		for b.Loop() {
			again, err := assess(fsys, chosenCriteria)
			if err != nil {
				b.Fatal(err)
			}
			if _, _, err := again.seal(fsys); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// BenchmarkVerify checks files and signatures and runs the evaluation again.
func BenchmarkVerify(b *testing.B) {
	a := demoAssessment(b)
	data := demoBundle(b)
	roots, err := readCertificates([]string{filepath.Join(demoDir, "root.pem")})
	if err != nil {
		b.Fatal(err)
	}
	b.Run(fmt.Sprintf("%s/kB=%d", size(a), len(data)/1000), func(b *testing.B) {
		for b.Loop() {
			verifyOnce(b, data, roots)
		}
	})
}

func verifyOnce(b *testing.B, data []byte, roots []*x509.Certificate) {
	bd, err := bundle.Open(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		b.Fatal(err)
	}
	v := verification{b: bd, roots: roots}
	v.all()
	if v.status() != exitDone {
		b.Fatal(v.seen)
	}
}
