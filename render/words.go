package render

import (
	"fmt"
	"strings"

	"assaywrit/templates"
)

// words are the texts of a language.
type words map[string]string

func loadWords(language string) (words, error) {
	if language == "" {
		language = "en"
	}
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

// list returns the parts of a text that bars divide: the heads of a table.
func (w words) list(key string) []string {
	parts := strings.Split(w.get(key), "|")
	for i := range parts {
		parts[i] = strings.TrimSpace(parts[i])
	}
	return parts
}

// or returns the text of a key, or what stands in the record where the language has no word for it.
func (w words) or(prefix, value string) string {
	if text, ok := w[prefix+value]; ok {
		return text
	}
	return value
}

// t returns a text with its places filled: t("key", "name", value, …).
func (d *document) t(key string, pairs ...string) string {
	text := d.words.get(key)
	if len(pairs) == 0 {
		return text
	}
	places := make([]string, len(pairs))
	for i := 0; i+1 < len(pairs); i += 2 {
		places[i], places[i+1] = "{"+pairs[i]+"}", pairs[i+1]
	}
	return strings.NewReplacer(places...).Replace(text)
}
