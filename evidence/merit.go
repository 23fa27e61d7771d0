package evidence

import (
	"errors"
	"sort"

	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
)

// A Merit is how good one peak is: the noise by published definitions, the figures of merit by the harmonised pharmacopoeia text, the
// uncertainty of the area by its causes, and the peak's neighbours in the same trace. What cannot be had is absent.
type Merit struct {
	PeakToPeak    *peak.PharmacopoeiaNoise `json:"pharmacopoeia_noise,omitempty"`
	CountingNoise *peak.CountingNoise      `json:"counting_noise,omitempty"`
	Figures       *peak.Figures            `json:"figures,omitempty"`
	AreaBudget    *peak.AreaBudget         `json:"area_budget,omitempty"`
	Hindrances    []peak.Hindrance         `json:"hindrances,omitempty"`   // why the peak should not be quantified; none: it can be
	PercentArea   *float64                 `json:"percent_area,omitempty"` // of all peaks found in the trace
	Neighbours    []Neighbour              `json:"neighbours,omitempty"`   // the one before and the one after
	Alternatives  []Alternative            `json:"alternatives,omitempty"` // of a peak that shares a cluster: its area by other ways to divide it
}

// A Neighbour is the peak before or after the one in use.
type Neighbour struct {
	ApexMin float64 `json:"apex_min"`
	peak.PairFigures
}

// meritOf works it out for the peak in use, p, among those that were found. What a trace is too short or too still for is left out.
func meritOf(c trace.Chromatogram, found *peak.Result, p *peak.Peak, rec *Record) (*Merit, error) {
	if p == nil {
		return nil, nil
	}
	m := &Merit{}
	noise := peak.NoiseModel{WhiteSD: found.Noise}
	n, err := peak.CountingNoiseOf(c)
	if err == nil {
		m.CountingNoise = n
		if n.Recognised {
			noise = n.Model
		}
	} else if !absent(err) {
		return nil, err
	}
	if p.WidthHalfMin != nil {
		var signal []peak.Interval
		for _, q := range found.Peaks {
			signal = append(signal, peak.Interval{StartMin: q.StartMin, EndMin: q.EndMin})
		}
		signal = append(signal, peak.Interval{StartMin: p.StartMin, EndMin: p.EndMin})
		if m.PeakToPeak, err = peak.PeakToPeak(c, p.ApexMin, *p.WidthHalfMin, signal); err != nil && !absent(err) {
			return nil, err
		}
	}
	if m.Figures, err = peak.FiguresOf(c, p, systemOf(rec, m.PeakToPeak)); err != nil && !absent(err) {
		return nil, err
	}
	if m.AreaBudget, err = peak.AreaUncertainty(c, p, noise); err != nil && !absent(err) {
		return nil, err
	}
	m.PercentArea = percentArea(found, p)
	if m.Figures != nil {
		m.neighbours(c, found, p, rec)
		m.Hindrances = peak.Hindrances(p, m.Figures, m.pairs(), quantityLimits(rec))
	}
	m.Alternatives, err = alternatives(c, found, p, noise)
	return m, err
}

func (m *Merit) pairs() []peak.PairFigures {
	var list []peak.PairFigures
	for _, n := range m.Neighbours {
		list = append(list, n.PairFigures)
	}
	return list
}

// quantityLimits are the ratio 2H/h of 10 at which peaks begin to be quantified (ICH Q2, from memory), and what the method states.
func quantityLimits(rec *Record) peak.QuantityLimits {
	l := peak.QuantityLimits{MinSignalToNoise: 10}
	if s := rec.Method.Suitability; s != nil {
		l.MinResolution, l.MinSymmetry, l.MaxSymmetry = given(s.Resolution), given(s.SymmetryLow), given(s.SymmetryHigh)
	}
	return l
}

func given(v *float64) float64 {
	if v == nil {
		return 0
	}
	return *v
}

// absent tells of errors that say only that something cannot be had from a trace.
func absent(err error) bool {
	var interval *peak.IntervalError
	var of *peak.TraceError
	var parameter *peak.ParameterError
	return errors.As(err, &interval) || errors.As(err, &of) || errors.As(err, &parameter)
}

func systemOf(rec *Record, noise *peak.PharmacopoeiaNoise) peak.System {
	var s peak.System
	if v := rec.Method.Instrument.VoidTimeMin; v != nil {
		s.VoidMin = *v
	}
	if v := rec.Method.Instrument.ColumnLengthMM; v != nil {
		s.ColumnLengthMM = *v
	}
	if noise != nil {
		s.PeakToPeakNoise = noise.H
	}
	return s
}

// percentArea is the share of the peak in all peaks found in its trace; absent where one has no area above zero.
func percentArea(found *peak.Result, p *peak.Peak) *float64 {
	areas := []float64{p.Area}
	for _, q := range found.Peaks {
		if q.ApexMin != p.ApexMin {
			areas = append(areas, q.Area)
		}
	}
	shares, err := peak.PercentAreas(areas)
	if err != nil {
		return nil
	}
	return &shares[0]
}

// neighbours takes the figures of the peak with the one before and the one after.
func (m *Merit) neighbours(c trace.Chromatogram, found *peak.Result, p *peak.Peak, rec *Record) {
	for i := range found.Peaks {
		q := &found.Peaks[i]
		before := i+1 < len(found.Peaks) && q.ApexMin < p.ApexMin && found.Peaks[i+1].ApexMin >= p.ApexMin || i+1 == len(found.Peaks) && q.ApexMin < p.ApexMin
		after := q.ApexMin > p.ApexMin && (i == 0 || found.Peaks[i-1].ApexMin <= p.ApexMin)
		if !before && !after {
			continue
		}
		f, err := peak.FiguresOf(c, q, systemOf(rec, m.PeakToPeak))
		if err != nil {
			continue
		}
		first, second := f, m.Figures
		if after {
			first, second = m.Figures, f
		}
		m.Neighbours = append(m.Neighbours, Neighbour{q.ApexMin, peak.PairOf(first, second, valley(c, p, q.ApexMin))})
	}
}

// valley is the height of the lowest point between two apexes above the baseline of the peak in use; 0 where the baseline does not
// reach that far.
func valley(c trace.Chromatogram, p *peak.Peak, other float64) float64 {
	from, to := min(p.ApexMin, other), max(p.ApexMin, other)
	l := peak.Line{StartMin: p.BaselineStartMin, StartCounts: p.BaselineStartCounts, EndMin: p.BaselineEndMin, EndCounts: p.BaselineEndCounts}
	low, any := 0.0, false
	for i := sort.SearchFloat64s(c.TimeMin, from); i < len(c.TimeMin) && c.TimeMin[i] <= to; i++ {
		if c.TimeMin[i] < l.StartMin || c.TimeMin[i] > l.EndMin {
			return 0
		}
		if h := c.Intensity[i] - l.At(c.TimeMin[i]); !any || h < low {
			low, any = h, true
		}
	}
	return low
}
