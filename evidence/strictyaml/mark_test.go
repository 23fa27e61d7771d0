package strictyaml

import (
	"fmt"
	"regexp"
	"strings"
	"testing"
)

// TestMarkIsRefused puts the mark in the place of each value in turn, however it is written: one problem, at its place, with what is
// wanted.
func TestMarkIsRefused(t *testing.T) {
	tests := []struct {
		name, old, replacement string
		line, column           int
		key, want              string
	}{
		{"text", "lot: 007", "lot: FILL-IN", 4, 6, "lot", "text (Lot number)"},
		{"text in quotes", "lot: 007", `lot: "FILL-IN"`, 4, 6, "lot", "text (Lot number)"},
		{"text with blanks", "lot: 007", `lot: " FILL-IN "`, 4, 6, "lot", "text (Lot number)"},
		{"block text", "remark: >-\n  keep\n  cool", "remark: |\n  FILL-IN\n", 9, 9, "remark", "text of at least 3 characters (What else there is to say)"},
		{"optional text", "leaflet: documents\\leaflet.pdf", "leaflet: FILL-IN", 8, 10, "leaflet", "the path of a file inside the folder, such as raw/010.mzML (The leaflet)"},
		{"pattern", "id: kit-a", "id: FILL-IN", 3, 5, "id", "text of the form ^[a-z][a-z0-9-]*$ (Name of the kit)"},
		{"one of a few", "kind: amber", "kind: FILL-IN", 5, 7, "kind", "one of: red, amber, none (Kind of the kit)"},
		{"format", "kit/1", "FILL-IN", 2, 9, "format", "kit/1 (Format of this file)"},
		{"time", "2026-03-14T16:20:00+01:00", "FILL-IN", 6, 7, "made", `a time with its offset, such as "2026-03-14T16:20:00+01:00" (When it was made)`},
		{"date", "2027-01-31", "FILL-IN", 7, 10, "expires", `a date such as "2026-03-14" (Last day of use)`},
		{"truth value", "used: false", "used: FILL-IN", 12, 7, "used", "true or false (true: opened)"},
		{"truth value in quotes", "used: false", "used: 'FILL-IN'", 12, 7, "used", "true or false (true: opened)"},
		{"count", "vials: 12", "vials: FILL-IN", 13, 8, "vials", "a whole number, from 1 to 40 (How many vials)"},
		{"number", "factor: 2.5", "factor: FILL-IN", 14, 9, "factor", "a number, above 0 and up to 10 (A plain factor)"},
		{"quantity", "90 s", "FILL-IN", 16, 7, "wait", `from 0 min to 60 min (Time to stand)`},
		{"fraction", "15 %", "FILL-IN", 17, 7, "loss", "from 0 % to 100 % (What may be lost)"},
		{"item", "tags: [a, b]", "tags: [a, FILL-IN]", 18, 11, "tags[1]", "one of: a, b (Tags)"},
		{"list", "tags: [a, b]", "tags: FILL-IN", 18, 7, "tags", "a list (Tags)"},
		{"keys", "box:\n  width: 10 cm\n  clause: \"section 7\"", "box: FILL-IN", 19, 6, "box", "keys and values (The box)"},
		{"key of an item", "{name: cap, volume: 0.005 mL}", "{name: cap, volume: FILL-IN}", 25, 25, "parts[1].volume", "above 0 uL (What it holds)"},
	}
	for _, tt := range tests {
		var got kit
		_, problems := Bind("kit.yaml", []byte(altered(tt.old, tt.replacement)), &got)
		if len(problems) != 1 {
			t.Errorf("%s: %d problems: %v", tt.name, len(problems), problems)
			continue
		}
		p := problems[0]
		if p.Line != tt.line || p.Column != tt.column || p.Key != tt.key || p.Got != "the mark FILL-IN" || !strings.HasSuffix(p.Want, tt.want) {
			t.Errorf("%s: %v, want %s at %d:%d: %s", tt.name, &p, tt.key, tt.line, tt.column, tt.want)
		}
	}
}

// TestMarkInText: inside a longer text, or in other letters, it is no mark.
func TestMarkInText(t *testing.T) {
	for _, text := range []string{"a FILL-IN", "FILL-INS", "fill-in", "FILL-IN FILL-IN", "FILL IN"} {
		var got kit
		if _, problems := Bind("kit.yaml", []byte(altered("lot: 007", "lot: "+text)), &got); len(problems) > 0 || got.Lot != text {
			t.Errorf("%s: %q, %v", text, got.Lot, problems)
		}
	}
}

var someMark = regexp.MustCompile(`^[^#]*?\bFILL-IN\b`)

// markPlaces finds the marks of a template by its text alone: the comments begin with a blank and the sign, and no value holds these.
func markPlaces(text string) map[string]bool {
	places := map[string]bool{}
	for i, line := range strings.Split(text, "\n") {
		line, _, _ = strings.Cut(" "+line, " #")
		if m := someMark.FindString(line); m != "" {
			places[fmt.Sprintf("%d:%d", i+1, len([]rune(m))-len(Mark))] = true
		}
	}
	return places
}

// TestTemplate: whatever is known, the problems of a template are its marks, each once, and they are as many as Write says.
func TestTemplate(t *testing.T) {
	tests := map[string]Template{
		"nothing known": {},
		"nearly everything known": {
			Values: map[string]any{"format": "kit/1", "id": "kit-a", "lot": "007", "kind": "none", "made": "2026-03-14T16:20:00+01:00", "expires": "2027-01-31", "leaflet": "documents/a, b # c.pdf",
				"remark": `"quoted": \ é`, "vials": 12, "factor": 2.5, "amount": Mark, "wait": Mark, "loss": 0.15, "tags[0]": "a", "tags[1]": Mark,
				"box.width": Mark, "box.clause": "null", "spare.clause": "7: a", "parts[0].name": "vial", "parts[1].name": "- cap", "parts[1].volume": Mark},
			Lists: map[string]int{"tags": 2, "parts": 3},
			Notes: map[string][]string{"parts": {"of the kit", "two\nlines \u200b\u202e"}, "parts[1]": {"a cap"}, "parts[1].volume": {"of the cap"}, "lot": {"a lot"}},
			Head:  []string{"A kit.", ""},
		},
		"empty list": {Lists: map[string]int{"tags": 0}, Values: map[string]any{"parts[0].name": "x"}},
	}
	for name, tt := range tests {
		data, marks := tt.Write(kit{})
		var got kit
		_, problems := Bind("kit.yaml", data, &got)
		if name == "empty list" {
			problems = without(problems, "tags") // which needs an item
		}
		want := markPlaces(string(data))
		if len(want) != marks || len(problems) != marks {
			t.Errorf("%s: %d marks by Write, %d in the text, %d problems\n%s\n%v", name, marks, len(want), len(problems), data, problems)
		}
		for _, p := range problems {
			if place := fmt.Sprintf("%d:%d", p.Line, p.Column); !want[place] || p.Got != MarkFound {
				t.Errorf("%s: %v", name, &p)
			}
		}
		if name == "nearly everything known" && (got.Lot != "007" || got.Remark != `"quoted": \ é` || got.Leaflet != "documents/a, b # c.pdf" || got.Parts[1].Name != "- cap" || got.Box.Clause != "null") {
			t.Errorf("%s: values came back as %+v", name, got)
		}
	}
}

func without(ps Problems, key string) Problems {
	var list Problems
	for _, p := range ps {
		if p.Key != key {
			list = append(list, p)
		}
	}
	return list
}

// TestTemplateUncommented: a comment that is a key becomes one when its sign is taken away, and then holds marks alone.
func TestTemplateUncommented(t *testing.T) {
	data, marks := Template{}.Write(kit{})
	sign := regexp.MustCompile(`(?m)^( *)# `)
	text := sign.ReplaceAllString(string(data), "$1")
	var got kit
	_, problems := Bind("kit.yaml", []byte(text), &got)
	if len(problems) <= marks+4 {
		t.Errorf("%d problems, %d of them without the comments\n%s", len(problems), marks, text)
	}
	for _, p := range problems {
		if p.Got != MarkFound {
			t.Errorf("%v\n%s", &p, text)
		}
	}
}
