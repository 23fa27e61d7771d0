package casefile

import (
	"fmt"
	"path"
	"slices"

	"assaywrit/evidence/strictyaml"
)

// A Study is a separation study, format assaywrit-study/1: scouting runs of one mixture at several compositions of the mobile phase. Its
// files are named from the folder in which it lies.
//
//	format: assaywrit-study/1
//	title: Choice of the composition
//	solvent: acetonitrile
//	void_time: 1.2 min
//	trace: {trace_id: UV 254}
//	integration: {smoothing_points: 9, min_signal_to_noise: 10, min_width: 0.03 min, shared_valley: perpendicular-drop, valley_fraction: 0}
//	smallest_peak: 1 %
//	limits: {time: 15 min, resolution: 1.5}
//	runs:
//	  - {file: run-30.mzML, composition: 30 %}
//	  - file: run-45.mzML
//	    composition: 45 %
//	    peaks: [{compound: a, retention: 2.1 min}, {compound: b, retention: 2.6 min}]
type Study struct {
	Format       string        `json:"format" key:"format" enum:"assaywrit-study/1" doc:"Format of this file and its version."`
	Title        string        `json:"title" key:"title" doc:"What was studied."`
	Solvent      string        `json:"solvent" key:"solvent" doc:"The stronger solvent."`
	VoidTimeMin  float64       `json:"void_time_min" key:"void_time" unit:"min" above:"0" doc:"Hold-up time of the column at the flow of the study."`
	Trace        Transition    `json:"trace" key:"trace" doc:"The trace in which all compounds are seen."`
	ToleranceMZ  *float64      `json:"transition_tolerance_mz,omitempty" key:"transition_tolerance,optional" above:"0" max:"1" doc:"How far recorded m/z may lie from that of the trace; 0.3 without it."`
	Tables       []TableLayout `json:"tables,omitempty" key:"tables,optional" doc:"How delimited text files are laid out."`
	Integration  Integration   `json:"integration" key:"integration" doc:"How peaks are found and integrated."`
	SmallestPeak float64       `json:"smallest_peak" key:"smallest_peak" unit:"fraction" min:"0" max:"1" doc:"Smaller peaks are left out, as a share of the largest area of the run."`
	Limits       StudyLimits   `json:"limits" key:"limits" doc:"What the separation is asked for."`
	Runs         []StudyRun    `json:"runs" key:"runs" minitems:"2" doc:"The runs, at different compositions or with gradients of different slope."`
}

type StudyLimits struct {
	TimeMin    float64  `json:"time_min" key:"time" unit:"min" above:"0" doc:"Longest time of a run."`
	Resolution float64  `json:"resolution" key:"resolution" above:"0" max:"20" doc:"Resolution to be kept when the composition drifts, such as 1.5."`
	LowestK    *float64 `json:"lowest_k,omitempty" key:"lowest_k,optional" above:"0" doc:"Smallest retention factor."`
	HighestK   *float64 `json:"highest_k,omitempty" key:"highest_k,optional" above:"0" doc:"Largest retention factor."`
}

type StudyRun struct {
	File     string      `json:"file" key:"file" format:"path" doc:"The raw file, from the folder of the study."`
	Phi      *float64    `json:"composition,omitempty" key:"composition,optional" unit:"fraction" min:"0" max:"1" doc:"Share of the stronger solvent, of an isocratic run."`
	Gradient *Gradient   `json:"gradient,omitempty" key:"gradient,optional" doc:"A straight gradient, instead of a composition."`
	Peaks    []NamedPeak `json:"peaks,omitempty" key:"peaks,optional" doc:"Which peak is which compound; without it they are told by their areas."`
}

type Gradient struct {
	StartPhi float64 `json:"start" key:"start" unit:"fraction" min:"0" max:"1" doc:"Share of the stronger solvent at the start."`
	EndPhi   float64 `json:"end" key:"end" unit:"fraction" min:"0" max:"1" doc:"And at the end."`
	TimeMin  float64 `json:"time_min" key:"time" unit:"min" above:"0" doc:"From start to end."`
	DwellMin float64 `json:"dwell_min" key:"dwell" unit:"min" min:"0" doc:"Until the gradient reaches the column."`
}

type NamedPeak struct {
	Compound     string  `json:"compound" key:"compound" doc:"Name of the compound, the same in every run."`
	RetentionMin float64 `json:"retention_min" key:"retention" unit:"min" above:"0" doc:"Where its peak is, to 0.2 min."`
}

// BindStudy reads a study; the problems list everything that is wrong with it.
func BindStudy(file string, data []byte) (*Study, *strictyaml.Document, Problems) {
	s := &Study{}
	doc, problems := strictyaml.Bind(file, data, s)
	if len(problems) > 0 {
		return nil, doc, problems
	}
	report := func(key, got, want string) { problems = append(problems, doc.Problem(key, got, want, "")) }
	if t := s.Trace; t.Ion == nil && t.TraceID == "" && t.PrecursorMZ == 0 {
		report("trace", "nothing that names a trace", "trace_id, precursor and product, or ion")
	}
	for i, r := range s.Runs {
		key := fmt.Sprintf("runs[%d]", i)
		if (r.Phi == nil) == (r.Gradient == nil) {
			report(key, "a run with both a composition and a gradient, or neither", "one of them")
		}
		if slices.ContainsFunc(s.Runs[:i], func(o StudyRun) bool { return o.File == r.File }) {
			report(key+".file", quote(r.File)+" a second time", "a file of its own for each run")
		}
	}
	problems.Sort()
	return s, doc, problems
}

// readStudy reads the study that the case names.
func (l *loader) readStudy() error {
	name := l.folder.Case.Study
	if name == "" {
		return nil
	}
	data, err := l.read("separation_study", name)
	if data == nil {
		return err
	}
	study, doc, problems := BindStudy(name, data)
	l.problems = append(l.problems, problems...)
	if len(problems) > 0 || study == nil {
		return nil
	}
	l.folder.Study = study
	for i, r := range study.Runs {
		if got, hint := l.missing(path.Join(path.Dir(name), r.File)); got != "" {
			l.problems = append(l.problems, doc.Problem(fmt.Sprintf("runs[%d].file", i), got, "the path of a file from the folder of the study", hint))
		}
	}
	return nil
}

// StudyFiles lists the files of a study, by their paths in the case folder.
func (f *Folder) StudyFiles() []string {
	if f.Study == nil {
		return nil
	}
	var list []string
	for _, r := range f.Study.Runs {
		list = append(list, path.Join(path.Dir(f.Case.Study), r.File))
	}
	return list
}
