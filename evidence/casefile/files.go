package casefile

import (
	"fmt"
	"io/fs"
	"path"
	"slices"
	"strings"

	"assaywrit/evidence/bundle"
	"assaywrit/evidence/strictyaml"
)

// ignored tells of files and folders that belong to no case: hidden ones, and what file browsers leave behind.
func ignored(name string) bool {
	return strings.HasPrefix(name, ".") || strings.EqualFold(name, "Thumbs.db") || strings.EqualFold(name, "desktop.ini")
}

// Files lists the paths of every file that belongs to the case, sorted: all that is in the folder but hidden files and what
// file browsers leave behind. The error is Problems where there are links, or names that a bundle cannot hold.
func (f *Folder) Files(fsys fs.FS) ([]string, error) {
	paths, problems, err := listFiles(fsys)
	if err == nil && len(problems) > 0 {
		err = problems
	}
	return paths, err
}

func listFiles(fsys fs.FS) (paths []string, problems Problems, err error) {
	folded := map[string]string{}
	err = fs.WalkDir(fsys, ".", func(p string, d fs.DirEntry, err error) error {
		switch {
		case err != nil:
			return err
		case p == ".":
			return nil
		case ignored(path.Base(p)) && d.IsDir():
			return fs.SkipDir
		case ignored(path.Base(p)) || d.IsDir():
			return nil
		case !d.Type().IsRegular():
			problems = append(problems, Problem{File: p, Got: "a link or special file", Want: "a plain file", Hint: "put the file itself into the folder"})
		}
		if err := bundle.CheckPath(p); err != nil {
			problems = append(problems, Problem{File: p, Got: "a name that not every system can hold: " + err.Error(), Want: "a plain name", Hint: "rename the file"})
		}
		if other, twice := folded[strings.ToLower(p)]; twice {
			problems = append(problems, Problem{File: p, Got: "a name that differs from " + other + " in capitals alone", Want: "names that every system tells apart", Hint: "rename one of the two"})
		}
		folded[strings.ToLower(p)] = p
		paths = append(paths, p)
		return nil
	})
	slices.Sort(paths)
	return paths, problems, err
}

// missing says why a file that something names is not there, with advice; it is empty where the file is there.
func (l *loader) missing(name string) (got, hint string) {
	if slices.Contains(l.present, name) {
		return "", ""
	}
	for _, part := range strings.Split(name, "/") {
		if ignored(part) {
			return fmt.Sprintf("%q, a hidden file", name), "hidden files do not become part of a bundle: rename it without the point in front"
		}
	}
	for _, p := range l.present {
		switch {
		case strings.HasPrefix(p, name+"/"):
			return fmt.Sprintf("%q, a folder", name), ""
		case strings.EqualFold(p, name):
			return fmt.Sprintf("%q, which is not there", name), fmt.Sprintf("there is %s: capital and small letters differ", p)
		}
	}
	return fmt.Sprintf("%q, which is not there", name), strictyaml.Suggest(name, l.present)
}

// checkFiles compares the folder with what the case and the sequence name.
func (l *loader) checkFiles() {
	c := &l.folder.Case
	known := map[string]bool{CaseFile: true, c.MethodFile: true, c.SequenceFile: true, c.Criteria: true}
	for i, d := range c.Documents {
		key := fmt.Sprintf("documents[%d].file", i)
		if got, hint := l.missing(d.File); d.File != "" && got != "" {
			l.inCase(key, got, "the path of a file in the case folder", hint)
		}
		if d.File != "" && known[d.File] {
			l.inCase(key, quote(d.File)+" a second time", "each file once", "")
		}
		known[d.File] = true
	}
	for _, row := range l.folder.Injections {
		if got, hint := l.missing(row.File); row.File != "" && got != "" {
			l.inSequence(row, "file", got, "the path of a file in the case folder", hint)
		}
		known[row.File] = true
	}
	for key, name := range map[string]string{"separation_study": c.Study, "control_history": c.ControlHistory} {
		if name == "" {
			continue
		}
		known[name] = true
		if got, hint := l.missing(name); key == "control_history" && got != "" {
			l.inCase(key, got, "the path of a file in the case folder", hint)
		}
	}
	for _, f := range l.folder.StudyFiles() {
		known[f] = true
	}
	for _, a := range l.folder.Method.Analytes {
		if a.Spectrum != nil && a.Spectrum.Reference != nil {
			known[a.Spectrum.Reference.File] = true
		}
	}
	if !l.caseWhole || !l.sequenceWhole || c.Study != "" && l.folder.Study == nil || l.methodDoc != nil && !l.methodWhole {
		return // what they name is not known as a whole
	}
	for _, p := range l.present {
		if known[p] {
			continue
		}
		hint := "list it under documents in " + CaseFile + ", or take it out of the folder"
		if strings.HasPrefix(p, "raw/") {
			hint = "every acquired file has its row in the sequence; one that is not used has the role excluded and a note with the reason"
		}
		l.problems = append(l.problems, Problem{File: p, Got: "a file that nothing in the case names", Want: "every file of the folder to be named", Hint: hint})
	}
}

// checkCriteria: a criteria set with a path is a file of the folder; one without is built in, and looked for where it is used.
func (l *loader) checkCriteria() {
	c := &l.folder.Case
	if !strings.ContainsAny(c.Criteria, `/\`) && path.Ext(c.Criteria) != ".yaml" && path.Ext(c.Criteria) != ".yml" {
		return
	}
	const want = "the name of a built-in criteria set, or the path of a file in the case folder"
	p, err := strictyaml.ParsePath(c.Criteria)
	if err != nil {
		l.inCase("criteria", quote(c.Criteria), want, strictyaml.PathHint(c.Criteria))
		return
	}
	c.Criteria = p
	if got, hint := l.missing(p); got != "" {
		if hint == "" {
			hint = "assaywrit criteria NAME prints a built-in set, as a start for your own"
		}
		l.inCase("criteria", got, want, hint)
	}
}
