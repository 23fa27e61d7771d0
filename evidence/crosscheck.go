package evidence

import (
	"crypto/sha256"
	"encoding/binary"
	"fmt"
	"math"
	"strings"
	"time"

	"assaywrit/evidence/casefile"
)

// A CrossCheck is something that does not agree between raw files, or between them and the sequence.
type CrossCheck struct {
	Code       string   `json:"code"`
	Injections []string `json:"injections"`
	Detail     string   `json:"detail"`
}

// The codes of cross-checks. They are kept in records.
const (
	SameFile        = "identical-files"    // two injections with the same bytes
	SameTraces      = "identical-traces"   // two injections with the same numbers in other bytes
	OtherStart      = "start-time"         // the file's own time is not that of the sequence
	StartOrder      = "start-time-order"   // the files' own times are not in the order of the sequence
	OtherInstrument = "instrument-differs" // not every file comes from the same instrument
	OtherMethod     = "method-differs"     // nor was acquired by the same method
	OtherSoftware   = "software-differs"
	OtherCode       = "sample-code" // the file's sample code is not that of the sequence
)

// startTolerance is how far the file's own start may lie from the time in the sequence: lists are often written by the minute.
const startTolerance = 2 * time.Minute

// crossChecks compares the raw files with each other and with the sequence.
func crossChecks(rec *Record, ev *Evaluation) []CrossCheck {
	x := crossChecker{rec: rec}
	x.identical(ev)
	x.times()
	x.constant(OtherInstrument, "instrument", func(i *Injection) string { return i.Instrument })
	x.constant(OtherMethod, "acquisition method", func(i *Injection) string { return i.FileMethod })
	x.constant(OtherSoftware, "software", func(i *Injection) string { return i.Software })
	x.codes()
	return x.list
}

type crossChecker struct {
	rec  *Record
	list []CrossCheck
}

func (x *crossChecker) add(code string, injections []string, format string, args ...any) {
	x.list = append(x.list, CrossCheck{Code: code, Injections: injections, Detail: fmt.Sprintf(format, args...)})
}

// identical finds the same bytes, or the same numbers in every trace that was used, under two names.
func (x *crossChecker) identical(ev *Evaluation) {
	bytes, numbers := map[string]int{}, map[[32]byte]int{}
	sums := map[string]string{}
	for _, in := range x.rec.Inputs {
		sums[in.Path] = in.SHA256
	}
	for i := range x.rec.Injections {
		inj := &x.rec.Injections[i]
		if first, twice := bytes[sums[inj.File]]; twice {
			other := &x.rec.Injections[first]
			x.add(SameFile, []string{other.ID, inj.ID}, "%s and %s are the same file under two names", other.File, inj.File)
			continue
		}
		bytes[sums[inj.File]] = i
		if len(inj.Measurements) == 0 {
			continue
		}
		sum := digestTraces(inj, ev)
		if first, twice := numbers[sum]; twice {
			other := &x.rec.Injections[first]
			x.add(SameTraces, []string{other.ID, inj.ID}, "%s and %s hold the same numbers in every trace", other.File, inj.File)
			continue
		}
		numbers[sum] = i
	}
}

// digestTraces is a hash over the intensities of all traces in use. Times are left out: a copy may have been shifted.
func digestTraces(inj *Injection, ev *Evaluation) (sum [32]byte) {
	h := sha256.New()
	buf := make([]byte, 0, 1<<12)
	for _, m := range inj.Measurements {
		c, _ := ev.Chromatogram(inj.File, m.TraceID)
		for _, y := range c.Intensity {
			if buf = binary.LittleEndian.AppendUint64(buf, math.Float64bits(y)); len(buf) > cap(buf)-8 {
				h.Write(buf)
				buf = buf[:0]
			}
		}
		buf = append(buf, '|')
		h.Write(buf)
		buf = buf[:0]
	}
	h.Sum(sum[:0])
	return sum
}

// times compares the starts that files state with the sequence, and with each other. A time without an offset is compared as if it
// had that of the sequence.
func (x *crossChecker) times() {
	var before time.Time
	beforeID := ""
	for i := range x.rec.Injections {
		inj := &x.rec.Injections[i]
		planned, err := time.Parse(time.RFC3339, x.rec.Sequence[i].AcquiredAt)
		if err != nil {
			continue
		}
		start, ok := fileTime(inj.StartTime, planned.Location())
		if !ok {
			continue
		}
		if away := start.Sub(planned); away > startTolerance || away < -startTolerance {
			x.add(OtherStart, []string{inj.ID}, "%s states %s, the sequence %s", inj.File, inj.StartTime, x.rec.Sequence[i].AcquiredAt)
		}
		if beforeID != "" && !start.After(before) {
			x.add(StartOrder, []string{beforeID, inj.ID}, "%s states %s, which is not after the start of injection %s", inj.File, inj.StartTime, beforeID)
		}
		before, beforeID = start, inj.ID
	}
}

func fileTime(text string, zone *time.Location) (time.Time, bool) {
	if t, err := time.Parse(time.RFC3339, text); err == nil {
		return t, true
	}
	t, err := time.ParseInLocation("2006-01-02T15:04:05", text, zone)
	return t, err == nil
}

// constant finds files that state another value than most do; those that state none are left out.
func (x *crossChecker) constant(code, what string, of func(*Injection) string) {
	var values []string
	ids := map[string][]string{}
	for i := range x.rec.Injections {
		inj := &x.rec.Injections[i]
		v := of(inj)
		if v == "" || inj.Role == casefile.Excluded {
			continue
		}
		if ids[v] == nil {
			values = append(values, v)
		}
		ids[v] = append(ids[v], inj.ID)
	}
	if len(values) < 2 {
		return
	}
	most := values[0]
	for _, v := range values {
		if len(ids[v]) > len(ids[most]) {
			most = v
		}
	}
	for _, v := range values {
		if v != most {
			x.add(code, ids[v], "the %s is %q, that of %d other injections %q", what, v, len(ids[most]), most)
		}
	}
}

// codes compares the sample codes inside files with those that the sequence states.
func (x *crossChecker) codes() {
	for i := range x.rec.Injections {
		inj, row := &x.rec.Injections[i], &x.rec.Sequence[i]
		if inj.SampleCode != "" && row.SampleCode != "" && strings.TrimSpace(inj.SampleCode) != row.SampleCode {
			x.add(OtherCode, []string{inj.ID}, "%s states the sample code %q, the sequence %q", inj.File, inj.SampleCode, row.SampleCode)
		}
	}
}
