package main

import (
	"fmt"
	"io/fs"
	"os"

	"assaywrit/evidence/bundle"
	"assaywrit/evidence/casefile"
)

// openBundle opens a bundle by its path. A file that is no acceptable bundle ends with the status of a changed file.
func openBundle(path string) (*bundle.Bundle, func() error, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, nil, err
	}
	info, err := f.Stat()
	if err == nil && !info.Mode().IsRegular() {
		err = &failure{exitUsage, fmt.Errorf("%s: is not a file, want a bundle (a zip file)", path), "a case folder is built first: assaywrit build " + path}
	}
	if err != nil {
		f.Close()
		return nil, nil, err
	}
	b, err := bundle.Open(f, info.Size())
	if err != nil {
		f.Close()
		return nil, nil, &failure{exitFiles, fmt.Errorf("%s: %w", path, err), "the file is not a bundle as assaywrit writes it, or it was damaged; compare its SHA-256 with the sender's"}
	}
	return b, f.Close, nil
}

// bundledCriteria takes the criteria set from the bundle that holds it, whatever the case names.
func bundledCriteria(b *bundle.Bundle) criteriaSource {
	return func(fs.FS, casefile.Case) (string, []byte, error) {
		var found []string
		for _, p := range b.PayloadPaths() {
			if len(p) > len(criteriaFolder) && p[:len(criteriaFolder)] == criteriaFolder {
				found = append(found, p)
			}
		}
		if len(found) != 1 {
			return "", nil, &failure{exitFiles, fmt.Errorf("data/%s: holds %d files, want the one criteria set", criteriaFolder, len(found)), ""}
		}
		data, err := b.ReadPayload(found[0])
		return found[0][len(criteriaFolder):], data, err
	}
}
