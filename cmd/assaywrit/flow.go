package main

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"io/fs"
	"path"
	"runtime"
	"sort"

	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/bundle"
	"assaywrit/evidence/canonical"
	"assaywrit/evidence/casefile"
	"assaywrit/render"
)

// Where things lie in a bundle's payload.
const (
	caseFolder     = "inputs/case/"
	criteriaFolder = "inputs/criteria/"
	evidencePath   = "evidence/evidence.json"
	findingPath    = "decision/finding.json"
	packagePDF     = "report/package.pdf"
	findingPDF     = "report/finding.pdf"
)

// An assessment is a case worked through, from its files to the finding.
type assessment struct {
	folder       *casefile.Folder
	evaluation   *evidence.Evaluation
	set          *decision.Set
	setName      string // file name of the criteria set in the bundle
	setData      []byte
	finding      *decision.Finding
	evidenceJSON []byte
	findingJSON  []byte
	tables       []bundle.Payload
}

// A criteriaSource gives the criteria set that a case names: its file name and its bytes.
type criteriaSource func(fsys fs.FS, c casefile.Case) (string, []byte, error)

// assess is the whole flow from a case folder to the finding. Building and verifying both go through it.
func assess(fsys fs.FS, criteria criteriaSource) (*assessment, error) {
	folder, err := casefile.Load(fsys)
	if err != nil {
		return nil, err
	}
	a := &assessment{folder: folder}
	if a.setName, a.setData, err = criteria(fsys, folder.Case); err != nil {
		return nil, err
	}
	if a.set, err = decision.Parse(a.setName, a.setData); err != nil {
		return nil, err
	}
	if problems := decision.Applicable(a.set, folder.Case, folder.Method); len(problems) > 0 {
		return nil, problems
	}
	if a.evaluation, err = evidence.Evaluate(fsys, folder, engine()); err != nil {
		return nil, err
	}
	return a, a.decide()
}

func (a *assessment) decide() (err error) {
	rec := a.evaluation.Record
	if a.evidenceJSON, err = canonical.Marshal(rec); err != nil {
		return err
	}
	if a.finding, err = decision.Decide(rec, hexSum(a.evidenceJSON), a.set, hexSum(a.setData)); err != nil {
		return err
	}
	if a.findingJSON, err = canonical.Marshal(a.finding); err != nil {
		return err
	}
	for _, t := range evidence.Tables(rec) {
		data, err := t.CSV()
		if err != nil {
			return err
		}
		a.tables = append(a.tables, bundle.Payload{Path: "evidence/" + t.Name + ".csv", Data: data})
	}
	return nil
}

// chosenCriteria finds a built-in criteria set by its name, or a laboratory's own by its path in the case folder.
func chosenCriteria(fsys fs.FS, c casefile.Case) (string, []byte, error) {
	if data, ok := decision.BuiltIn(c.Criteria); ok {
		return c.Criteria + ".yaml", data, nil
	}
	data, err := fs.ReadFile(fsys, c.Criteria)
	if err != nil {
		return "", nil, casefile.Problems{{
			File: "case.yaml", Key: "criteria", Got: c.Criteria, Want: "the path of a file in the case folder, or one of: " + listed(decision.BuiltInNames()),
			Hint: "assaywrit criteria NAME prints a built-in set, as a start for your own",
		}}
	}
	return path.Base(c.Criteria), data, nil
}

// seal renders an assessment and packs it: the unsigned bundle, and the two PDFs. The same build gives the same bytes.
func (a *assessment) seal(fsys fs.FS) (zip []byte, pdfs map[string][]byte, err error) {
	payload, err := a.payload(fsys)
	if err != nil {
		return nil, nil, err
	}
	in := render.Input{
		Record: a.evaluation.Record, Finding: a.finding, Traces: a.evaluation, Criteria: a.set,
		EvidenceSHA256: hexSum(a.evidenceJSON), FindingSHA256: hexSum(a.findingJSON),
	}
	for _, p := range payload {
		in.Files = append(in.Files, render.File{Path: "data/" + p.Path, Bytes: int64(len(p.Data)), SHA256: hexSum(p.Data)})
	}
	var finding, whole bytes.Buffer
	if _, err := render.Finding(&finding, in); err != nil {
		return nil, nil, err
	}
	in.Files = append(in.Files, render.File{Path: "data/" + findingPDF, Bytes: int64(finding.Len()), SHA256: hexSum(finding.Bytes())})
	if _, err := render.Package(&whole, in); err != nil {
		return nil, nil, err
	}
	pdfs = map[string][]byte{findingPDF: finding.Bytes(), packagePDF: whole.Bytes()}
	payload = append(payload, bundle.Payload{Path: findingPDF, Data: pdfs[findingPDF]}, bundle.Payload{Path: packagePDF, Data: pdfs[packagePDF]})
	var out bytes.Buffer
	if _, err := bundle.Write(&out, a.header(), payload); err != nil {
		return nil, nil, err
	}
	return out.Bytes(), pdfs, nil
}

// payload is everything but the PDFs, sorted by path.
func (a *assessment) payload(fsys fs.FS) ([]bundle.Payload, error) {
	list := []bundle.Payload{
		{Path: criteriaFolder + a.setName, Data: a.setData},
		{Path: evidencePath, Data: a.evidenceJSON},
		{Path: findingPath, Data: a.findingJSON},
	}
	list = append(list, a.tables...)
	for _, in := range a.evaluation.Record.Inputs {
		data, err := fs.ReadFile(fsys, in.Path)
		if err != nil {
			return nil, err
		}
		if hexSum(data) != in.SHA256 {
			return nil, &failure{exitFailed, errors.New(in.Path + ": changed while it was being read"), "let nothing write to the case folder, and build again"}
		}
		list = append(list, bundle.Payload{Path: caseFolder + in.Path, Data: data})
	}
	sort.Slice(list, func(i, j int) bool { return list[i].Path < list[j].Path })
	return list, nil
}

func (a *assessment) header() bundle.Header {
	c := a.evaluation.Record.Case
	h := bundle.Header{
		Case: c.Number, SampleCode: c.Sample.Code, Laboratory: c.Laboratory.Code,
		EngineName: engineName, EngineVersion: engineVersion, Toolchain: runtime.Version(), Demonstration: c.Demonstration,
	}
	for _, s := range c.Signatories {
		h.Signatories = append(h.Signatories, bundle.Signatory{Person: s.Person, Position: positionOf(c, s.Person), Meaning: s.Meaning})
	}
	if c.Supersedes != nil {
		h.Supersedes = &bundle.Supersedes{Root: c.Supersedes.Root, Reason: c.Supersedes.Reason}
	}
	return h
}

func positionOf(c casefile.Case, person string) string {
	for _, p := range c.People {
		if p.Code == person {
			return p.Position
		}
	}
	return ""
}

func hexSum(data []byte) string {
	sum := sha256.Sum256(data)
	return hex.EncodeToString(sum[:])
}
