package evidence

import (
	"fmt"
	"io/fs"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/validation"
)

// A ControlHistory is the controls of earlier batches as charts, and what these say of the controls of this batch.
type ControlHistory struct {
	File      string               `json:"file"`
	Charts    []validation.Chart   `json:"charts"`
	Judgement validation.Judgement `json:"judgement"`
}

// controlHistory reads the table that the case names, makes its charts and places this batch's controls on them. Analytes are told by their
// ids; a table without a column analyte is for the only one of the method.
func controlHistory(fsys fs.FS, folder *casefile.Folder, rec *Record) (*ControlHistory, error) {
	name := folder.Case.ControlHistory
	if name == "" {
		return nil, nil
	}
	data, err := fs.ReadFile(fsys, name)
	if err != nil {
		return nil, err
	}
	earlier, problems := validation.ReadHistory(name, data)
	if len(problems) > 0 {
		return nil, problems
	}
	charts, err := validation.Charts(earlier, validation.UsualDrift())
	if err != nil {
		return nil, casefile.Problems{{File: name, Got: err.Error(), Want: "at least three controls of each level, that differ", Hint: "take the level out of the table, or add more batches"}}
	}
	out := &ControlHistory{File: name, Charts: charts}
	alone := len(charts) > 0 && charts[0].Analyte == ""
	if alone && len(rec.Method.Analytes) != 1 {
		return nil, casefile.Problems{{File: name, Line: 1, Column: 1, Got: "a table without a column analyte", Want: fmt.Sprintf("one, as the method has %d analytes", len(rec.Method.Analytes))}}
	}
	var batch []validation.Control
	for _, a := range rec.Analytes {
		for _, c := range a.Controls {
			if c.NGPerML == nil {
				continue
			}
			of := a.ID
			if alone {
				of = ""
			}
			batch = append(batch, validation.Control{Analyte: of, Batch: rec.Case.Number, Level: c.Level, Nominal: c.NominalNGPerML, Found: *c.NGPerML})
		}
	}
	if out.Judgement, err = validation.Judge(charts, batch); err != nil {
		return nil, casefile.Problems{{File: name, Got: err.Error(), Want: "the history of earlier batches alone"}}
	}
	return out, nil
}
