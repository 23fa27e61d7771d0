package evidence

import (
	"bytes"
	"encoding/csv"
	"strconv"

	"assaywrit/evidence/peak"
)

// A Table is part of the evidence record as rows of text, for people who work with spreadsheets. It holds no number that
// the record does not hold, in the same shortest exact form.
type Table struct {
	Name string // such as "peaks"
	Rows [][]string
}

// Tables returns the record's tables: peaks, identification, calibration, concentrations, uncertainty.
func Tables(rec *Record) []Table {
	return []Table{
		{"peaks", peakRows(rec)},
		{"identification", identificationRows(rec)},
		{"calibration", calibrationRows(rec)},
		{"concentrations", concentrationRows(rec)},
		{"uncertainty", uncertaintyRows(rec)},
	}
}

// CSV returns the table as comma-separated values (RFC 4180, with line feeds), in UTF-8.
func (t Table) CSV() ([]byte, error) {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	if err := w.WriteAll(t.Rows); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}

func num(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

func opt(v *float64) string {
	if v == nil {
		return ""
	}
	return num(*v)
}

func peakRows(rec *Record) [][]string {
	rows := [][]string{{"injection", "file", "role", "compound", "trace", "trace_id", "precursor_mz", "product_mz", "integration",
		"start_min", "apex_min", "end_min", "area_counts_min", "height_counts", "noise_counts", "signal_to_noise",
		"baseline_start_counts", "baseline_end_counts", "symmetry_5pct", "width_half_min", "plates_half",
		"resolution_half_previous", "resolution_half_next"}}
	for _, inj := range rec.Injections {
		for _, m := range inj.Measurements {
			head := []string{inj.ID, inj.File, string(inj.Role), m.Compound, m.Trace, m.TraceID, num(m.Transition.PrecursorMZ), num(m.Transition.ProductMZ)}
			switch {
			case m.Manual != nil:
				rows = append(rows, peakRow(head, "manual", m.Peak))
				if m.Automatic != nil {
					rows = append(rows, peakRow(head, "automatic, replaced", m.Automatic))
				}
			case m.Peak != nil:
				rows = append(rows, peakRow(head, "automatic", m.Peak))
			default:
				rows = append(rows, append(append([]string{}, head...), "no peak", "", "", "", "", "", num(m.Noise), "", "", "", "", "", "", "", ""))
			}
		}
	}
	return rows
}

func peakRow(head []string, how string, p *peak.Peak) []string {
	return append(append([]string{}, head...), how, num(p.StartMin), num(p.ApexMin), num(p.EndMin), num(p.Area), num(p.Height),
		num(p.Noise), num(p.SignalToNoise), num(p.BaselineStartCounts), num(p.BaselineEndCounts), opt(p.Symmetry),
		opt(p.WidthHalfMin), opt(p.Plates), opt(p.ResolutionPre), opt(p.ResolutionPos))
}

func identificationRows(rec *Record) [][]string {
	rows := [][]string{{"analyte", "injection", "role", "aliquot", "retention_min", "retention_difference_min", "relative_retention",
		"relative_retention_deviation", "trace", "signal_to_noise", "abundance", "abundance_std_u", "reference_abundance", "apex_offset_min"}}
	for _, a := range rec.Analytes {
		for _, id := range a.Identifications {
			role := string(rec.Injections[id.InjectionIndex].Role)
			for _, ion := range id.Ions {
				rows = append(rows, []string{a.ID, id.Injection, role, id.Aliquot, opt(id.RetentionMin), opt(id.RetentionDifferenceMin),
					opt(id.RelativeRetention), opt(id.RelativeRetentionDeviation), ion.Trace, opt(ion.SignalToNoise), opt(ion.Abundance),
					opt(ion.AbundanceStdU), opt(ion.ReferenceAbundance), opt(ion.ApexOffsetMin)})
			}
		}
	}
	return rows
}

func calibrationRows(rec *Record) [][]string {
	rows := [][]string{{"analyte", "injection", "level", "nominal_ng_per_ml", "response_ratio", "weight", "fitted", "residual",
		"back_calculated_ng_per_ml", "relative_bias"}}
	for _, a := range rec.Analytes {
		if a.Calibration == nil {
			continue
		}
		for i, p := range a.Calibration.Fit.Points {
			rows = append(rows, []string{a.ID, a.Calibration.Injections[i], a.Calibration.Levels[i], num(p.X), num(p.Y), num(p.Weight),
				num(p.Fitted), num(p.Residual), num(p.BackX), opt(p.RelativeBias)})
		}
	}
	return rows
}

func concentrationRows(rec *Record) [][]string {
	rows := [][]string{{"analyte", "injection", "role", "level", "aliquot", "dilution", "response_ratio", "read_ng_per_ml",
		"read_std_u_ng_per_ml", "ng_per_ml", "nominal_ng_per_ml", "relative_bias", "missing"}}
	for _, a := range rec.Analytes {
		for _, list := range [][]Concentration{a.Controls, a.Aliquots} {
			for _, c := range list {
				rows = append(rows, []string{a.ID, c.Injection, string(rec.Injections[c.InjectionIndex].Role), c.Level, c.Aliquot, num(c.Dilution),
					opt(c.Response), opt(c.ReadNGPerML), opt(c.StdU), opt(c.NGPerML), opt(c.NominalNGPerML), opt(c.Bias), c.Missing})
			}
		}
	}
	return rows
}

func uncertaintyRows(rec *Record) [][]string {
	rows := [][]string{{"analyte", "component", "type", "std_u_ng_per_ml", "sensitivity", "degrees_of_freedom", "contribution_ng_per_ml", "share", "source"}}
	for _, a := range rec.Analytes {
		if a.Result == nil {
			continue
		}
		b := a.Result.Budget
		for _, c := range b.Components {
			rows = append(rows, []string{a.ID, c.Name, c.Type, num(c.StdU), num(c.Sensitivity), opt(c.DoF), num(c.Contribution), num(c.Share), c.Source})
		}
		rows = append(rows, []string{a.ID, "combined", "", num(b.StdU), "", opt(b.EffectiveDoF), num(b.StdU), "1", b.Algorithm})
	}
	return rows
}
