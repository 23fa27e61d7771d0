package render

import (
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/trace"
)

// A taken spectrum with the injection that it is of.
type takenSpectrum struct {
	inj *evidence.Injection
	m   *evidence.Measurement
}

// spectraOf lists the spectra of an analyte's peak in the sample, and one of the reference injections' if there is any: the last.
func (d *document) spectraOf(analyte string) (sample []takenSpectrum, reference *takenSpectrum) {
	for i := range d.in.Record.Injections {
		inj := &d.in.Record.Injections[i]
		for k := range inj.Measurements {
			m := &inj.Measurements[k]
			if m.Compound != analyte || m.Spectrum == nil {
				continue
			}
			if inj.Role == casefile.SampleAliquot {
				sample = append(sample, takenSpectrum{inj, m})
			} else {
				reference = &takenSpectrum{inj, m}
			}
		}
	}
	return sample, reference
}

// hasSpectra tells whether any was taken.
func (d *document) hasSpectra(analyte string) bool {
	sample, _ := d.spectraOf(analyte)
	return len(sample) > 0
}

// spectra draws the spectrum of each aliquot's peak over that of the reference: the method's own file where there is one, and otherwise
// that of a reference injection of the batch.
func (d *document) spectra(k int) {
	a := &d.in.Record.Analytes[k]
	sample, inBatch := d.spectraOf(a.ID)
	d.paragraph(d.t("spectra.intro"))
	var reference trace.Spectrum
	name := d.t("spectra.no-reference")
	switch {
	case a.ReferenceSpectrum != nil:
		r := a.ReferenceSpectrum
		reference, name = r.Spectrum, d.t("spectra.file", "title", r.Title, "file", inputPath(r.File), "hash", d.shortHash(r.File))
	case inBatch != nil:
		reference, name = inBatch.m.Spectrum.Spectrum, d.t("spectra.injection", "injection", d.injectionTitle(inBatch.inj))
	}
	const h = 76.0
	for _, s := range sample {
		d.room(h + 16)
		d.down(2)
		d.font(bold, sizeTable)
		d.down(3)
		d.fit(left, d.y, textW, d.injectionTitle(s.inj), ink)
		d.down(1.2)
		d.font(regular, sizeSmall)
		d.down(2.6)
		d.fit(left, d.y, textW, d.takenFrom(s.m.Spectrum), soft)
		d.down(3.6)
		d.fit(left, d.y, textW, d.t("spectra.below", "name", name), soft)
		d.down(3)
		d.mirror(left, d.y, textW, h, s.m.Spectrum.Spectrum, reference)
		d.down(h + 4)
	}
	d.note(d.t("spectra.note"))
}

// takenFrom tells which scans a spectrum is made of.
func (d *document) takenFrom(s *evidence.PeakSpectrum) string {
	text := d.t("spectra.one", "scan", s.Scans[0], "from", fixed(s.FromMin, 3))
	if len(s.Scans) > 1 {
		text = d.t("spectra.mean", "n", itoa(len(s.Scans)), "from", fixed(s.FromMin, 3), "to", fixed(s.ToMin, 3))
	}
	if n := len(s.Background); n > 0 {
		text += d.t("spectra.background", "n", itoa(n))
	}
	return text
}
