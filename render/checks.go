package render

import (
	"fmt"
	"strconv"
	"strings"

	"assaywrit/decision"
)

func itoa(n int) string { return strconv.Itoa(n) }

// verdict shows a result by sign and word.
func (d *document) verdict(r decision.Result) string {
	switch r {
	case decision.Passed:
		return "✓ " + d.t("passed")
	case decision.Failed:
		return "✗ " + d.t("failed")
	}
	return "– " + d.t("not-applicable")
}

// check finds a check by its id.
func (d *document) check(id string) *decision.Check { return d.byID[id] }

// resultOf is the result of a check, or a dash where there is no such check.
func (d *document) resultOf(id string) string {
	if c := d.check(id); c != nil {
		return d.verdict(c.Result)
	}
	return missing
}

// traceIn is the trace that a check's id names, or "".
func traceIn(id string) string {
	if parts := strings.Split(id, "/"); len(parts) == 4 {
		return parts[2]
	}
	return ""
}

func indexChecks(f *decision.Finding) map[string]*decision.Check {
	byID := map[string]*decision.Check{}
	for i := range f.Batch {
		byID[f.Batch[i].ID] = &f.Batch[i]
	}
	for k := range f.Analytes {
		for i := range f.Analytes[k].Checks {
			byID[f.Analytes[k].Checks[i].ID] = &f.Analytes[k].Checks[i]
		}
	}
	return byID
}

// placeOf is the section in which the values behind a check are shown, or "".
func (d *document) placeOf(c *decision.Check) string {
	for _, p := range c.Evidence {
		if key := d.sectionOf(p, c); key != "" {
			return key
		}
	}
	switch {
	case strings.HasPrefix(c.ID, "case/manual"):
		return "manual"
	case strings.HasPrefix(c.ID, "case/raw-file"):
		return "raw-files"
	case c.Group == "limit":
		return d.known("decision/" + before(c.ID))
	}
	return ""
}

func before(id string) string {
	head, _, _ := strings.Cut(id, "/")
	return head
}

// caseSections tells where the fields of a case are shown.
var caseSections = []struct{ pointer, key string }{
	{"/case/custody", "custody"}, {"/case/sample", "receipt"}, {"/case/materials", "materials"}, {"/case/deviations", "deviations"},
	{"/case/manual_integrations", "manual"}, {"/case/initial_test", "initial"}, {"/case", "sample"}, {"/injections", "raw-files"}, {"/sequence", "batch"}, {"/method", "method"},
}

// analyteParts tells where the fields of an analyte are shown; the first that a pointer begins with counts.
var analyteParts = []struct{ field, key string }{
	{"identifications", "identity/"}, {"reference", "identity/"}, {"internal_standard_responses", "standard/"}, {"blanks", "blanks/"}, {"calibration", "calibration/"},
	{"controls", "controls/"}, {"aliquots", "quantity/"}, {"result/budget", "budget/"}, {"result", "quantity/"}, {"", "quantity/"},
}

func (d *document) sectionOf(pointer string, c *decision.Check) string {
	if c.Group == "limit" {
		if key := d.known("decision/" + before(c.ID)); key != "" {
			return key
		}
	}
	if rest, ok := strings.CutPrefix(pointer, "/analytes/"); ok {
		index, field, _ := strings.Cut(rest, "/")
		k, err := strconv.Atoi(index)
		if err != nil || k < 0 || k >= len(d.in.Record.Analytes) {
			return ""
		}
		for _, p := range analyteParts {
			if strings.HasPrefix(field, p.field) {
				return d.known(p.key + d.in.Record.Analytes[k].ID)
			}
		}
	}
	for _, s := range caseSections {
		if strings.HasPrefix(pointer, s.pointer) {
			return d.known(s.key)
		}
	}
	return ""
}

// known is key, or "" where the document has no such section.
func (d *document) known(key string) string {
	if _, ok := d.numbers[key]; ok {
		return key
	}
	return ""
}

// place is the cell that leads to the section in which the values of a check are shown.
func (d *document) place(c *decision.Check) cell {
	key := d.placeOf(c)
	if key == "" {
		return cell{text: missing}
	}
	return cell{text: d.ref(key), to: key}
}

// found is the cell of a check's sentence, with its id and the pointers to its values below.
func found(c *decision.Check) cell {
	return cell{text: c.Sentence, note: joined("  ·  ", c.ID, strings.Join(c.Evidence, " "))}
}

// distanceText writes how far a value lies from its limit, in per cent of the tolerance; far inside, the number says nothing more.
func distanceText(c *decision.Check) string {
	switch {
	case c == nil:
		return ""
	case c.Distance == nil:
		return missing
	case *c.Distance > 10:
		return "> 1000"
	}
	return percent(*c.Distance, 3)
}

func (d *document) checksIntro() {
	d.paragraph(d.t("checks.intro"))
	all := len(d.in.Finding.Batch)
	for _, a := range d.in.Finding.Analytes {
		all += len(a.Checks)
	}
	d.paragraph(d.t("checks.count", "n", itoa(all)))
}

func (d *document) analyteChecks(k int) {
	d.checkTable(fmt.Sprintf("/analytes/%d/checks", k), d.in.Finding.Analytes[k].Checks)
}

// checkTable lists checks in the order of their clauses: those of one clause stand below it, each with its number in finding.json.
func (d *document) checkTable(pointer string, checks []decision.Check) {
	if len(checks) == 0 {
		d.paragraph(d.t("checks.none"))
		return
	}
	d.note(d.t("checks.pointer", "pointer", pointer))
	var order []string
	groups := map[string][]int{}
	for i, c := range checks {
		key := c.Clause + "  ·  " + c.Source
		if groups[key] == nil {
			order = append(order, key)
		}
		groups[key] = append(groups[key], i)
	}
	var rows []row
	for _, key := range order {
		rows = append(rows, row{over: key})
		for _, i := range groups[key] {
			c := &checks[i]
			rows = append(rows, row{cells: []cell{{text: itoa(i)}, {text: d.verdict(c.Result), note: d.requirement(c.Required)}, found(c), {text: distanceText(c)}, d.place(c)}})
		}
	}
	d.table(table{name: "checks", columns: "rlwrl", rows: rows, size: 7.5})
}
