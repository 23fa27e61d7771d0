package render

import (
	"fmt"
	"strings"
)

func (d *document) howToCheck() {
	d.paragraph(d.t("files.intro"))
	d.commands(d.checkCommands())
	d.paragraph(d.t("files.chain"))
	d.paragraph(d.t("files.again"))
	d.pairs([]pair{
		{d.t("label.engine"), d.in.Record.Engine.Name + " " + d.in.Record.Engine.Version},
		{d.t("label.evidence-sha256"), d.in.EvidenceSHA256},
		{d.t("label.finding-sha256"), d.in.FindingSHA256},
		{d.t("label.criteria-sha256"), d.in.Finding.Criteria.SHA256},
	})
	d.paragraph(d.t("files.number"))
}

// checkCommands are those that check the bundle with general tools.
func (d *document) checkCommands() []string {
	list := []string{
		"unzip " + bundleName(d.in.Record.Case.Number) + ".zip -d bundle && cd bundle",
		"sha256sum -c manifest-sha256.txt",
		"sha256sum -c tagmanifest-sha256.txt",
	}
	for _, s := range d.in.Record.Case.Signatories {
		list = append(list, fmt.Sprintf("openssl cms -verify -binary -inform DER -in seal/signatures/%s-%s.p7s -content seal/statement.json -CAfile root.pem -purpose any -out /dev/null", s.Person, s.Meaning))
	}
	return list
}

// bundleName is a case number as a file may be called.
func bundleName(number string) string {
	return strings.Map(func(r rune) rune {
		if r == '/' {
			return '-'
		}
		return r
	}, number)
}

// manifest lists every file that was in the bundle when this one was drawn.
func (d *document) manifest() {
	d.paragraph(d.t("manifest.intro"))
	if len(d.in.Files) == 0 {
		d.paragraph(d.t("manifest.none"))
		return
	}
	var rows []row
	total := int64(0)
	for _, f := range d.in.Files {
		total += f.Bytes
		rows = append(rows, row{cells: cells(f.Path, fmt.Sprint(f.Bytes), f.SHA256)})
	}
	d.table(table{name: "files", columns: "wrm", rows: rows, size: 7.4})
	d.note(d.t("manifest.total", "n", itoa(len(d.in.Files)), "bytes", fmt.Sprint(total)))
}

// glossary explains words, abbreviations, units and signs.
func (d *document) glossary() {
	for _, part := range []string{"terms", "abbreviations", "units", "signs"} {
		var rows []row
		for _, line := range strings.Split(d.words.get("glossary."+part), "\n") {
			term, meaning, ok := strings.Cut(line, " = ")
			if !ok {
				panic(fmt.Sprintf("render: internal error: glossary.%s: %q has no meaning", part, line))
			}
			rows = append(rows, row{cells: []cell{{text: term}, {text: meaning}}})
		}
		heads := []string{d.t("glossary." + part + "-title"), d.t("glossary.meaning")}
		d.table(table{heads: heads, columns: "lw", rows: rows, size: 8.5})
	}
}
