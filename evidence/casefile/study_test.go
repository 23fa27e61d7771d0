package casefile

import (
	"os"
	"strings"
	"testing"
)

// smallStudy is the study of the documentation of Study.
var smallStudy = func() string {
	text, err := os.ReadFile("study.go")
	if err != nil {
		panic(err)
	}
	var lines []string
	for _, line := range strings.Split(string(text), "\n") {
		if rest, ok := strings.CutPrefix(line, "//\t"); ok {
			lines = append(lines, rest)
		}
	}
	return strings.Join(lines, "\n") + "\n"
}()

func TestDocumentedStudy(t *testing.T) {
	s, _, problems := BindStudy("study.yaml", []byte(smallStudy))
	if len(problems) > 0 {
		t.Fatal(problems)
	}
	if s.VoidTimeMin != 1.2 || *s.Runs[1].Phi != 0.45 || s.Runs[1].Peaks[1].Compound != "b" || s.Limits.Resolution != 1.5 {
		t.Errorf("got %+v", s)
	}
	for _, tt := range []struct{ old, new, want string }{
		{"trace: {trace_id: UV 254}", "trace: {polarity: positive}", "trace: got nothing that names a trace"},
		{"composition: 30 %}", "composition: 30 %, gradient: {start: 5 %, end: 60 %, time: 10 min, dwell: 0 min}}", "runs[0]: got a run with both a composition and a gradient, or neither"},
		{"file: run-45.mzML", "file: run-30.mzML", "a second time"},
		{"composition: 30 %", "composition: 130 %", "composition"},
	} {
		_, _, problems := BindStudy("study.yaml", []byte(strings.Replace(smallStudy, tt.old, tt.new, 1)))
		if len(problems) == 0 || !strings.Contains(problems.Error(), tt.want) {
			t.Errorf("%s: got %v, want %s", tt.new, problems, tt.want)
		}
	}
}
