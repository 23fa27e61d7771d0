// Package demo is the worked example: a case folder that is invented from end to end, made from a fixed seed. Its traces come from
// package simulate with a known truth. Nothing in it is real, and it proves nothing about the program.
package demo

import (
	"bytes"
	"embed"
	"fmt"
	"io/fs"
	"sort"

	"assaywrit/evidence/simulate"
)

// A File is one file of the case folder; its path has forward slashes.
type File struct {
	Path string
	Data []byte
}

//go:embed case
var texts embed.FS

// Files returns the whole case folder, sorted by path. Two calls give the same bytes.
func Files() ([]File, error) { return filesOf(simulated()) }

// filesOf is the case folder with the traces of a simulated batch.
func filesOf(b *simulate.Batch) ([]File, error) {
	var files []File
	err := fs.WalkDir(texts, "case", func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		data, err := texts.ReadFile(path)
		files = append(files, File{path[len("case/"):], data})
		return err
	})
	if err != nil {
		return nil, err
	}
	files = append(files, File{"sequence.csv", sequence()})
	for i, row := range batch {
		run, err := acquire(b, i)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", row.file(i), err)
		}
		var out bytes.Buffer
		if err := simulate.WriteMzML(&out, run); err != nil {
			return nil, fmt.Errorf("%s: %w", row.file(i), err)
		}
		files = append(files, File{row.file(i), out.Bytes()})
	}
	sort.Slice(files, func(i, j int) bool { return files[i].Path < files[j].Path })
	return files, nil
}
