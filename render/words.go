package render

import (
	"fmt"
	"strings"

	"assaywrit/templates"
)

// words are the texts of a language.
type words map[string]string

func loadWords(language string) (words, error) {
	w, err := templates.Load(language)
	return words(w), err
}

// get returns a text. A key that is missing is a fault of ours, and shows.
func (w words) get(key string) string {
	text, ok := w[key]
	if !ok {
		panic(fmt.Sprintf("render: internal error: no text %q", key))
	}
	return text
}

// with returns a text with its places filled: with("key", "name", value, …).
func (w words) with(key string, pairs ...string) string {
	text := w.get(key)
	for i := 0; i+1 < len(pairs); i += 2 {
		text = strings.ReplaceAll(text, "{"+pairs[i]+"}", pairs[i+1])
	}
	return text
}

// paragraphs returns a text in its paragraphs.
func (w words) paragraphs(key string) []string { return strings.Split(w.get(key), "\n") }
