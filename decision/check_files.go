package decision

import (
	"fmt"
	"slices"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
)

// files are the checks of the raw files against each other and against the sequence.
func (j *judge) files() {
	j.agreement("raw-files-apart", "Each injection with data of its own", true, "no two injections share their data",
		"No two injections share their data.", evidence.SameFile, evidence.SameTraces)
	j.agreement("sample-code-sequence", "Sample codes inside the raw files and in the sequence", true, "results must link to the sample without a doubt",
		"No raw file states another sample code than the sequence.", evidence.OtherCode)
	j.agreement("one-instrument", "One instrument and one acquisition method", true, "a batch is acquired on one instrument by one method",
		"No raw file states another instrument or acquisition method than the others.", evidence.OtherInstrument, evidence.OtherMethod)
	j.agreement("start-times", "Times inside the raw files and in the sequence", false, "clocks and order of acquisition agree",
		"No raw file states a time that contradicts the sequence.", evidence.OtherStart)
	j.agreement("one-software", "One acquisition software", false, "a batch is acquired with one version of the software",
		"No raw file states another acquisition software than the others.", evidence.OtherSoftware)
}

// agreement fails where the record holds a cross-check of one of the codes. What the files do not state cannot contradict anything:
// the sentence claims no more than that.
func (j *judge) agreement(name, title string, required bool, rule, passed string, codes ...string) {
	c := j.startCase(name, title, required).custom(rule).passIf(true)
	c.Sentence = passed
	n, first := 0, ""
	for i, x := range j.rec.CrossChecks {
		if !slices.Contains(codes, x.Code) {
			continue
		}
		c.Evidence = append(c.Evidence, fmt.Sprintf("/cross_checks/%d", i))
		if n++; n == 1 {
			first = x.Detail
		}
	}
	switch {
	case n == 1:
		c.Sentence = fmt.Sprintf("The raw files contradict this: %s.", first)
	case n > 1:
		c.Sentence = fmt.Sprintf("The raw files contradict this %d times; the first: %s.", n, first)
	default:
		c.Evidence = []string{"/injections"}
	}
	j.add(c.passIf(n == 0))
}

// Faults of a recorded peak: with these its area is not what was there.
var peakFaults = []string{peak.FlagSaturated, peak.FlagCutAtStart, peak.FlagCutAtEnd, evidence.GapInPeak, evidence.NotDivided}

// recorded: the peaks that an analyte's result rests on were recorded as a whole, in the sample, the calibrators and the controls.
func (b *batchJudge) recorded() {
	c := b.start("peaks-recorded", "Peaks recorded as a whole", true).custom("an area needs a peak that was recorded from its start to its end, below the detector's limit").passIf(true)
	advice := b.start("trace-quality", "Quality of the traces", false).custom("what a trace shows of its acquisition is reported").passIf(true)
	standard := methodOf(b.rec, b.a.ID).InternalStandard
	faults, remarks := "", ""
	note := func(inj *evidence.Injection, m *evidence.Measurement, code, detail, at string) {
		to, text := &advice, &remarks
		if slices.Contains(peakFaults, code) {
			to, text = &c, &faults
		}
		to.Evidence = append(to.Evidence, at)
		if *text == "" {
			*text = fmt.Sprintf("injection %s, %s %s: %s", inj.ID, m.Compound, m.Trace, detail)
		}
	}
	for i := range b.rec.Injections {
		inj := &b.rec.Injections[i]
		if inj.Role != casefile.SampleAliquot && inj.Role != casefile.Calibrator && inj.Role != casefile.Control {
			continue
		}
		for k := range inj.Measurements {
			m := &inj.Measurements[k]
			if m.Compound != b.a.ID && m.Compound != standard {
				continue
			}
			at := fmt.Sprintf("/injections/%d/measurements/%d", i, k)
			for _, w := range m.Warnings {
				note(inj, m, w.Code, w.Detail, at+"/warnings")
			}
			if m.Peak == nil {
				continue
			}
			for _, f := range m.Peak.Flags {
				note(inj, m, f, "the peak is flagged "+f, at+"/peak/flags")
			}
		}
	}
	finish := func(c Check, first, good string) {
		c.Evidence = slices.Compact(c.Evidence)
		c = c.passIf(first == "").says(good, fmt.Sprintf("%s with a remark; the first: %s.", plural(len(c.Evidence), "trace"), first))
		if first == "" {
			c.Evidence = []string{"/injections"}
		}
		b.add(c)
	}
	finish(c, faults, "No peak that the result rests on has a flat top, is cut by the end of its recording or lacks points.")
	finish(advice, remarks, "No trace has gaps or counts below zero, and no peak is flagged.")
}
