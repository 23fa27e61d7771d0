package decision

import (
	"fmt"
	"slices"
	"time"

	"assaywrit/evidence/casefile"
)

// caseChecks are those that belong to no single analyte.
func (j *judge) caseChecks() {
	j.inForce()
	j.matrix()
	j.sampleCode()
	j.otherCodes()
	j.receipt()
	j.methodInForce()
	j.materials()
	j.order()
	j.files()
	j.manual()
	j.warnings()
	j.history()
	j.deviations()
}

func (j *judge) startCase(name, title string, required bool, evidence ...string) Check {
	return Check{ID: "case/" + name, Group: "case", Title: title, Required: required, Evidence: evidence}
}

// day is the date in a time of RFC 3339, at its own offset; empty where there is no such time.
func day(text string) string {
	t, err := time.Parse(time.RFC3339, text)
	if err != nil {
		return ""
	}
	return t.Format(time.DateOnly)
}

func (j *judge) inForce() {
	c := j.startCase("criteria-in-force", "Criteria in force at collection", true, "/case/sample/collected").custom("the edition in force on the day of collection applies")
	collected := day(j.rec.Case.Sample.CollectedAt)
	if collected == "" {
		j.add(c.missing("The day of collection is not recorded, so that it cannot be told whether the criteria were in force."))
		return
	}
	c = c.passIf(collected >= j.set.EffectiveFrom && (j.set.EffectiveTo == "" || collected <= j.set.EffectiveTo))
	until := "no end stated"
	if j.set.EffectiveTo != "" {
		until = "to " + j.set.EffectiveTo
	}
	c.Sentence = fmt.Sprintf("The sample was collected on %s; the criteria set %s is in force from %s, %s.", collected, j.set.ID, j.set.EffectiveFrom, until)
	j.add(c)
}

func (j *judge) matrix() {
	c := j.startCase("criteria-matrix", "Criteria for this matrix", true, "/case/sample/matrix", "/method/matrix").custom("criteria and method are those for the matrix of the sample")
	sample, method := j.rec.Case.Sample.Matrix, j.rec.Method.Matrix
	c = c.passIf(sample != "" && sample == j.set.Matrix && sample == method)
	j.add(c.says(fmt.Sprintf("Sample, method and criteria set are for %s.", sample), fmt.Sprintf("The sample is %s, the method is for %s, the criteria set for %s.", stated(sample), stated(method), j.set.Matrix)))
}

func stated(text string) string {
	if text == "" {
		return "not stated"
	}
	return text
}

// sampleCode compares the codes of the sample's injections with the case's: those of the sequence, and those inside the raw files,
// where files state one.
func (j *judge) sampleCode() {
	c := j.startCase("sample-code", "Sample code inside the raw files", true).custom("results must link to the sample without a doubt")
	code := j.rec.Case.Sample.Code
	found, wrong := 0, ""
	for i, inj := range j.rec.Injections {
		if inj.Role != casefile.SampleAliquot {
			continue
		}
		if own := j.rec.Sequence[i].SampleCode; own != code {
			wrong = fmt.Sprintf("the sequence states %q for injection %s", own, inj.ID)
			c.Evidence = append(c.Evidence, fmt.Sprintf("/sequence/%d", i))
		}
		if inj.SampleCode == "" {
			continue
		}
		found++
		c.Evidence = append(c.Evidence, fmt.Sprintf("/injections/%d/file_sample_code", i))
		if inj.SampleCode != code {
			wrong = fmt.Sprintf("the raw file %s states %q", inj.File, inj.SampleCode)
		}
	}
	switch {
	case wrong != "":
		c = c.passIf(false)
		c.Sentence = fmt.Sprintf("The case is about the sample %q; %s.", code, wrong)
	case found == 0:
		c = c.notApplicable("The raw files of the sample state no sample code.")
	default:
		c = c.passIf(true)
		c.Sentence = fmt.Sprintf("%d raw files of the sample state the sample code %s.", found, code)
	}
	j.add(c)
}

// otherCodes: a calibrator, control or blank whose raw file states the sample's code has been mixed up with it, or it with the sample.
func (j *judge) otherCodes() {
	c := j.startCase("sample-code-elsewhere", "Sample code in other raw files", true, "/injections").custom("the sample's code stands in its own raw files only").passIf(true)
	c.Sentence = "No raw file of another injection states the code of the sample."
	for i, inj := range j.rec.Injections {
		if inj.Role != casefile.SampleAliquot && inj.Role != casefile.Excluded && inj.SampleCode != "" && inj.SampleCode == j.rec.Case.Sample.Code {
			c = c.passIf(false)
			c.Evidence = append(c.Evidence, fmt.Sprintf("/injections/%d/file_sample_code", i))
			c.Sentence = fmt.Sprintf("The raw file %s of the %s %s states the code of the sample.", inj.File, inj.Role, inj.ID)
		}
	}
	j.add(c)
}

func (j *judge) receipt() {
	rule := j.set.Case.Receipt
	c := j.startCase("receipt", "Receipt in the chain of custody", rule.Required, "/case/sample/received").cited(rule.Cite)
	sample := j.rec.Case.Sample
	received, err := time.Parse(time.RFC3339, sample.ReceivedAt)
	if err != nil {
		j.add(c.missing("The time of receipt is not recorded."))
		return
	}
	i := slices.IndexFunc(j.rec.Case.Custody, func(e casefile.CustodyEvent) bool {
		at, err := time.Parse(time.RFC3339, e.At)
		return err == nil && at.Equal(received) && e.Item == sample.Container
	})
	if i >= 0 {
		c.Evidence = append(c.Evidence, fmt.Sprintf("/case/custody/%d", i))
	}
	j.add(c.passIf(i >= 0).says("The chain of custody has an event at the time of receipt for the "+sample.Container+".",
		"The chain of custody has no event at the time of receipt, "+sample.ReceivedAt+", for the "+sample.Container+"."))
}

// acquired is the first and the last day of the batch; empty where the sequence does not tell.
func (j *judge) acquired() (first, last string) {
	if len(j.rec.Sequence) == 0 {
		return "", ""
	}
	return day(j.rec.Sequence[0].AcquiredAt), day(j.rec.Sequence[len(j.rec.Sequence)-1].AcquiredAt)
}

func (j *judge) methodInForce() {
	from := j.rec.Method.EffectiveFrom
	c := j.startCase("method-in-force", "Method in force at acquisition", false, field("/method", "effective_from", from != "")).custom("a procedure is used from its first day on")
	first, _ := j.acquired()
	if from == "" || first == "" {
		j.add(c.notApplicable("The method states no first day."))
		return
	}
	c = c.passIf(from <= first)
	c.Sentence = fmt.Sprintf("The method %s, version %s, is in force from %s; the batch was acquired from %s on.", j.rec.Method.ID, j.rec.Method.Version, from, first)
	j.add(c)
}

func (j *judge) materials() {
	rule := j.set.Case.Material
	_, last := j.acquired()
	if len(j.rec.Case.Materials) == 0 || last == "" {
		j.add(j.startCase("materials", "Reference materials in date", rule.Required, "/case").cited(rule.Cite).notApplicable("The case lists no reference materials."))
		return
	}
	for i, m := range j.rec.Case.Materials {
		c := j.startCase(fmt.Sprintf("material-in-date/%d", i+1), "Reference material in date", rule.Required, fmt.Sprintf("/case/materials/%d/expires", i)).cited(rule.Cite)
		if m.Expires == "" {
			j.add(c.missing(fmt.Sprintf("%s, lot %s, has no stated last day of use.", m.Name, m.Lot)))
			continue
		}
		c = c.passIf(m.Expires >= last)
		c.Sentence = fmt.Sprintf("%s, lot %s, expires on %s; the batch was acquired until %s.", m.Name, m.Lot, m.Expires, last)
		j.add(c)
	}
}

// order compares the times that the raw files state themselves with the order of the sequence.
func (j *judge) order() {
	c := j.startCase("acquisition-order", "Raw files in the order of the sequence", false).custom("clocks and order of acquisition agree")
	var before time.Time
	n, wrong := 0, ""
	for i, inj := range j.rec.Injections {
		at, err := time.Parse(time.RFC3339, inj.StartTime)
		if err != nil {
			continue
		}
		n++
		if !at.After(before) {
			wrong = inj.File
			c.Evidence = append(c.Evidence, fmt.Sprintf("/injections/%d/file_start_time", i))
		}
		before = at
	}
	if c.Evidence == nil {
		c.Evidence = []string{"/injections"}
	}
	if n < 2 {
		j.add(c.notApplicable("The raw files state no times with their offset."))
		return
	}
	j.add(c.passIf(wrong == "").says(fmt.Sprintf("The times that %d raw files state follow the order of the sequence.", n),
		fmt.Sprintf("The raw file %s states a time that is not after that of the injection before.", wrong)))
}

func (j *judge) warnings() {
	c := j.startCase("raw-file-warnings", "Raw files as they say they are", false).custom("what is wrong with a file is reported").passIf(true)
	c.Sentence = "No raw file raised a warning when it was read."
	first := ""
	for i, inj := range j.rec.Injections {
		if len(inj.Warnings) == 0 {
			continue
		}
		c.Evidence = append(c.Evidence, fmt.Sprintf("/injections/%d/warnings", i))
		if first == "" {
			first = fmt.Sprintf("%s: %s", inj.File, inj.Warnings[0].Detail)
		}
	}
	if n := len(c.Evidence); n > 0 {
		c = c.passIf(false)
		c.Sentence = fmt.Sprintf("%s raised warnings; the first is %s.", plural(n, "raw file"), first)
	} else {
		c.Evidence = []string{"/injections"}
	}
	j.add(c)
}

func plural(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

func (j *judge) deviations() {
	n, m := len(j.rec.Case.Deviations), len(j.rec.Case.Sample.Irregularities)
	c := j.startCase("deviations", "Deviations and irregularities", false, "/case/deviations").custom("deviations are stated").passIf(n+m == 0)
	if m > 0 {
		c.Evidence = append(c.Evidence, "/case/sample/irregularities")
	}
	j.add(c.says("No deviation from the method and no irregularity of the sample is stated.",
		fmt.Sprintf("Stated are: %s from the method, %d irregularities of the sample.", plural(n, "deviation"), m)))
}
