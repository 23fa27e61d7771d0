package validation

import (
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
	"assaywrit/evidence/uncertainty"
)

// PoolAlgorithm names the pooling over levels; a published version never changes its results.
const PoolAlgorithm = "pooled-relative@1"

// A Component is a component of uncertainty that a method can refer to, relative to the value.
type Component struct {
	Name     string               `json:"name"`
	Type     string               `json:"type"` // "A"
	Relative float64              `json:"relative"`
	DoF      float64              `json:"degrees_of_freedom"`
	Source   string               `json:"source"`
	Covers   []uncertainty.Effect `json:"covers"`
}

// Pooled are relative standard deviations over all levels, √(Σν·s²/Σν). They stand for every level only where the levels agree.
type Pooled struct {
	Algorithm     string    `json:"algorithm"`
	Repeatability *Relative `json:"repeatability,omitempty"`
	Intermediate  *Relative `json:"intermediate_precision,omitempty"`
	Flags         []string  `json:"flags,omitempty"`
}

// A Relative is a pooled relative standard deviation.
type Relative struct {
	SD       float64  `json:"relative_sd"`
	DoF      float64  `json:"degrees_of_freedom"`
	Interval Interval `json:"interval"`
	Levels   int      `json:"levels"`
	Smallest float64  `json:"smallest"`
	Largest  float64  `json:"largest"`
}

// pool combines the levels; nil where none has a relative figure.
func pool(levels []Precision) *Pooled {
	p := Pooled{Algorithm: PoolAlgorithm}
	var repeat, inter []Spread
	for _, l := range levels {
		if l.Repeatability != nil && l.Repeatability.Relative != nil {
			repeat = append(repeat, *l.Repeatability)
		}
		if l.Intermediate != nil && l.Intermediate.Relative != nil {
			inter = append(inter, *l.Intermediate)
		}
	}
	p.Repeatability = p.relative("repeatability", repeat)
	p.Intermediate = p.relative("intermediate precision", inter)
	if p.Repeatability == nil && p.Intermediate == nil {
		return nil
	}
	return &p
}

func (p *Pooled) relative(what string, levels []Spread) *Relative {
	if len(levels) == 0 {
		return nil
	}
	var squares, degrees []float64
	small, large := levels[0], levels[0]
	for _, l := range levels {
		v := *l.Relative
		squares, degrees = append(squares, float64(l.DoF*float64(v*v))), append(degrees, l.DoF)
		if v < *small.Relative {
			small = l
		}
		if v > *large.Relative {
			large = l
		}
	}
	nu := strictmath.Sum(degrees)
	s := math.Sqrt(strictmath.Sum(squares) / nu)
	if !finite(s) {
		p.Flags = append(p.Flags, what+": the relative standard deviations are too far apart for numbers")
		return nil
	}
	f := *large.Relative / *small.Relative
	pairs := float64(len(levels) * (len(levels) - 1) / 2)
	if f > 1 && float64(pairs*2*fUpper(float64(f*f), large.DoF, small.DoF)) < 1-confidence {
		p.Flags = append(p.Flags, fmt.Sprintf("%s: the levels differ (largest over smallest %.3g; F test, 5 %% over all pairs): one figure does not stand for all of them", what, f))
	}
	return &Relative{SD: s, DoF: nu, Interval: spread(s, nu, 0).Interval, Levels: len(levels), Smallest: *small.Relative, Largest: *large.Relative}
}

// bias takes the reference materials where there are some, otherwise the precision levels with a nominal value.
func (f *Figures) bias(rows []Row) error {
	var references []uncertainty.Reference
	for _, level := range grouped(rows, byLevel) {
		found := results(level.rows)
		first := level.rows[0]
		if first.Nominal == nil || first.UNominal == nil || !(*first.Nominal > 0) {
			return fmt.Errorf("line %d: a reference without its value and uncertainty", first.Line)
		}
		nominal := *first.Nominal
		r := uncertainty.Reference{Name: level.key, Bias: (strictmath.Mean(found) - nominal) / nominal, UReference: *first.UNominal / nominal, N: len(found)}
		if len(found) > 1 {
			r.SD = strictmath.SD(found) / nominal
		}
		references = append(references, r)
	}
	if len(rows) == 0 {
		for _, p := range f.Precision {
			if b := p.RelativeBias; b != nil {
				n := int(b.DoF) + 1 // whole: that of runs, or of replicates in one run
				references = append(references, uncertainty.Reference{Name: p.Level, Bias: b.Value, SD: float64(b.StdU * math.Sqrt(float64(n))), N: n})
			}
		}
		if len(references) > 0 {
			f.flag("bias from nominal values whose uncertainty the table does not state: it is counted as zero; add a component for the reference value")
		}
	}
	if len(references) == 0 {
		return nil
	}
	if len(references) == 1 && references[0].N < 2 {
		f.flag("bias: a single result of a single reference: no uncertainty can be had of it")
		return nil
	}
	b, err := uncertainty.Bias(references)
	if err != nil {
		return err
	}
	f.Bias = &b
	return nil
}

// components makes the components that a method refers to. They may overlap, as alternatives: uncertainty.CheckOverlap says which
// cannot stand beside each other.
func (f *Figures) components(o Options) {
	add := func(name string, relative, dof float64, what string, covers ...uncertainty.Effect) {
		if !finite(relative, dof) || !(relative >= 0 && dof > 0) {
			return
		}
		source := what
		if o.Source != "" {
			source = o.Source + ": " + what
		}
		f.Components = append(f.Components, Component{name, "A", relative, dof, source, covers})
	}
	if f.Pooled != nil {
		if r := f.Pooled.Repeatability; r != nil {
			add("repeatability", r.SD, r.DoF, fmt.Sprintf("%s over %d levels", PrecisionAlgorithm, r.Levels), uncertainty.EffectRepeatability)
		}
		if r := f.Pooled.Intermediate; r != nil {
			covers := append([]uncertainty.Effect{uncertainty.EffectRepeatability, uncertainty.EffectBetweenRun}, o.Varied...)
			add("intermediate precision", r.SD, r.DoF, fmt.Sprintf("%s over %d levels", PrecisionAlgorithm, r.Levels), covers...)
		}
	}
	if b := f.Bias; b != nil {
		covers := []uncertainty.Effect{uncertainty.EffectMethodBias, uncertainty.EffectRecovery}
		if b.UReference > 0 {
			covers = append(covers, uncertainty.EffectReferenceValue)
		}
		add("bias", b.StdU, b.DoF, fmt.Sprintf("%s over %d references", b.Algorithm, len(b.References)), covers...)
	}
	f.recoveryComponent(add)
	var widest *Extraction
	for i, e := range f.Extraction {
		if e.SourceSpread != nil && e.SourceSpread.Relative != nil && (widest == nil || *e.SourceSpread.Relative > *widest.SourceSpread.Relative) {
			widest = &f.Extraction[i]
		}
	}
	if widest != nil {
		add("matrix effect", *widest.SourceSpread.Relative, widest.SourceSpread.DoF, fmt.Sprintf("scatter between %d sources at level %q, the widest", widest.Sources, widest.Level), uncertainty.EffectMatrix)
	}
}

// recoveryComponent is the uncertainty of a correction for the mean recovery: s/√n of the levels' means over their mean, or where there
// is one level, of its results.
func (f *Figures) recoveryComponent(add func(string, float64, float64, string, ...uncertainty.Effect)) {
	switch len(f.Recovery) {
	case 0:
	case 1:
		if m := f.Recovery[0].Mean; m.Value > 0 {
			add("recovery", m.StdU/m.Value, m.DoF, "mean recovery at one level, for results that are corrected for it", uncertainty.EffectRecovery)
		}
	default:
		means := make([]float64, len(f.Recovery))
		for i, l := range f.Recovery {
			means[i] = l.Value
		}
		if m := meanOf(means); m.Value > 0 {
			add("recovery", m.StdU/m.Value, m.DoF, fmt.Sprintf("mean recovery over %d levels, for results that are corrected for it", len(means)), uncertainty.EffectRecovery)
		}
	}
}
