package simulate

import (
	"fmt"
	"math"
	"slices"

	"assaywrit/evidence/trace"
)

// A Batch is a sequence of injections on one instrument, with a known truth. Every random number comes from a stream of its own,
// named after what it is for, so that an injection, substance or channel more or less changes no other.
type Batch struct {
	Seed       uint64
	Column     Column
	Background Background
	Scatter    Scatter
	Carryover  float64 // share of the previous injection's amounts that comes along
	Channels   []Channel
	Substances []Substance
	Injections []Injection // in the order of acquisition
}

// A Column gives every peak its shape and lets retention drift, in minutes.
type Column struct {
	SigmaMin, TauMin float64
	DriftMin         float64 // from one injection to the next
	JitterMin        float64 // standard deviation from injection to injection
}

// A Background is what a channel shows without any substance.
type Background struct {
	Low, High  float64 // counts at the start of a trace lie evenly between them
	Drift      float64 // standard deviation of the rise over the trace, as a share of the start
	Wave       float64 // half height of the slow wave, as a share of the start
	Electronic float64 // as in Detector, counts
	Gain       float64 // as in Detector, counts
}

// Scatter holds relative standard deviations.
type Scatter struct {
	Volume       float64 // injected volume: all substances alike
	Yield        float64 // ionisation of a group of substances: an analyte and its internal standard alike
	Differential float64 // ionisation of one substance, apart from its group
	Ion          float64 // one ion of a substance, apart from the others
}

// A Channel is one trace that the instrument records.
type Channel struct {
	ID                        string
	Transition                trace.Transition
	StartMin, EndMin, StepMin float64
}

// A Substance gives a peak in every channel that picks it up.
type Substance struct {
	Name         string
	Group        string  // substances that the matrix suppresses alike
	RetentionMin float64 // of the apex, without drift
	Ions         []Ion
}

// An Ion is a substance's response in one channel.
type Ion struct {
	Channel  string
	Response float64 // counts·min for 1 ng/mL where nothing is suppressed
}

// An Injection is what one vial holds.
type Injection struct {
	ID      string
	Yield   float64 // ionisation in this matrix: 1 without suppression
	Amounts []Amount
}

// An Amount of a substance in a vial.
type Amount struct {
	Substance string
	NGPerML   float64 // as meant
	RSD       float64 // scatter of its preparation
}

// A Truth is one peak as it was made.
type Truth struct {
	Injection, Substance, Channel string
	NGPerML                       float64 // in what was injected: as prepared, carry-over included
	Peak                          Peak
}

// Truth lists the peaks of an injection, by its place in the sequence: substance by substance, ion by ion. A substance that is
// not there is not listed.
func (b *Batch) Truth(i int) []Truth {
	in := b.Injections[i]
	volume := b.stream("volume", in.ID).Scatter(b.Scatter.Volume)
	shift := float64(b.Column.DriftMin*float64(i)) + float64(b.Column.JitterMin*b.stream("retention", in.ID).Normal())
	var list []Truth
	for _, s := range b.Substances {
		amount := b.amount(i, s.Name)
		if amount <= 0 {
			continue
		}
		yield := float64(in.Yield * b.stream("yield", in.ID, s.Group).Scatter(b.Scatter.Yield) * b.stream("yield of one", in.ID, s.Name).Scatter(b.Scatter.Differential))
		shape := Peak{Sigma: b.Column.SigmaMin, Tau: b.Column.TauMin}.ApexAt(s.RetentionMin + shift)
		for _, ion := range s.Ions {
			p := shape
			p.Area = float64(amount * volume * yield * ion.Response * b.stream("ion", in.ID, s.Name, ion.Channel).Scatter(b.Scatter.Ion))
			list = append(list, Truth{in.ID, s.Name, ion.Channel, amount, p})
		}
	}
	return list
}

// amount of a substance in what is injected: as prepared, and the share of the injection before.
func (b *Batch) amount(i int, substance string) float64 {
	x := b.prepared(i, substance)
	if i > 0 {
		x += float64(b.Carryover * b.prepared(i-1, substance))
	}
	return x
}

func (b *Batch) prepared(i int, substance string) float64 {
	in := b.Injections[i]
	for _, a := range in.Amounts {
		if a.Substance == substance {
			return float64(a.NGPerML * b.stream("preparation", in.ID, substance).Scatter(a.RSD))
		}
	}
	return 0
}

// Acquire records every channel in an injection, by its place in the sequence.
func (b *Batch) Acquire(i int) ([]trace.Chromatogram, error) {
	if err := b.check(); err != nil {
		return nil, err
	}
	in, truth := b.Injections[i], b.Truth(i)
	var list []trace.Chromatogram
	for _, c := range b.Channels {
		var peaks []Peak
		for _, t := range truth {
			if t.Channel == c.ID {
				peaks = append(peaks, t.Peak)
			}
		}
		noise := b.stream("noise", in.ID, c.ID)
		t, y, err := b.Background.detector(noise).Record(peaks, c.StartMin, c.EndMin, c.StepMin, noise)
		if err != nil {
			return nil, fmt.Errorf("injection %q, channel %q: %w", in.ID, c.ID, err)
		}
		list = append(list, trace.Chromatogram{ID: c.ID, Kind: trace.SRM, Transition: c.Transition, TimeMin: t, Intensity: y})
	}
	return list, nil
}

// detector draws the background of one trace.
func (g Background) detector(s *Stream) Detector {
	level := g.Low + float64((g.High-g.Low)*s.Uniform())
	return Detector{
		Baseline: level, Drift: float64(g.Drift * level * s.Normal()), Wave: float64(g.Wave * level),
		Electronic: g.Electronic, Gain: g.Gain,
	}
}

func (b *Batch) stream(name ...string) *Stream { return NewStream(b.Seed, name...) }

// check refuses a batch whose names do not fit together, or whose numbers cannot be meant.
func (b *Batch) check() error {
	for _, v := range []struct {
		name  string
		value float64
	}{
		{"Column.TauMin", b.Column.TauMin}, {"Column.JitterMin", b.Column.JitterMin}, {"Carryover", b.Carryover},
		{"Background.Low", b.Background.Low}, {"Background.High", b.Background.High}, {"Background.Drift", b.Background.Drift},
		{"Background.Wave", b.Background.Wave}, {"Background.Electronic", b.Background.Electronic}, {"Background.Gain", b.Background.Gain},
		{"Scatter.Volume", b.Scatter.Volume}, {"Scatter.Yield", b.Scatter.Yield}, {"Scatter.Differential", b.Scatter.Differential}, {"Scatter.Ion", b.Scatter.Ion},
	} {
		if !(v.value >= 0) || math.IsInf(v.value, 1) {
			return fmt.Errorf("simulate: %s is %g, want 0 or more", v.name, v.value)
		}
	}
	if !(b.Column.SigmaMin > 0) {
		return fmt.Errorf("simulate: Column.SigmaMin is %g, want a width above 0", b.Column.SigmaMin)
	}
	return b.checkNames()
}

func (b *Batch) checkNames() error {
	for i, c := range b.Channels {
		if slices.ContainsFunc(b.Channels[:i], func(o Channel) bool { return o.ID == c.ID }) {
			return fmt.Errorf("simulate: channel %q a second time, want each once", c.ID)
		}
	}
	for i, s := range b.Substances {
		if slices.ContainsFunc(b.Substances[:i], func(o Substance) bool { return o.Name == s.Name }) {
			return fmt.Errorf("simulate: substance %q a second time, want each once", s.Name)
		}
		for _, ion := range s.Ions {
			if !slices.ContainsFunc(b.Channels, func(c Channel) bool { return c.ID == ion.Channel }) {
				return fmt.Errorf("simulate: substance %q has an ion in channel %q, want a channel of the batch", s.Name, ion.Channel)
			}
		}
	}
	for i, in := range b.Injections {
		if slices.ContainsFunc(b.Injections[:i], func(o Injection) bool { return o.ID == in.ID }) {
			return fmt.Errorf("simulate: injection %q a second time, want each once", in.ID)
		}
		for _, a := range in.Amounts {
			if !slices.ContainsFunc(b.Substances, func(s Substance) bool { return s.Name == a.Substance }) {
				return fmt.Errorf("simulate: injection %q holds %q, want a substance of the batch", in.ID, a.Substance)
			}
		}
	}
	return nil
}
