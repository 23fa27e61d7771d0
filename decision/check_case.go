package decision

import (
	"fmt"
	"time"

	"assaywrit/evidence/casefile"
)

// caseChecks are those that belong to no single analyte.
func (j *judge) caseChecks() {
	j.inForce()
	j.sampleCode()
	j.receipt()
	j.materials()
	j.manual()
	j.warnings()
	j.deviations()
}

func (j *judge) inForce() {
	collected := j.rec.Case.Sample.CollectedAt
	c := Check{ID: "case/criteria-in-force", Group: "case", Title: "Criteria in force at collection", Required: true, Evidence: []string{"/case/sample/collected"}}
	c = c.custom("the edition in force on the day of collection applies")
	day := collected[:min(len(collected), len(time.DateOnly))]
	c = c.passIf(day >= j.set.EffectiveFrom && (j.set.EffectiveTo == "" || day <= j.set.EffectiveTo))
	until := "no end stated"
	if j.set.EffectiveTo != "" {
		until = "to " + j.set.EffectiveTo
	}
	c.Sentence = fmt.Sprintf("The sample was collected on %s; the criteria set %s is in force from %s, %s.", day, j.set.ID, j.set.EffectiveFrom, until)
	j.add(c)
}

// sampleCode compares the codes inside the raw files with the case's, where files state one.
func (j *judge) sampleCode() {
	c := Check{ID: "case/sample-code", Group: "case", Title: "Sample code inside the raw files", Required: true, Result: NotApplicable}
	c = c.custom("results must link to the sample without a doubt")
	stated, wrong := 0, ""
	for i, inj := range j.rec.Injections {
		if inj.Role != casefile.SampleAliquot || inj.SampleCode == "" {
			continue
		}
		stated++
		c.Evidence = append(c.Evidence, fmt.Sprintf("/injections/%d/file_sample_code", i))
		if inj.SampleCode != j.rec.Case.Sample.Code {
			wrong = fmt.Sprintf("%s states %q", inj.File, inj.SampleCode)
		}
	}
	switch {
	case stated == 0:
		c.Sentence = "The raw files of the sample state no sample code."
	case wrong != "":
		c.Result = Failed
		c.Sentence = fmt.Sprintf("The raw file %s, the case is about %q.", wrong, j.rec.Case.Sample.Code)
	default:
		c.Result = Passed
		c.Sentence = fmt.Sprintf("%d raw files of the sample state the sample code %s.", stated, j.rec.Case.Sample.Code)
	}
	j.add(c)
}

func (j *judge) receipt() {
	c := Check{ID: "case/receipt", Group: "case", Title: "Receipt in the chain of custody", Evidence: []string{"/case/sample/received"}}
	c = c.custom("receipt is an event of the chain of custody")
	received, _ := time.Parse(time.RFC3339, j.rec.Case.Sample.ReceivedAt)
	found := false
	for i, e := range j.rec.Case.Custody {
		at, _ := time.Parse(time.RFC3339, e.At)
		if at.Equal(received) && e.Item == j.rec.Case.Sample.Container {
			found = true
			c.Evidence = append(c.Evidence, fmt.Sprintf("/case/custody/%d", i))
		}
	}
	c = c.passIf(found)
	c.Sentence = "The chain of custody has an event at the time of receipt for the " + j.rec.Case.Sample.Container + "."
	if !found {
		c.Sentence = "The chain of custody has no event at the time of receipt, " + j.rec.Case.Sample.ReceivedAt + ", for the " + j.rec.Case.Sample.Container + "."
	}
	j.add(c)
}

func (j *judge) materials() {
	if len(j.rec.Case.Materials) == 0 || len(j.rec.Sequence) == 0 {
		c := Check{ID: "case/materials", Group: "case", Title: "Reference materials in date", Result: NotApplicable, Sentence: "The case lists no reference materials."}
		j.add(c.custom("reference materials are used before they expire"))
		return
	}
	last := j.rec.Sequence[len(j.rec.Sequence)-1].AcquiredAt
	day := last[:min(len(last), len(time.DateOnly))]
	for i, m := range j.rec.Case.Materials {
		c := Check{ID: fmt.Sprintf("case/material-in-date/%d", i+1), Group: "case", Title: "Reference material in date", Evidence: []string{fmt.Sprintf("/case/materials/%d/expires", i)}}
		c = c.custom("reference materials are used before they expire").passIf(m.Expires >= day)
		c.Sentence = fmt.Sprintf("%s, lot %s, expires on %s; the batch was acquired until %s.", m.Name, m.Lot, m.Expires, day)
		j.add(c)
	}
}

// manual raises integrations set by hand, those on calibrators and controls by themselves.
func (j *judge) manual() {
	c := Check{ID: "case/manual-integration", Group: "case", Title: "Integrations set by hand", Result: Passed, Sentence: "No peak was integrated by hand."}
	onControls := c
	onControls.ID, onControls.Title, onControls.Sentence = "case/manual-integration/controls", "Integrations set by hand on calibrators and controls", "No calibrator or control was integrated by hand."
	for i, inj := range j.rec.Injections {
		for k, m := range inj.Measurements {
			if m.Manual == nil {
				continue
			}
			at := fmt.Sprintf("/injections/%d/measurements/%d/manual", i, k)
			c.Evidence, c.Result = append(c.Evidence, at), Failed
			if inj.Role != casefile.SampleAliquot {
				onControls.Evidence, onControls.Result = append(onControls.Evidence, at), Failed
			}
		}
	}
	if c.Result == Failed {
		c.Sentence = fmt.Sprintf("%d peaks were integrated by hand; the automatic results stand beside them.", len(c.Evidence))
	}
	if onControls.Result == Failed {
		onControls.Sentence = fmt.Sprintf("%d of them belong to calibrators, controls or blanks.", len(onControls.Evidence))
	}
	j.add(c.custom("every integration set by hand is shown"))
	j.add(onControls.custom("integrations set by hand on calibrators and controls are raised"))
}

func (j *judge) warnings() {
	c := Check{ID: "case/raw-file-warnings", Group: "case", Title: "Raw files as they say they are", Result: Passed, Sentence: "No raw file raised a warning when it was read."}
	for i, inj := range j.rec.Injections {
		if len(inj.Warnings) > 0 {
			c.Result = Failed
			c.Evidence = append(c.Evidence, fmt.Sprintf("/injections/%d/warnings", i))
			c.Sentence = fmt.Sprintf("%s: %s.", inj.File, inj.Warnings[0].Detail)
		}
	}
	j.add(c.custom("what is wrong with a file is reported"))
}

func (j *judge) deviations() {
	c := Check{ID: "case/deviations", Group: "case", Title: "Deviations and irregularities", Evidence: []string{"/case/deviations"}}
	n := len(j.rec.Case.Deviations) + len(j.rec.Case.Sample.Irregularities)
	c = c.custom("deviations are stated").passIf(n == 0)
	c.Sentence = "No deviation from the method and no irregularity of the sample is stated."
	if n > 0 {
		c.Sentence = fmt.Sprintf("%d deviations or irregularities are stated; they are listed in the package.", n)
	}
	j.add(c)
}
