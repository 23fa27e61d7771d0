package evidence

import (
	"errors"
	"fmt"
	"io/fs"
	"math"
	"path"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/separation"
	"assaywrit/evidence/trace"
)

// A SeparationStudy is what scouting runs say of the composition of the mobile phase.
type SeparationStudy struct {
	File   string             `json:"file"`
	Study  casefile.Study     `json:"study"`
	Runs   []ScoutRun         `json:"runs"`
	Result *separation.Result `json:"result"`
}

// A ScoutRun is one run of a study with the peaks that were taken.
type ScoutRun struct {
	File      string      `json:"file"`
	SHA256    string      `json:"sha256"`
	Format    string      `json:"file_format"`
	StartTime string      `json:"file_start_time,omitempty"`
	TraceID   string      `json:"trace_id"`
	Unit      string      `json:"intensity_unit,omitempty"`
	Peaks     []peak.Peak `json:"peaks"`
	LeftOut   int         `json:"peaks_left_out,omitempty"` // smaller than the study asks for, or not named

	runTrace trace.Chromatogram
}

// Trace is the chromatogram of the run, for drawing.
func (r *ScoutRun) Trace() trace.Chromatogram { return r.runTrace }

// namedWithin is how far a named peak may lie from where it is said to be, minutes.
const namedWithin = 0.2

// Scout reads the runs of a study, whose files are named from the folder of file, and analyses them. The error joins one for each run that
// could not be used.
func Scout(fsys fs.FS, file string, study *casefile.Study) (*SeparationStudy, error) {
	out := &SeparationStudy{File: file, Study: *study}
	var problems []error
	var runs []separation.Run
	for _, r := range study.Runs {
		run, scouted, err := scoutRun(fsys, path.Join(path.Dir(file), r.File), r, study)
		if err != nil {
			problems = append(problems, err)
			continue
		}
		out.Runs, runs = append(out.Runs, *scouted), append(runs, *run)
	}
	if err := errors.Join(problems...); err != nil {
		return nil, err
	}
	limits := separation.Limits{TimeMin: study.Limits.TimeMin, Resolution: study.Limits.Resolution}
	if v := study.Limits.LowestK; v != nil {
		limits.MinK = *v
	}
	if v := study.Limits.HighestK; v != nil {
		limits.MaxK = *v
	}
	var err error
	if out.Result, err = separation.Analyse(runs, limits); err != nil {
		return nil, fmt.Errorf("%s: %w", file, err)
	}
	return out, nil
}

func scoutRun(fsys fs.FS, name string, r casefile.StudyRun, study *casefile.Study) (*separation.Run, *ScoutRun, error) {
	_, sum, err := hashFile(fsys, name)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, nil, &trace.SyntaxError{File: name, Got: "no such file", Want: "the run that the study names"}
	}
	if err != nil {
		return nil, nil, err
	}
	src, done, err := open(fsys, name)
	if err != nil {
		return nil, nil, err
	}
	defer done()
	raw, err := readRaw(name, src, study.Tables)
	if err != nil {
		return nil, nil, err
	}
	c, err := scoutTrace(name, raw, study)
	if err != nil {
		return nil, nil, err
	}
	found, err := peak.Detect(c, study.Integration.Parameters)
	if err != nil {
		return nil, nil, fmt.Errorf("%s: trace %q: %w", name, c.ID, err)
	}
	run := &separation.Run{Name: r.File, VoidMin: study.VoidTimeMin}
	if r.Phi != nil {
		run.Phi = *r.Phi
	}
	if g := r.Gradient; g != nil {
		run.Gradient = &separation.Gradient{StartPhi: g.StartPhi, EndPhi: g.EndPhi, TimeMin: g.TimeMin, DwellMin: g.DwellMin}
	}
	scouted := &ScoutRun{File: name, SHA256: sum, Format: formatName(raw), StartTime: raw.StartTime, TraceID: c.ID, Unit: c.Unit, runTrace: c}
	if err := choosePeaks(name, found.Peaks, r, study, run, scouted); err != nil {
		return nil, nil, err
	}
	return run, scouted, nil
}

func scoutTrace(name string, raw *trace.File, study *casefile.Study) (trace.Chromatogram, error) {
	tol := 0.3
	if study.ToleranceMZ != nil {
		tol = *study.ToleranceMZ
	}
	if study.Trace.Ion == nil {
		return findTrace(name, raw, study.Trace, tol, 0, "the study")
	}
	m := &casefile.Method{Analytes: []casefile.Analyte{{Quantifier: study.Trace}}, Identification: casefile.Identification{TransitionTolMZ: tol}}
	all, err := extractAll(name, raw, m)
	if err != nil {
		return trace.Chromatogram{}, err
	}
	x := ionTraceOf(study.Trace, tol)
	return all[x.id()], nil
}

// choosePeaks takes the peaks that are named, or all that are not too small. A peak without its width at half height cannot serve.
func choosePeaks(name string, peaks []peak.Peak, r casefile.StudyRun, study *casefile.Study, run *separation.Run, scouted *ScoutRun) error {
	largest := 0.0
	for _, p := range peaks {
		largest = max(largest, p.Area)
	}
	taken := map[int]bool{}
	for i, p := range peaks {
		compound := ""
		if len(r.Peaks) > 0 {
			for _, n := range r.Peaks {
				if math.Abs(p.ApexMin-n.RetentionMin) <= namedWithin && nearestTo(peaks, n.RetentionMin) == i {
					compound = n.Compound
				}
			}
		}
		if len(r.Peaks) > 0 && compound == "" || p.Area < float64(study.SmallestPeak*largest) || p.ApexMin <= study.VoidTimeMin {
			scouted.LeftOut++
			continue
		}
		if p.WidthHalfMin == nil {
			return &trace.SyntaxError{File: name, Got: fmt.Sprintf("a peak at %.3f min without a width at half height", p.ApexMin), Want: "peaks that can be measured",
				Hint: "a neighbour hides it: name the peaks of the study, or leave the run out"}
		}
		for _, f := range p.Flags {
			if f == peak.FlagSaturated || f == peak.FlagCutAtStart || f == peak.FlagCutAtEnd {
				return &trace.SyntaxError{File: name, Got: fmt.Sprintf("a peak at %.3f min that is flagged %s", p.ApexMin, f), Want: "peaks that were recorded as a whole", Hint: "inject less, or record longer"}
			}
		}
		taken[i] = true
		run.Peaks = append(run.Peaks, separation.Peak{Compound: compound, RetentionMin: p.ApexMin, WidthHalfMin: *p.WidthHalfMin, Area: p.Area})
		scouted.Peaks = append(scouted.Peaks, p)
	}
	for _, n := range r.Peaks {
		if k := nearestTo(peaks, n.RetentionMin); k < 0 || !taken[k] || math.Abs(peaks[k].ApexMin-n.RetentionMin) > namedWithin {
			return &trace.SyntaxError{File: name, Got: fmt.Sprintf("no peak of %q", n.Compound), Want: fmt.Sprintf("one within %g min of %g min", namedWithin, n.RetentionMin), Hint: "assaywrit show FILE tells what a run holds"}
		}
	}
	return nil
}

func nearestTo(peaks []peak.Peak, at float64) int {
	best := -1
	for i, p := range peaks {
		if best < 0 || math.Abs(p.ApexMin-at) < math.Abs(peaks[best].ApexMin-at) {
			best = i
		}
	}
	return best
}
