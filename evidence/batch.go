package evidence

import (
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/strictmath"
)

// assay works out everything that the batch says about one analyte.
func assay(rec *Record, a casefile.Analyte) Analyte {
	out := Analyte{ID: a.ID, Name: a.Name, Kind: a.Kind}
	out.Reference = referenceOf(rec, a)
	out.Identifications = identificationsOf(rec, a, &out.Reference)
	meanIS := meanInternalStandard(rec, a)
	out.InternalStandard = internalResponses(rec, a, meanIS)
	out.Blanks = blanksOf(rec, a, meanIS)
	if a.Calibration != nil {
		quantify(rec, a, &out)
	}
	return out
}

// meanInternalStandard is the mean area of the analyte's internal standard over the calibrators, or nil.
func meanInternalStandard(rec *Record, a casefile.Analyte) *float64 {
	var areas []float64
	for i := range rec.Injections {
		inj := &rec.Injections[i]
		if inj.Role != casefile.Calibrator {
			continue
		}
		if p := inj.peakOf(a.InternalStandard, InternalStandardTrace); p != nil {
			areas = append(areas, p.Area)
		}
	}
	if len(areas) == 0 {
		return nil
	}
	return ptr(strictmath.Mean(areas))
}

func internalResponses(rec *Record, a casefile.Analyte, mean *float64) []InternalResponse {
	responses := []InternalResponse{}
	for i := range rec.Injections {
		inj := &rec.Injections[i]
		if inj.Role == casefile.Excluded {
			continue
		}
		r := InternalResponse{Injection: inj.ID, InjectionIndex: i, Role: inj.Role}
		if p := inj.peakOf(a.InternalStandard, InternalStandardTrace); p != nil {
			r.Area = ptr(p.Area)
			if mean != nil && *mean > 0 {
				r.Relative = ptr(p.Area / *mean)
			}
		}
		responses = append(responses, r)
	}
	return responses
}

// expectations of the injections that should hold no analyte: whether they hold internal standard.
var blankRoles = map[casefile.Role]bool{
	casefile.SolventBlank:    false,
	casefile.MatrixBlank:     false,
	casefile.CarryoverBlank:  false,
	casefile.ZeroCalibrator:  true,
	casefile.NegativeControl: true,
}

func blanksOf(rec *Record, a casefile.Analyte, meanIS *float64) []Blank {
	lowest := lowestCalibratorArea(rec, a)
	blanks := []Blank{}
	before := ""
	for i := range rec.Injections {
		inj := &rec.Injections[i]
		withIS, isBlank := blankRoles[inj.Role]
		if isBlank {
			b := Blank{Injection: inj.ID, InjectionIndex: i, Role: inj.Role, After: before, ExpectInternalStandard: withIS}
			if p := inj.peakOf(a.ID, QuantifierTrace); p != nil {
				b.Area = p.Area
			}
			if p := inj.peakOf(a.InternalStandard, InternalStandardTrace); p != nil {
				b.InternalStandardArea = p.Area
			}
			if lowest != nil && *lowest > 0 {
				b.OfLowest = ptr(b.Area / *lowest)
			}
			if meanIS != nil && *meanIS > 0 {
				b.OfInternalStandard = ptr(b.InternalStandardArea / *meanIS)
			}
			blanks = append(blanks, b)
		}
		before = inj.ID
	}
	return blanks
}

// lowestCalibratorArea is the mean quantifier area of the calibrators at the lowest stated amount, or nil.
func lowestCalibratorArea(rec *Record, a casefile.Analyte) *float64 {
	var areas []float64
	lowest := 0.0
	for i := range rec.Injections {
		inj := &rec.Injections[i]
		x := nominal(rec.Sequence[i], a.ID)
		if inj.Role != casefile.Calibrator || x == nil || *x <= 0 {
			continue
		}
		if lowest == 0 || *x < lowest {
			lowest, areas = *x, nil
		}
		if p := inj.peakOf(a.ID, QuantifierTrace); p != nil && *x == lowest {
			areas = append(areas, p.Area)
		}
	}
	if len(areas) == 0 {
		return nil
	}
	return ptr(strictmath.Mean(areas))
}

// nominal is the stated amount of an analyte in a row of the sequence, in ng/mL, or nil.
func nominal(row casefile.Injection, analyte string) *float64 {
	for i := range row.Nominal {
		if row.Nominal[i].Analyte == analyte {
			return &row.Nominal[i].NGPerML
		}
	}
	return nil
}
