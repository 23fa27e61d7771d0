package casefile

import (
	"errors"
	"fmt"
	"io/fs"
	"path"
	"slices"
	"strings"

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
func Load(fsys fs.FS) (*Folder, error) {
	data, err := fs.ReadFile(fsys, CaseFile)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, Problems{{File: CaseFile, Got: "no such file", Want: "the case's own description",
			Hint: "a case folder holds case.yaml, a method, a sequence, raw/ and documents/; assaywrit demo writes an example"}}
	}
	if err != nil {
		return nil, err
	}
	l := loader{fsys: fsys, folder: &Folder{}}
	l.caseDoc, l.problems = strictyaml.Bind(CaseFile, data, &l.folder.Case)
	if l.caseDoc == nil {
		return nil, l.problems
	}
	if err := l.method(); err != nil {
		return nil, err
	}
	if err := l.sequence(); err != nil {
		return nil, err
	}
	if len(l.problems) == 0 { // what follows needs files that are whole by themselves
		l.checkCase()
		l.checkCustody()
		l.checkMethod()
		l.checkSequence()
		l.checkManual()
	}
	if err := l.checkFiles(); err != nil {
		return nil, err
	}
	if len(l.problems) > 0 {
		l.problems.Sort()
		return nil, l.problems
	}
	return l.folder, nil
}

type loader struct {
	fsys      fs.FS
	folder    *Folder
	caseDoc   *strictyaml.Document
	methodDoc *strictyaml.Document
	header    sequenceHeader
	problems  Problems
}

func (l *loader) inCase(key, got, want, hint string) {
	l.problems = append(l.problems, l.caseDoc.Problem(key, got, want, hint))
}

func (l *loader) inMethod(key, got, want, hint string) {
	p := l.methodDoc.Problem(key, got, want, hint)
	l.problems = append(l.problems, p)
}

// read returns a file that the case names, or nil with a problem at the key that names it.
func (l *loader) read(key, name string) ([]byte, error) {
	if name == "" {
		return nil, nil // the key has its own problem already
	}
	data, err := fs.ReadFile(l.fsys, name)
	if errors.Is(err, fs.ErrNotExist) {
		l.inCase(key, fmt.Sprintf("%q, which is not there", name), "the path of a file in the case folder", "")
		return nil, nil
	}
	return data, err
}

func (l *loader) method() error {
	data, err := l.read("method", l.folder.Case.MethodFile)
	if data == nil || err != nil {
		return err
	}
	doc, problems := strictyaml.Bind(l.folder.Case.MethodFile, data, &l.folder.Method)
	l.methodDoc = doc
	l.problems = append(l.problems, problems...)
	return nil
}

func (l *loader) sequence() error {
	data, err := l.read("sequence", l.folder.Case.SequenceFile)
	if data == nil || err != nil {
		return err
	}
	rows, header, problems := readSequence(l.folder.Case.SequenceFile, data)
	l.folder.Injections, l.header = rows, header
	l.problems = append(l.problems, problems...)
	return nil
}

// ignored are files that systems leave in folders; they belong to no case.
var ignored = []string{"Thumbs.db", "desktop.ini"}

// Files lists the paths of every file that belongs to the case, sorted: all that is in the folder but hidden files and what
// file browsers leave behind.
func (f *Folder) Files(fsys fs.FS) ([]string, error) { return listFiles(fsys) }

func listFiles(fsys fs.FS) ([]string, error) {
	var paths []string
	err := fs.WalkDir(fsys, ".", func(p string, d fs.DirEntry, err error) error {
		name := path.Base(p)
		switch {
		case err != nil:
			return err
		case p == ".":
			return nil
		case strings.HasPrefix(name, ".") || slices.Contains(ignored, name):
			if d.IsDir() {
				return fs.SkipDir
			}
			return nil
		case d.IsDir():
			return nil
		case !d.Type().IsRegular():
			return &Problem{File: p, Got: "a link or special file", Want: "a plain file", Hint: "put the file itself into the folder"}
		}
		paths = append(paths, p)
		return nil
	})
	slices.Sort(paths)
	return paths, err
}
