package render

import (
	"strings"
	"unicode/utf8"
)

// A piece is what stays on one line: a word, or a part of a long one.
type piece struct {
	text  string
	width float64
	space bool    // a space stands before it, unless it begins a line
	rest  float64 // width of what follows in the same word
}

// unitWords stay on the line of their number.
var unitWords = map[string]bool{
	"%": true, "ng/mL": true, "ug/mL": true, "µg/mL": true, "mg/mL": true, "pg/mL": true, "ug/L": true, "µg/L": true, "mg/L": true, "mL": true, "min": true,
	"counts": true, "counts·min": true, "°C": true, "mm": true, "uL": true, "µL": true, "mL/min": true, "±": true,
}

// longWord is the length from which a word may be divided after its separators.
const longWord = 14

// pieces divides clean text. A number and its unit stay together, and so does what stands around a plus-minus or equals sign.
func (r *ruler) pieces(f face, size float64, s string) []piece {
	words := strings.FieldsFunc(s, func(c rune) bool { return c == ' ' })
	list := make([]piece, 0, len(words))
	add := func(text string, space bool) {
		list = append(list, piece{text: text, width: r.width(f, size, text), space: space})
	}
	for i := 0; i < len(words); i++ {
		word := words[i]
		for i+1 < len(words) && glued(word, words[i+1]) {
			i++
			word += "\u00a0" + words[i]
		}
		first, begin := true, len(list)
		for len(word) >= longWord {
			cut := divide(word)
			if cut == len(word) {
				break
			}
			add(word[:cut], first)
			word, first = word[cut:], false
		}
		add(word, first)
		for k := len(list) - 2; k >= begin; k-- {
			list[k].rest = list[k+1].rest + list[k+1].width
		}
	}
	return list
}

func glued(before, after string) bool {
	last, _ := utf8.DecodeLastRuneInString(before)
	digit := last >= '0' && last <= '9'
	bare := strings.TrimRight(after, ".,;:)")
	return digit && unitWords[bare] || strings.HasSuffix(before, "\u00a0±") || before == "±" || before == "=" || after == "=" || strings.HasSuffix(before, "\u00a0=")
}

// divide is the place after the first separator at which a long word may be divided, or its length. Dates and numbers stay whole.
func divide(word string) int {
	for i := 2; i+2 < len(word); i++ {
		switch word[i] {
		case '/', '_', '|', '?', '&', ';':
			return i + 1
		case '-', '.', ',', ':', '=':
			if next := word[i+1]; next < '0' || next > '9' {
				return i + 1
			}
		}
	}
	return len(word)
}

// lines breaks text into lines that fit a width, in millimetres. Line ends in it are kept; a piece that is too wide is cut.
func (r *ruler) lines(f face, size, width float64, text string) []string {
	var out []string
	for _, part := range strings.Split(text, "\n") {
		part = r.clean(f, part)
		if w := r.width(f, size, part); w <= width && !strings.Contains(part, "  ") {
			out = append(out, part)
			continue
		}
		out = append(out, r.fill(f, size, width, part)...)
	}
	return out
}

func (r *ruler) fill(f face, size, width float64, text string) []string {
	var out []string
	blank := r.width(f, size, " ")
	line, used := "", 0.0
	for _, p := range r.pieces(f, size, text) {
		gap := 0.0
		if p.space && line != "" {
			gap = blank
		}
		whole := p.width + p.rest // a word that fits a line is not divided
		if line != "" && (used+gap+p.width > width || p.space && used+gap+whole > width && whole <= width) {
			out = append(out, line)
			line, used, gap = "", 0, 0
		}
		for p.width > width && len(p.text) > 1 {
			cut := r.cut(f, size, width, p.text)
			out = append(out, p.text[:cut])
			p.text = p.text[cut:]
			p.width = r.width(f, size, p.text)
		}
		if gap > 0 {
			line += " "
		}
		line += p.text
		used += gap + p.width
	}
	return append(out, line)
}

// cut is the length of the longest beginning of text that fits, at least one sign.
func (r *ruler) cut(f face, size, width float64, text string) int {
	for i := range text {
		if i > 0 {
			_, n := utf8.DecodeRuneInString(text[i:])
			if r.width(f, size, text[:i+n]) > width {
				return i
			}
		}
	}
	return len(text)
}

// widest is the width of the widest piece of a text: a column must not be narrower.
func (r *ruler) widest(f face, size float64, text string) float64 {
	most := 0.0
	for _, part := range strings.Split(text, "\n") {
		for _, p := range r.pieces(f, size, r.clean(f, part)) {
			most = max(most, p.width)
		}
	}
	return most
}
