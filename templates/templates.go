// Package templates holds the words of the renderings, one folder a language. A file is a list of texts, each under its key in
// brackets; there is no logic in it. {name} in a text is a place for a value.
package templates

import (
	"embed"
	"fmt"
	"strings"
)

//go:embed en
var files embed.FS

// Languages lists the folders.
func Languages() []string { return []string{"en"} }

// Load returns the texts of a language by key.
func Load(language string) (map[string]string, error) {
	entries, err := files.ReadDir(language)
	if err != nil {
		return nil, fmt.Errorf("there are no words for the language %q", language)
	}
	texts := map[string]string{}
	for _, e := range entries {
		data, err := files.ReadFile(language + "/" + e.Name())
		if err != nil {
			return nil, err
		}
		if err := parse(string(data), texts); err != nil {
			return nil, fmt.Errorf("%s/%s: %w", language, e.Name(), err)
		}
	}
	return texts, nil
}

// parse reads [key] lines and the paragraphs below them. Lines of a paragraph are joined; an empty line begins a new one.
func parse(data string, texts map[string]string) error {
	key := ""
	var paragraphs []string
	var lines []string
	endParagraph := func() {
		if len(lines) > 0 {
			paragraphs = append(paragraphs, strings.Join(lines, " "))
			lines = nil
		}
	}
	end := func() error {
		endParagraph()
		if key != "" {
			if _, twice := texts[key]; twice {
				return fmt.Errorf("the key %q a second time", key)
			}
			texts[key] = strings.Join(paragraphs, "\n")
		}
		paragraphs = nil
		return nil
	}
	for _, line := range strings.Split(data, "\n") {
		line = strings.TrimSpace(line)
		switch {
		case strings.HasPrefix(line, "#"):
		case strings.HasPrefix(line, "[") && strings.HasSuffix(line, "]"):
			if err := end(); err != nil {
				return err
			}
			key = line[1 : len(line)-1]
		case line == "":
			endParagraph()
		default:
			lines = append(lines, line)
		}
	}
	return end()
}
