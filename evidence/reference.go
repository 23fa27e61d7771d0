package evidence

import (
	"slices"

	"assaywrit/evidence/casefile"
)

// referenceOf gathers what the reference injections of the same batch show of an analyte: those whose role the method
// names and which hold a known amount of it. The base ion is the one with the largest area summed over them.
func referenceOf(rec *Record, a casefile.Analyte) Reference {
	ref := Reference{Injections: []string{}, Ratios: []ReferenceRatio{}}
	traces := ionTraces(a)
	areas := make([][]float64, 0)
	var retention, relative []float64
	sums := make([]float64, len(traces))
	for i := range rec.Injections {
		inj := &rec.Injections[i]
		if !slices.Contains(rec.Method.Identification.ReferenceRoles, inj.Role) || !holds(rec.Sequence[i], a.ID) {
			continue
		}
		quant := inj.peakOf(a.ID, QuantifierTrace)
		if quant == nil {
			continue
		}
		ref.Injections = append(ref.Injections, inj.ID)
		retention = append(retention, quant.ApexMin)
		if is := inj.peakOf(a.InternalStandard, InternalStandardTrace); is != nil && is.ApexMin > 0 {
			relative = append(relative, quant.ApexMin/is.ApexMin)
		}
		row := make([]float64, len(traces))
		for k, name := range traces {
			if p := inj.peakOf(a.ID, name); p != nil && p.Area > 0 {
				row[k] = p.Area
				sums[k] += p.Area
			}
		}
		areas = append(areas, row)
	}
	ref.RetentionMin = statistic(retention)
	ref.RelativeRetention = statistic(relative)
	if len(areas) > 0 {
		ref.Ratios = ratiosTo(baseOf(sums), traces, areas)
	}
	return ref
}

// ionTraces names an analyte's traces, the quantifier first.
func ionTraces(a casefile.Analyte) []string {
	names := []string{QuantifierTrace}
	for i := range a.Qualifiers {
		names = append(names, QualifierTrace(i))
	}
	return names
}

// holds tells whether a row of the sequence states an amount of the analyte above zero. An injection whose amounts are not
// stated cannot be a reference: missing information never makes a finding firmer.
func holds(row casefile.Injection, analyte string) bool {
	for _, n := range row.Nominal {
		if n.Analyte == analyte {
			return n.NGPerML > 0
		}
	}
	return false
}

func baseOf(sums []float64) int {
	base := 0
	for k, s := range sums {
		if s > sums[base] {
			base = k
		}
	}
	return base
}

// ratiosTo gives, for each ion, its area over that of the base ion, over the injections where both have one.
func ratiosTo(base int, traces []string, areas [][]float64) []ReferenceRatio {
	ratios := []ReferenceRatio{}
	for k, name := range traces {
		var values []float64
		for _, row := range areas {
			if row[base] > 0 && row[k] > 0 {
				values = append(values, row[k]/row[base])
			}
		}
		if s := statistic(values); s != nil {
			ratios = append(ratios, ReferenceRatio{Trace: name, Base: k == base, Ratio: *s})
		}
	}
	return ratios
}

// base names the base ion of a reference, or "" where there is none.
func (r *Reference) base() string {
	for _, q := range r.Ratios {
		if q.Base {
			return q.Trace
		}
	}
	return ""
}

// ratio returns the mean reference ratio of one ion, or nil.
func (r *Reference) ratio(name string) *float64 {
	for i := range r.Ratios {
		if r.Ratios[i].Trace == name {
			return &r.Ratios[i].Ratio.Mean
		}
	}
	return nil
}
