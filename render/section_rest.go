package render

import (
	"fmt"
	"strings"

	"assaywrit/decision"
)

func (d *document) deviations() {
	rec := d.in.Record
	d.chapter("deviations", d.words.get("deviations-title"))
	if len(rec.Case.Deviations) == 0 {
		d.paragraph(d.words.get("deviations-none"))
	} else {
		var rows [][]string
		for _, x := range rec.Case.Deviations {
			rows = append(rows, []string{when(x.At), x.Text, x.ApprovedBy})
		}
		d.table(table{columns: []column{{head: "Time", share: 2}, {head: "Deviation", share: 6}, {head: "Approved by", share: 1.2}}, rows: rows})
	}
	var rows [][]string
	for _, inj := range rec.Injections {
		for _, m := range inj.Measurements {
			if m.Manual == nil {
				continue
			}
			auto := "no peak"
			if m.Automatic != nil {
				auto = fmt.Sprintf("%.3f to %.3f min, area %s", m.Automatic.StartMin, m.Automatic.EndMin, compact(m.Automatic.Area, 4))
			}
			rows = append(rows, []string{inj.ID + " (" + string(inj.Role) + ")", m.Compound + " " + m.Trace, auto, fmt.Sprintf("%.3f to %.3f min, area %s", m.Peak.StartMin, m.Peak.EndMin, compact(m.Peak.Area, 4)), percentage(m.Manual.AreaChange, 3),
				m.Manual.By + ", " + when(m.Manual.At) + ", approved by " + m.Manual.ApprovedBy, m.Manual.Reason})
		}
	}
	if len(rows) == 0 {
		d.paragraph(d.words.get("manual-none"))
		return
	}
	d.paragraph(d.words.get("manual-note"))
	d.table(table{columns: []column{{head: "Injection", share: 1.4}, {head: "Peak", share: 1.8}, {head: "Automatic", share: 2}, {head: "By hand", share: 2}, {head: "Area changed by", share: 1}, {head: "Who, when", share: 2}, {head: "Why", share: 2.4}}, rows: rows, size: 7.2})
}

func (d *document) allChecks() {
	d.chapter("checks", d.words.get("checks-title"))
	d.paragraph(d.words.get("checks-note"))
	d.checkTable("The case", d.in.Finding.Batch)
	for _, a := range d.in.Finding.Analytes {
		d.checkTable(a.Name, a.Checks)
	}
}

func (d *document) checkTable(title string, checks []decision.Check) {
	d.heading(1, "checks/"+title, title)
	var rows [][]string
	for _, c := range checks {
		kind := "advisory"
		if c.Required {
			kind = "required"
		}
		rows = append(rows, []string{mark(c.Result), kind, c.ID, c.Sentence, c.Clause + " [" + c.Source + "]", strings.Join(c.Evidence, " ")})
	}
	d.table(table{columns: []column{{head: "Result", share: 1}, {head: "Kind", share: 0.9}, {head: "Check", share: 2.2}, {head: "What was found", share: 3.6}, {head: "Clause and source", share: 2.9}, {head: "Values", share: 2.1}}, rows: rows, size: 6.8})
}

func (d *document) filesAndChecking() {
	d.chapter("files", d.words.get("files-title"))
	d.paragraph(d.words.get("check-intro"))
	d.monospaced(d.checkCommands())
	d.paragraph(d.words.get("check-again"))
	d.pairs([][2]string{{"Engine", d.in.Record.Engine.Name + " " + d.in.Record.Engine.Version}})
	d.note("SHA-256 of evidence.json: " + d.in.EvidenceSHA256)
	d.note("SHA-256 of finding.json: " + d.in.FindingSHA256)
	d.paragraph(d.words.get("files-note"))
	var rows [][]string
	for _, f := range d.in.Files {
		rows = append(rows, []string{f.Path, fmt.Sprint(f.Bytes), f.SHA256})
	}
	d.table(table{columns: []column{{head: "File", share: 3.4}, {head: "Bytes", share: 0.9, right: true}, {head: "SHA-256", share: 5.6, mono: true}}, rows: rows, size: 7})
}

// checkCommands are those that check the bundle with general tools.
func (d *document) checkCommands() []string {
	lines := []string{
		"unzip BUNDLE.zip -d bundle && cd bundle",
		"sha256sum -c manifest-sha256.txt",
		"sha256sum -c tagmanifest-sha256.txt",
	}
	for _, s := range d.in.Record.Case.Signatories {
		lines = append(lines, fmt.Sprintf("openssl cms -verify -binary -inform DER -in seal/signatures/%s-%s.p7s -content seal/statement.json -CAfile root.pem -purpose any -out /dev/null", s.Person, s.Meaning))
	}
	return lines
}

func (d *document) glossary() {
	d.chapter("glossary", d.words.get("glossary-title"))
	var rows [][]string
	for _, line := range d.words.paragraphs("glossary") {
		term, meaning, ok := strings.Cut(line, " = ")
		if !ok || strings.Contains(meaning, " = ") {
			term, meaning = "Units", strings.TrimPrefix(line, "Units: ")
		}
		rows = append(rows, []string{term, meaning})
	}
	d.table(table{columns: []column{{head: "Term", share: 2}, {head: "Meaning", share: 5}}, rows: rows, size: 8.5})
	d.down(4)
	d.block("■  "+d.words.get("end"), left, textW, sizeBody, "B", ink)
}
