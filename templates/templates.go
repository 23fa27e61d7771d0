// Package templates holds the words of the renderings, one folder a language; a new language is a new folder. There is no logic in
// it: a text is found by its key, and {name} in a text is a place for a value.
//
// A .txt file is a list of texts, each under its key in brackets. Lines of a paragraph are joined, an empty line begins a new one,
// and lines that begin with # are not read:
//
//	[package.confidential]
//	Confidential. This package may be
//	copied only as a whole.
//
// A .list file has one text a line, "key = text"; quotation marks around the text keep the spaces at its ends. The heads of a table
// are one text, with bars between the columns.
package templates

import (
	"embed"
	"fmt"
	"io/fs"
	"path"
	"strings"
)

//go:embed */*.txt */*.list
var files embed.FS

// Languages lists the folders.
func Languages() []string {
	entries, err := files.ReadDir(".")
	if err != nil {
		panic("templates: internal error: " + err.Error())
	}
	var list []string
	for _, e := range entries {
		if e.IsDir() {
			list = append(list, e.Name())
		}
	}
	return list
}

// Load returns the texts of a language by key. The error says that there is no such language, or where a file is wrong.
func Load(language string) (map[string]string, error) {
	entries, err := fs.ReadDir(files, language)
	if err != nil || language == "." {
		return nil, fmt.Errorf("there are no words for the language %q, want one of: %s", language, strings.Join(Languages(), ", "))
	}
	texts := map[string]string{}
	for _, e := range entries {
		name := language + "/" + e.Name()
		data, err := files.ReadFile(name)
		if err != nil {
			return nil, err
		}
		read := paragraphs
		if path.Ext(name) == ".list" {
			read = lines
		}
		if err := read(string(data), texts); err != nil {
			return nil, fmt.Errorf("%s: %w", name, err)
		}
	}
	return texts, nil
}

// add takes a text up; each key stands once.
func add(texts map[string]string, key, text string) error {
	if key == "" || strings.ContainsAny(key, " \t") {
		return fmt.Errorf("got the key %q, want a word", key)
	}
	if text == "" {
		return fmt.Errorf("the key %q has no text", key)
	}
	if _, twice := texts[key]; twice {
		return fmt.Errorf("the key %q a second time", key)
	}
	texts[key] = text
	return nil
}

// lines reads a .list file.
func lines(data string, texts map[string]string) error {
	for i, line := range strings.Split(data, "\n") {
		line = strings.TrimSpace(line)
		if line == "" || strings.HasPrefix(line, "#") {
			continue
		}
		key, text, ok := strings.Cut(line, "=")
		if !ok {
			return fmt.Errorf("line %d: got %q, want key = text", i+1, line)
		}
		text = strings.TrimSpace(text)
		if n := len(text); n > 2 && text[0] == '"' && text[n-1] == '"' {
			text = text[1 : n-1]
		}
		if err := add(texts, strings.TrimSpace(key), text); err != nil {
			return fmt.Errorf("line %d: %w", i+1, err)
		}
	}
	return nil
}

// paragraphs reads a .txt file.
func paragraphs(data string, texts map[string]string) error {
	key := ""
	var set, open []string
	close := func() {
		if len(open) > 0 {
			set, open = append(set, strings.Join(open, " ")), nil
		}
	}
	finish := func() error {
		close()
		text := strings.Join(set, "\n")
		set = nil
		if key == "" {
			if text != "" {
				return fmt.Errorf("got %q, want a key in brackets before it", text)
			}
			return nil
		}
		return add(texts, key, text)
	}
	for i, line := range strings.Split(data, "\n") {
		line = strings.TrimSpace(line)
		switch {
		case strings.HasPrefix(line, "#"):
		case strings.HasPrefix(line, "[") && strings.HasSuffix(line, "]"):
			if err := finish(); err != nil {
				return fmt.Errorf("before line %d: %w", i+1, err)
			}
			key = line[1 : len(line)-1]
		case line == "":
			close()
		default:
			open = append(open, line)
		}
	}
	return finish()
}
