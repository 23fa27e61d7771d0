// Package render turns an evidence record and a finding into pages. It decides nothing and computes nothing that is reported:
// charts are scaled, things are counted, and numbers rounded for people, in one place (number.go).
//
// The PDFs are the same bytes for the same input and the same build of the program; another release of the compiler may compress
// them otherwise, so they are checked by their hash and never drawn again.
//
// The words stand in package templates. A sign that the font lacks is drawn as its number ("[U+1F600]"), never left out.
package render

import (
	"errors"
	"fmt"
	"io"

	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/trace"
)

// Traces gives the chromatograms behind a record, by the raw file's path and the trace's id in it.
type Traces interface {
	Chromatogram(file, traceID string) (trace.Chromatogram, bool)
}

// A File is one file of the bundle, for the printed list.
type File struct {
	Path   string
	Bytes  int64
	SHA256 string // hex
}

// Input is everything that is drawn. Record, Finding and Traces are needed; the rest may be absent, and what is absent is not shown.
type Input struct {
	Record         *evidence.Record
	Finding        *decision.Finding
	Traces         Traces
	Criteria       *decision.Set // for listing its values
	Files          []File        // the bundle's other files known so far
	EvidenceSHA256 string
	FindingSHA256  string
	Language       string // folder of package templates; "" is "en"
}

func (in Input) check() error {
	switch {
	case in.Record == nil || in.Finding == nil || in.Traces == nil:
		return errors.New("a record, a finding and the traces are needed")
	case len(in.Record.Analytes) != len(in.Finding.Analytes):
		return fmt.Errorf("the record has %d analytes and the finding %d: they are not of one case", len(in.Record.Analytes), len(in.Finding.Analytes))
	case in.Finding.Case != in.Record.Case.Number:
		return fmt.Errorf("the record is of case %q and the finding of case %q", in.Record.Case.Number, in.Finding.Case)
	}
	for k, a := range in.Finding.Analytes {
		if in.Record.Analytes[k].ID != a.Analyte {
			return fmt.Errorf("analyte %d of the record is %q and of the finding %q", k, in.Record.Analytes[k].ID, a.Analyte)
		}
	}
	return nil
}

// begin checks the input and starts a document; title is a key of the templates.
func begin(in Input, title string) (*document, error) {
	if err := in.check(); err != nil {
		return nil, err
	}
	words, err := loadWords(in.Language)
	if err != nil {
		return nil, err
	}
	return newDocument(in, words, words.get(title)), nil
}

// Package writes package.pdf: the whole file of the case, down to every trace. It returns the number of pages.
func Package(w io.Writer, in Input) (pages int, err error) {
	d, err := begin(in, "package.title")
	if err != nil {
		return 0, err
	}
	d.number(d.packageSections())
	d.cover()
	contents := d.page() + 1
	for range d.contentsPages() {
		d.newPage()
	}
	d.play()
	d.end(d.t("package.end"))
	d.contents(contents)
	return d.finish(w)
}

// Finding writes finding.pdf: the case in plain language, on two pages where there is not much to say. It returns the number of pages.
func Finding(w io.Writer, in Input) (pages int, err error) {
	d, err := begin(in, "finding.title")
	if err != nil {
		return 0, err
	}
	d.plainFinding()
	d.end(d.t("finding.end"))
	return d.finish(w)
}
