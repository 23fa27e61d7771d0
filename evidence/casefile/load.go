package casefile

import (
	"fmt"
	"io/fs"
	"path"
	"slices"
	"strings"
	"time"

	"assaywrit/evidence/strictyaml"
)

// CaseFile is the one file whose name is fixed; it names the others.
const CaseFile = "case.yaml"

// Problems lists everything that is wrong with a case folder.
type Problems = strictyaml.Problems

// A Problem is one of them.
type Problem = strictyaml.Problem

// Load reads and checks the case folder that fsys is. The error is Problems, with everything that is wrong in all of its files,
// or what kept a file from being read.
//
// Load looks at form and at what the files say about each other; the raw files are not opened. What depends on criteria, such as a
// reference material past its date or too few controls, is not refused here: it is part of the finding.
func Load(fsys fs.FS) (*Folder, error) {
	l := loader{fsys: fsys, folder: &Folder{}}
	var err error
	if l.present, l.problems, err = listFiles(fsys); err != nil {
		return nil, err
	}
	if !slices.Contains(l.present, CaseFile) {
		return nil, Problems{noCase(l.present)}
	}
	if err := l.readAll(); err != nil {
		return nil, err
	}
	l.check()
	if len(l.problems) > 0 {
		l.problems.Sort()
		return nil, l.problems
	}
	return l.folder, nil
}

// A loader gathers the files of a folder and their problems.
type loader struct {
	fsys      fs.FS
	folder    *Folder
	present   []string // paths of all files that belong to the folder, sorted
	caseDoc   *strictyaml.Document
	methodDoc *strictyaml.Document
	header    sequenceHeader
	problems  Problems

	caseWhole, methodWhole, sequenceWhole bool // read without a problem
}

// readAll reads case.yaml and the two files that it names.
func (l *loader) readAll() error {
	data, err := fs.ReadFile(l.fsys, CaseFile)
	if err != nil {
		return err
	}
	before := len(l.problems)
	doc, problems := strictyaml.Bind(CaseFile, data, &l.folder.Case)
	l.caseDoc = doc
	l.problems = append(l.problems, problems...)
	l.caseWhole = len(l.problems) == before
	if doc == nil {
		return nil // it names no other file
	}
	if data, err = l.read("method", l.folder.Case.MethodFile); err != nil {
		return err
	}
	if data != nil {
		l.methodDoc, problems = strictyaml.Bind(l.folder.Case.MethodFile, data, &l.folder.Method)
		l.problems = append(l.problems, problems...)
		l.methodWhole = len(problems) == 0
	}
	if err := l.readStudy(); err != nil {
		return err
	}
	if data, err = l.read("sequence", l.folder.Case.SequenceFile); err != nil {
		return err
	}
	if data != nil {
		l.folder.Injections, l.header, problems = readSequence(l.folder.Case.SequenceFile, data)
		l.problems = append(l.problems, problems...)
		l.sequenceWhole = len(problems) == 0
	}
	return nil
}

// read returns a file that the case names, or nil with a problem at the key that names it.
func (l *loader) read(key, name string) ([]byte, error) {
	if name == "" {
		return nil, nil // the key has its own problem already
	}
	if got, hint := l.missing(name); got != "" {
		l.inCase(key, got, "the path of a file in the case folder", hint)
		return nil, nil
	}
	info, err := fs.Stat(l.fsys, name)
	if err != nil {
		return nil, err
	}
	if info.Size() > strictyaml.MaxBytes {
		l.inCase(key, fmt.Sprintf("%q, a file of %d bytes", name, info.Size()), fmt.Sprintf("a file of at most %d bytes", strictyaml.MaxBytes), "")
		return nil, nil
	}
	return fs.ReadFile(l.fsys, name)
}

// check looks at each file that is whole by itself, then at those that are whole together.
func (l *loader) check() {
	if l.caseDoc == nil {
		return
	}
	if l.caseWhole {
		l.checkPeople()
		l.checkTimes()
		l.checkCustody()
		l.checkCriteria()
	}
	if l.methodWhole {
		l.checkMethod()
	}
	if l.sequenceWhole {
		l.checkRows()
	}
	if l.caseWhole && l.methodWhole {
		l.checkRequest()
	}
	if l.caseWhole && l.sequenceWhole {
		l.checkRowsOfCase()
	}
	if l.methodWhole && l.sequenceWhole {
		l.checkNominals()
	}
	if l.caseWhole && l.methodWhole && l.sequenceWhole {
		l.checkManual()
	}
	l.checkFiles()
}

func (l *loader) inCase(key, got, want, hint string) {
	l.problems = append(l.problems, l.caseDoc.Problem(key, got, want, hint))
}

func (l *loader) inMethod(key, got, want, hint string) {
	l.problems = append(l.problems, l.methodDoc.Problem(key, got, want, hint))
}

// noCase is the one problem of a folder without case.yaml.
func noCase(present []string) Problem {
	p := Problem{File: CaseFile, Got: "no such file", Want: "the case's own description",
		Hint: "a case folder holds case.yaml, a method, a sequence, raw/ and documents/; assaywrit demo writes an example"}
	for _, name := range present {
		switch {
		case path.Base(name) == CaseFile:
			p.Hint = fmt.Sprintf("there is one in %s/: give that folder", path.Dir(name))
			return p
		case strings.EqualFold(name, CaseFile) || strings.EqualFold(name, "case.yml"):
			p.Hint = fmt.Sprintf("there is %s: name it %s", name, CaseFile)
		}
	}
	return p
}

// at is the time that a text states; the binder has checked it.
func at(text string) time.Time {
	t, err := strictyaml.ParseTime(text)
	if err != nil {
		panic("casefile: internal error: unchecked time: " + err.Error())
	}
	return t
}

func quote(s string) string { return strictyaml.Quote(s) }
