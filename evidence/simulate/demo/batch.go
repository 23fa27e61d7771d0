package demo

import (
	"bytes"
	"fmt"
	"time"

	"assaywrit/evidence/casefile"
)

// An injection of the example's batch.
type injection struct {
	role     casefile.Role
	level    string
	aliquot  string
	dilution float64
	scale    float64 // amount as a multiple of the top calibrator's
	urine    bool    // matrix, with what comes along in it
	standard bool    // internal standard added
	note     string
}

const topLevel = "C7"

// batch is the sequence: blanks, seven calibrators, a blank after the highest, controls around the sample's three aliquots.
var batch = []injection{
	{role: casefile.SolventBlank, note: "start of the batch"},
	{role: casefile.MatrixBlank, urine: true},
	{role: casefile.ZeroCalibrator, urine: true, standard: true},
	{role: casefile.Calibrator, level: "C1", scale: 0.025, urine: true, standard: true},
	{role: casefile.Calibrator, level: "C2", scale: 0.05, urine: true, standard: true},
	{role: casefile.Calibrator, level: "C3", scale: 0.125, urine: true, standard: true},
	{role: casefile.Calibrator, level: "C4", scale: 0.25, urine: true, standard: true},
	{role: casefile.Calibrator, level: "C5", scale: 0.5, urine: true, standard: true},
	{role: casefile.Calibrator, level: "C6", scale: 0.75, urine: true, standard: true},
	{role: casefile.Calibrator, level: topLevel, scale: 1, urine: true, standard: true},
	{role: casefile.CarryoverBlank, note: "after the highest calibrator"},
	{role: casefile.Control, level: "low", scale: 0.075, urine: true, standard: true},
	{role: casefile.Control, level: "high", scale: 0.6, urine: true, standard: true},
	{role: casefile.NegativeControl, urine: true, standard: true},
	{role: casefile.MatrixBlank, urine: true, note: "before the sample"},
	{role: casefile.SampleAliquot, aliquot: "A1", dilution: 2, urine: true, standard: true},
	{role: casefile.SampleAliquot, aliquot: "A2", dilution: 2, urine: true, standard: true},
	{role: casefile.SampleAliquot, aliquot: "A3", dilution: 2, urine: true, standard: true},
	{role: casefile.CarryoverBlank, note: "after the sample"},
	{role: casefile.Control, level: "low", scale: 0.075, urine: true, standard: true},
	{role: casefile.Control, level: "high", scale: 0.6, urine: true, standard: true},
}

const sampleCode = "4410927"

func (r injection) id(i int) string   { return fmt.Sprintf("%03d", i+1) }
func (r injection) file(i int) string { return fmt.Sprintf("raw/%03d.mzML", i+1) }

// sampleName is what the instrument was told to call the injection.
func (r injection) sampleName() string {
	switch {
	case r.role == casefile.SampleAliquot:
		return sampleCode
	case r.level != "":
		return string(r.role) + " " + r.level
	}
	return string(r.role)
}

// acquiredAt is the start of an injection: one every seven and a half minutes.
func acquiredAt(i int) string {
	start := time.Date(2026, 3, 18, 8, 30, 0, 0, time.FixedZone("", 3600))
	return start.Add(time.Duration(i) * 450 * time.Second).Format(time.RFC3339)
}

// sequence writes sequence.csv.
func sequence() []byte {
	var b bytes.Buffer
	b.WriteString("injection,file,role,level,aliquot,sample_code,dilution,acquired,operator,note")
	for _, c := range compounds {
		fmt.Fprintf(&b, ",nominal %s [ng/mL]", c.id)
	}
	b.WriteByte('\n')
	for i, r := range batch {
		code, dilution := "", ""
		if r.role == casefile.SampleAliquot {
			code, dilution = sampleCode, fmt.Sprint(r.dilution)
		}
		fmt.Fprintf(&b, "%s,%s,%s,%s,%s,%s,%s,%s,P-03,%s", r.id(i), r.file(i), r.role, r.level, r.aliquot, code, dilution, acquiredAt(i), r.note)
		for _, c := range compounds {
			if r.role == casefile.Calibrator || r.role == casefile.Control {
				fmt.Fprintf(&b, ",%.10g", float64(r.scale*c.top))
			} else {
				b.WriteByte(',')
			}
		}
		b.WriteByte('\n')
	}
	return b.Bytes()
}
