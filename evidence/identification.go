package evidence

import (
	"math"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
)

// abundanceAlgorithm names the estimate of an abundance's standard uncertainty; see abundanceStdU.
const abundanceAlgorithm = "noise-ratio@1"

// identificationsOf describes an analyte in every injection whose identity matters: samples, controls, calibrators, the
// injections that should be without it, and blanks in which a peak was found.
func identificationsOf(rec *Record, a casefile.Analyte, ref *Reference) []Identification {
	ids := []Identification{}
	for i := range rec.Injections {
		inj := &rec.Injections[i]
		switch inj.Role {
		case casefile.Excluded:
			continue
		case casefile.SolventBlank, casefile.MatrixBlank, casefile.CarryoverBlank:
			if inj.peakOf(a.ID, QuantifierTrace) == nil {
				continue
			}
		}
		ids = append(ids, identify(inj, i, a, ref))
	}
	return ids
}

func identify(inj *Injection, index int, a casefile.Analyte, ref *Reference) Identification {
	id := Identification{Injection: inj.ID, InjectionIndex: index, Aliquot: inj.Aliquot, Ions: []IonMatch{}}
	quant := inj.peakOf(a.ID, QuantifierTrace)
	if quant != nil {
		id.RetentionMin = ptr(quant.ApexMin)
		if ref.RetentionMin != nil {
			id.RetentionDifferenceMin = ptr(quant.ApexMin - ref.RetentionMin.Mean)
		}
		if is := inj.peakOf(a.InternalStandard, InternalStandardTrace); is != nil && is.ApexMin > 0 {
			id.RelativeRetention = ptr(quant.ApexMin / is.ApexMin)
			if ref.RelativeRetention != nil && ref.RelativeRetention.Mean > 0 {
				id.RelativeRetentionDeviation = ptr(*id.RelativeRetention/ref.RelativeRetention.Mean - 1)
			}
		}
	}
	base := inj.peakOf(a.ID, ref.base())
	for _, name := range ionTraces(a) {
		id.Ions = append(id.Ions, ionMatch(inj, a.ID, name, quant, base, ref))
	}
	return id
}

func ionMatch(inj *Injection, compound, name string, quant, base *peak.Peak, ref *Reference) IonMatch {
	m, index := inj.find(compound, name)
	ion := IonMatch{Trace: name, MeasurementIndex: index, Base: name == ref.base(), ReferenceAbundance: ref.ratio(name)}
	p := m.Peak
	if p == nil {
		return ion
	}
	if p.Noise > 0 {
		ion.SignalToNoise = ptr(p.SignalToNoise)
	}
	if quant != nil {
		ion.ApexOffsetMin = ptr(p.ApexMin - quant.ApexMin)
	}
	if base != nil && base.Area > 0 && p.Area > 0 {
		ion.Abundance = ptr(p.Area / base.Area)
		if u := abundanceStdU(p, base); !ion.Base && !math.IsInf(u, 0) && !math.IsNaN(u) {
			ion.AbundanceStdU = ptr(u)
		}
	}
	return ion
}

// abundanceStdU is the standard uncertainty of p's area over that of base, from the noise on both (peak.Peak.AreaStdU), by
// the law of propagation for a quotient (JCGM 100:2008, 5.1.6). Counting noise of the signal itself is not in it: it is a
// lower bound.
func abundanceStdU(p, base *peak.Peak) float64 {
	up, ub := p.AreaStdU/p.Area, base.AreaStdU/base.Area
	return float64(p.Area / base.Area * math.Sqrt(float64(up*up)+float64(ub*ub)))
}
