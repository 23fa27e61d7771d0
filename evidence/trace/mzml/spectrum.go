package mzml

import (
	"fmt"
	"math"
	"strconv"

	"assaywrit/evidence/trace"
)

// A spectrum gathers one spectrum element.
type spectrum struct {
	scan     trace.Scan
	start    int // of its tag
	length   int // defaultArrayLength
	selected float64
	timed    bool
	x, y     *array
	arrays   [2]array // the memory of x and y
	numbers  int      // arrays of the kind that a spectrum has
}

// relevant are the terms that a spectrum is asked for; all others are passed over, for speed.
var relevant = map[string]bool{
	accLevel: true, accCentroid: true, accProfile: true, accScanStart: true, accTotalIon: true, accNegative: true, accPositive: true, accTarget: true, accSelected: true,
	accZlib: true, accPlain: true, accWindowLow: true, accWindowTop: true,
}

func init() {
	for a := range numbers {
		relevant[a] = true
	}
	for a := range unreadNumbers {
		relevant[a] = true
	}
	for a := range contents {
		relevant[a] = true
	}
	for a := range presses {
		relevant[a] = true
	}
	for a := range unreadCompressions {
		relevant[a] = true
	}
}

func (r *reader) startSpectrum(at int) error {
	s := r.s
	n, ok := count(s.attr("defaultArrayLength"))
	if !ok {
		return s.fail(at, fmt.Sprintf("defaultArrayLength %q", s.attr("defaultArrayLength")), "a number of points", "")
	}
	id := string(s.raw("id"))
	if s.raw("id") == nil || id == "" {
		return s.fail(at, "a spectrum without an id", "an id", "")
	}
	id = s.attr("id")
	r.counted++
	r.index.begins(at, true, id)
	r.spec = &spectrum{scan: trace.Scan{ID: id}, start: at, length: n}
	return nil
}

// term applies a term of a spectrum, its scan, or an ion of its precursor.
func (x *spectrum) term(s *scanner, t term, holder, outer string, at int) error {
	where := func() string { return fmt.Sprintf("the spectrum %q", x.scan.ID) }
	switch t.accession {
	case accNegative, accPositive:
		p := map[string]trace.Polarity{accNegative: trace.Negative, accPositive: trace.Positive}[t.accession]
		if x.scan.Polarity != "" && x.scan.Polarity != p {
			return s.fail(at, fmt.Sprintf("the polarities %s and %s in %s", x.scan.Polarity, p, where()), "one", "")
		}
		x.scan.Polarity = p
	case accCentroid, accProfile:
		m := map[string]trace.Mode{accCentroid: trace.Centroid, accProfile: trace.Profile}[t.accession]
		if x.scan.Mode != "" && x.scan.Mode != m {
			return s.fail(at, fmt.Sprintf("both centroid and profile in %s", where()), "one", "")
		}
		x.scan.Mode = m
	case accLevel:
		n, err := strconv.Atoi(t.value)
		if err != nil || n < 1 || n > 100 {
			return s.fail(at, fmt.Sprintf("the MS level %q in %s", t.value, where()), "a number from 1", "")
		}
		if x.scan.MSLevel != 0 && x.scan.MSLevel != n {
			return s.fail(at, fmt.Sprintf("the MS levels %d and %d in %s", x.scan.MSLevel, n, where()), "one", "")
		}
		x.scan.MSLevel = n
	case accTotalIon:
		v, ok := trace.Decimal(t.value)
		if !ok {
			return s.fail(at, fmt.Sprintf("the total ion current %q in %s", t.value, where()), "a decimal number", "")
		}
		x.scan.TotalIon = v
	case accWindowLow, accWindowTop:
		return x.window(s, t, holder, where, at)
	case accScanStart:
		if holder == "scan" {
			return x.startTime(s, t, where, at)
		}
	case accTarget, accSelected:
		if outer != "precursor" || holder != "isolationWindow" && holder != "selectedIon" {
			return nil
		}
		slot := &x.scan.PrecursorMZ
		if t.accession == accSelected {
			slot = &x.selected
		}
		if *slot != 0 {
			return nil // of several precursors, as in a later stage, the first is the last that was isolated
		}
		return setMZ(s, slot, t.value, "precursor", where, at)
	}
	return nil
}

// window takes a limit of the first scan window.
func (x *spectrum) window(s *scanner, t term, holder string, where func() string, at int) error {
	slot := &x.scan.LowMZ
	if t.accession == accWindowTop {
		slot = &x.scan.HighMZ
	}
	if holder != "scanWindow" || *slot != 0 {
		return nil
	}
	v, ok := trace.Decimal(t.value)
	if !ok || v < 0 {
		return s.fail(at, fmt.Sprintf("the scan window limit %q in %s", t.value, where()), "a decimal number from 0", "")
	}
	*slot = v
	return nil
}

// startTime takes the start of the first scan; a spectrum that is merged from several begins with it.
func (x *spectrum) startTime(s *scanner, t term, where func() string, at int) error {
	if x.timed {
		return nil
	}
	v, ok := trace.Decimal(t.value)
	switch {
	case !ok:
		return s.fail(at, fmt.Sprintf("the scan start time %q in %s", t.value, where()), "a decimal number", "")
	case t.unit == unitSecond:
		v /= 60
	case t.unit != unitMinute:
		return s.fail(at, fmt.Sprintf("a scan start time in the unit %q in %s", t.unit, where()), "seconds ("+unitSecond+") or minutes ("+unitMinute+")", "a unit of time is not guessed: export the file again with a converter that states it")
	}
	x.timed, x.scan.TimeMin = true, v
	return nil
}

// take keeps an array of m/z or intensities for later.
func (x *spectrum) take(s *scanner, b *described) error {
	slot := &x.x
	switch contents[b.content] {
	case mzContent, wavelengthContent:
	case intensityContent:
		slot = &x.y
	default:
		return nil
	}
	if *slot != nil {
		return s.fail(b.at, fmt.Sprintf("a second array of one kind in the spectrum %q", x.scan.ID), "one of m/z and one of intensities", "")
	}
	a, err := b.array(s, x.length)
	if err != nil {
		return err
	}
	x.arrays[x.numbers] = a
	*slot = &x.arrays[x.numbers]
	x.numbers++
	return nil
}

// Reasons to pass a spectrum over, in the order in which they are reported.
const (
	noMZ   = "they have no m/z"
	noTime = "they have no start time"
)

var passedReasons = []string{noMZ, noTime}

func (r *reader) endSpectrum(x *spectrum) error {
	pass := func(why string) error {
		if r.passed == nil {
			r.passed = map[string]int{}
		}
		r.passed[why]++
		return nil
	}
	switch {
	case x.x != nil && x.x.content == wavelengthContent, x.x == nil && x.y == nil && x.length > 0:
		return pass(noMZ)
	case (x.x == nil) != (x.y == nil):
		return r.s.fail(x.start, fmt.Sprintf("the spectrum %q without its m/z or intensity array", x.scan.ID), "both", cutHint)
	case x.x != nil && x.x.n != x.y.n:
		return r.s.fail(x.start, fmt.Sprintf("%d m/z and %d intensities in the spectrum %q", x.x.n, x.y.n, x.scan.ID), "as many of each", cutHint)
	case !x.timed:
		return pass(noTime)
	}
	if x.scan.PrecursorMZ == 0 {
		x.scan.PrecursorMZ = x.selected
	}
	if x.x == nil {
		r.scans.add(x.scan, array{}, array{})
		return nil
	}
	x.scan.Points = x.x.n
	r.scans.add(x.scan, *x.x, *x.y)
	return nil
}

// finite tells the first of the numbers that is not, counted from 1, or 0. A difference from itself is not zero for these alone.
func finite(v []float64) int {
	sum := 0.0
	for _, x := range v {
		sum += x - x
	}
	if sum == 0 {
		return 0
	}
	for i, x := range v {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return i + 1
		}
	}
	return 0
}
