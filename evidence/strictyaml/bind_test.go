package strictyaml

import (
	"fmt"
	"reflect"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func wantKit() kit {
	wait := 1.5
	return kit{Format: "kit/1", ID: "kit-a", Lot: "007", Kind: "amber", Made: "2026-03-14T16:20:00+01:00", Expires: "2027-01-31",
		Leaflet: "documents/leaflet.pdf", Remark: "keep cool", Vials: 12, Factor: 2.5, Amount: 1200, Wait: &wait, Loss: 0.15,
		Tags: []string{"a", "b"}, Box: box{Width: 100, source: source{"section 7"}}, Parts: []part{{"vial", 5}, {"cap", 5}}}
}

func TestBind(t *testing.T) {
	variants := map[string]string{
		"as written":                 goodKit,
		"byte-order mark":            "\ufeff" + goodKit,
		"CR LF":                      strings.ReplaceAll(goodKit, "\n", "\r\n"),
		"CR":                         strings.ReplaceAll(goodKit, "\n", "\r"),
		"no line feed at the end":    strings.TrimSuffix(goodKit, "\n"),
		"marked document":            "---\n" + goodKit + "...\n",
		"blank line of tabs":         strings.Replace(goodKit, "vials:", "\t\t\nvials:", 1),
		"quoted quantity":            strings.Replace(goodKit, "1.2 ug/mL", `"1.2 ug/mL"`, 1),
		"quoted text":                strings.Replace(goodKit, "lot: 007", `lot: "007"`, 1),
		"fraction as a number":       strings.Replace(goodKit, "15 %", "0.15", 1),
		"the same amount in another": strings.Replace(goodKit, "1.2 ug/mL", "1.2e3 ng/mL", 1),
		"block text":                 strings.Replace(goodKit, "remark: >-\n  keep\n  cool", "remark: |\n  keep cool\n", 1),
	}
	for name, text := range variants {
		var got kit
		doc, problems := Bind("kit.yaml", []byte(text), &got)
		if doc == nil || len(problems) > 0 {
			t.Errorf("%s: %v", name, problems)
			continue
		}
		if diff := cmp.Diff(wantKit(), got, cmp.AllowUnexported(kit{}, box{}, source{})); diff != "" {
			t.Errorf("%s: %s", name, diff)
		}
	}
}

// TestTextAsWritten: what YAML readers take for numbers, times and truth values stays the text it is.
func TestTextAsWritten(t *testing.T) {
	for _, text := range []string{"007", "1.10", "0x1F", "1_000", "1e3", "yes", "no", "true", "2026-03-14", "12:30", ".inf", "0o17", "+5", "1,5", "-", "~x", "no: 5x"} {
		value := text
		if strings.Contains(text, ": ") || text == "-" {
			value = "'" + text + "'"
		}
		var got kit
		if _, problems := Bind("kit.yaml", []byte(altered("lot: 007", "lot: "+value)), &got); len(problems) > 0 || got.Lot != text {
			t.Errorf("%s: %q, %v", text, got.Lot, problems)
		}
	}
}

// TestRefusals alters one thing each and wants one problem, at its place.
func TestRefusals(t *testing.T) {
	tests := []struct {
		name, old, replacement string
		line, column           int
		key, want              string // want: in the message or the hint
	}{
		{"unknown key", "vials: 12", "vials: 12\ncolour: red", 14, 1, "colour", `the unknown key "colour"`},
		{"unknown key that is near", "expires:", "exipres:", 7, 1, "exipres", `did you mean "expires"?`},
		{"other capitals", "expires:", "Expires:", 7, 1, "Expires", `did you mean "expires"?`},
		{"unit in the key", "wait: 90 s", "wait_min: 90 s", 16, 1, "wait_min", `the key is "wait", and the unit stands in the value`},
		{"unknown key inside", "    volume: 5 µL", "    volume: 5 µL\n    size: 3", 25, 5, "parts[0].size", "one of: name, volume"},
		{"doubled key", "used: false", "used: false\nused: false", 13, 1, "used", "a second time"},
		{"doubled key inside", "{name: cap,", "{name: cap, name: lid,", 25, 17, "parts[1].name", "a second time"},
		{"missing key", "lot: 007\n", "", 2, 1, "lot", "got no such key, want text (Lot number)"},
		{"missing key inside", "  width: 10 cm\n", "", 20, 3, "box.width", "no such key"},
		{"missing key in an item", "{name: cap, volume: 0.005 mL}", "{name: cap}", 25, 5, "parts[1].volume", "no such key"},
		{"missing embedded key", "  clause: \"section 7\"\n", "", 20, 3, "box.clause", "no such key"},
		{"nothing", "lot: 007", "lot:", 4, 5, "lot", "got nothing"},
		{"null", "lot: 007", "lot: null", 4, 6, "lot", "got nothing"},
		{"tilde", "vials: 12", "vials: ~", 13, 8, "vials", "got nothing"},
		{"empty text", "lot: 007", `lot: ""`, 4, 6, "lot", `got "", want text`},
		{"blank text", "lot: 007", `lot: "  "`, 4, 6, "lot", `want text`},
		{"too short", "  keep\n  cool", "  kp", 9, 9, "remark", "at least 3 characters"},
		{"list for a text", "lot: 007", "lot: [7]", 4, 6, "lot", "got a list"},
		{"keys for a text", "lot: 007", "lot: {a: b}", 4, 6, "lot", "got keys and values"},
		{"text for a list", "tags: [a, b]", "tags: a", 18, 7, "tags", "a list is written [a, b]"},
		{"text for keys", "box:\n  width: 10 cm\n  clause: \"section 7\"", "box: wide", 19, 6, "box", "keys and values"},
		{"colon without a blank", "box:\n  width: 10 cm\n  clause: \"section 7\"", "box:\n  width:10 cm", 20, 3, "box", "a space follows the colon"},
		{"empty list", "tags: [a, b]", "tags: []", 18, 7, "tags", "at least 1"},
		{"wrong item", "tags: [a, b]", "tags: [a, c]", 18, 11, "tags[1]", `got "c", want one of: a, b`},
		{"wrong format", "kit/1", "kit/2", 2, 9, "format", `got "kit/2", want kit/1`},
		{"not in the list", "amber", "Amber", 5, 7, "kind", `did you mean "amber"?`},
		{"pattern", "kit-a", "Kit A", 3, 5, "id", "want text of the form ^[a-z]"},
		{"truth value", "used: false", "used: no", 12, 7, "used", `got "no", want true or false`},
		{"truth value with a capital", "used: false", "used: False", 12, 7, "used", `got "False"`},
		{"quoted truth value", "used: false", "used: 'false'", 12, 7, "used", "take the quotation marks away"},
		{"fraction of a count", "vials: 12", "vials: 12.5", 13, 8, "vials", "a whole number, from 1 to 40"},
		{"count with a point", "vials: 12", "vials: 12.0", 13, 8, "vials", "a whole number"},
		{"octal count", "vials: 12", "vials: 012", 13, 8, "vials", "zeros in front"},
		{"hexadecimal count", "vials: 12", "vials: 0x1F", 13, 8, "vials", "a whole number"},
		{"underscored count", "vials: 12", "vials: 1_0", 13, 8, "vials", "a whole number"},
		{"quoted count", "vials: 12", `vials: "12"`, 13, 8, "vials", "take the quotation marks away"},
		{"count too large", "vials: 12", "vials: 41", 13, 8, "vials", "from 1 to 40"},
		{"count out of all range", "vials: 12", "vials: 99999999999999999999", 13, 8, "vials", "a whole number"},
		{"decimal comma", "factor: 2.5", "factor: 2,5", 14, 9, "factor", "write a decimal point"},
		{"naked decimal point", "factor: 2.5", "factor: .5", 14, 9, "factor", "a zero before"},
		{"infinity", "factor: 2.5", "factor: .inf", 14, 9, "factor", "a number, above 0 and up to 10"},
		{"not a number", "factor: 2.5", "factor: .nan", 14, 9, "factor", "a number"},
		{"zero", "factor: 2.5", "factor: 0", 14, 9, "factor", "above 0 and up to 10"},
		{"no unit", "1.2 ug/mL", "1200", 15, 9, "amount", "write the unit after the number"},
		{"unit of another kind", "1.2 ug/mL", "1.2 mL", 15, 9, "amount", `want a mass concentration such as "150 ng/mL"`},
		{"capital unit", "1.2 ug/mL", "1.2 UG/ML", 15, 9, "amount", "write ug/mL if that is meant"},
		{"amount of zero", "1.2 ug/mL", "0 ug/mL", 15, 9, "amount", "above 0 ng/mL"},
		{"too long", "90 s", "2 h", 16, 7, "wait", "from 0 min to 60 min"},
		{"bare per cent", "15 %", "15", 17, 7, "loss", "write 15 %"},
		{"more than all", "15 %", "115 %", 17, 7, "loss", "from 0 % to 100 %"},
		{"local date", "2026-03-14T16:20:00+01:00", "14.03.2026", 6, 7, "made", `kit.yaml:6:7: made: got "14.03.2026", want a time with its offset`},
		{"no offset", "2026-03-14T16:20:00+01:00", "2026-03-14T16:20:00", 6, 7, "made", "the offset from UTC comes last"},
		{"no time of day", "2026-03-14T16:20:00+01:00", "2026-03-14", 6, 7, "made", "the time of day"},
		{"blank for T", "2026-03-14T16:20:00+01:00", "2026-03-14 16:20:00+01:00", 6, 7, "made", "a T stands between"},
		{"comma in a time", "2026-03-14T16:20:00+01:00", "2026-03-14T16:20:00,5+01:00", 6, 7, "made", "a time"},
		{"impossible hour", "2026-03-14T16:20:00+01:00", "2026-03-14T25:20:00+01:00", 6, 7, "made", "no such day or hour"},
		{"impossible offset", "2026-03-14T16:20:00+01:00", "2026-03-14T16:20:00+99:00", 6, 7, "made", "a time"},
		{"impossible day", "2027-01-31", "2027-02-29", 7, 10, "expires", "there is no such day"},
		{"day in another order", "2027-01-31", "31/01/2027", 7, 10, "expires", "write the year first"},
		{"absolute path", `documents\leaflet.pdf`, `/etc/leaflet.pdf`, 8, 10, "leaflet", "the path begins inside the case folder"},
		{"drive", `documents\leaflet.pdf`, `C:\leaflet.pdf`, 8, 10, "leaflet", "no drive"},
		{"way out", `documents\leaflet.pdf`, `..\leaflet.pdf`, 8, 10, "leaflet", "copy it there"},
		{"way out in the middle", `documents\leaflet.pdf`, `a/../../leaflet.pdf`, 8, 10, "leaflet", "copy it there"},
		{"anchor", "lot: 007", "lot: &x 007", 4, 6, "lot", "the anchor &x"},
		{"anchor on a key", "lot: 007", "&x lot: 007", 4, 1, "", "the anchor &x"},
		{"tag", "lot: 007", "lot: !!str 007", 4, 6, "lot", "the tag !!str"},
		{"own tag", "lot: 007", "lot: !thing 007", 4, 6, "lot", "the tag !thing"},
		{"bare tag", "lot: 007", "lot: ! 007", 4, 6, "lot", "the tag !"},
		{"merge key", "  width: 10 cm", "  width: 10 cm\n  <<: {clause: x}", 21, 3, "box.<<", "a merge key"},
		{"list as a key", "vials: 12", "vials: 12\n? [a]\n: b", 14, 3, "", "a list as a key"},
		{"zero byte by an escape", "lot: 007", `lot: "0\07"`, 4, 6, "lot", "does not show"},
		{"turned text by an escape", "lot: 007", `lot: "0\u202e7"`, 4, 6, "lot", "does not show"},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			var got kit
			_, problems := Bind("kit.yaml", []byte(altered(tt.old, tt.replacement)), &got)
			problems = withoutMissing(problems, tt.name)
			if len(problems) != 1 {
				t.Fatalf("%d problems, want one:\n%v", len(problems), problems)
			}
			p := problems[0]
			if p.Line != tt.line || p.Column != tt.column || p.Key != tt.key {
				t.Errorf("at %d:%d %q, want %d:%d %q", p.Line, p.Column, p.Key, tt.line, tt.column, tt.key)
			}
			if !strings.Contains(p.Error()+"\n"+p.Hint, tt.want) {
				t.Errorf("got %q with the hint %q, want %q in them", p.Error(), p.Hint, tt.want)
			}
		})
	}
}

// withoutMissing takes away the second problem that a key which is unknown, or refused as a key, leaves: the right one is missing.
func withoutMissing(problems Problems, name string) Problems {
	if name != "anchor on a key" {
		return problems
	}
	var rest Problems
	for _, p := range problems {
		if p.Got != "no such key" {
			rest = append(rest, p)
		}
	}
	return rest
}

// TestAllAtOnce: problems of every part are listed together, in the order of the file.
func TestAllAtOnce(t *testing.T) {
	text := goodKit
	for _, change := range [][2]string{{"lot: 007\n", ""}, {"amber", "green"}, {"vials: 12", "vials: x"}, {"1.2 ug/mL", "1,2 ug/mL"}, {"5 µL", "5"}, {"clause:", "clauses:"}} {
		text = strings.Replace(text, change[0], change[1], 1)
	}
	var got kit
	_, problems := Bind("kit.yaml", []byte(text), &got)
	var keys []string
	for _, p := range problems {
		keys = append(keys, fmt.Sprintf("%d %s", p.Line, p.Key))
	}
	want := []string{"2 lot", "4 kind", "12 vials", "14 amount", "19 box.clause", "20 box.clauses", "23 parts[0].volume"}
	if !reflect.DeepEqual(keys, want) {
		t.Errorf("got %q\nwant %q", keys, want)
	}
	if lines := strings.Split(problems.Error(), "\n"); len(lines) != len(want) {
		t.Errorf("%d lines for %d problems", len(lines), len(want))
	}
}

// TestDocumentProblem: what is found later gets the place of its key, or of the nearest one above.
func TestDocumentProblem(t *testing.T) {
	var got kit
	doc, problems := Bind("kit.yaml", []byte(goodKit), &got)
	if len(problems) > 0 {
		t.Fatal(problems)
	}
	tests := []struct {
		key          string
		line, column int
	}{
		{"vials", 13, 8}, {"box.width", 20, 10}, {"box.depth", 20, 3}, {"parts[1].volume", 25, 25}, {"parts[1].colour", 25, 5}, {"parts[7].name", 23, 3}, {"else", 2, 1},
	}
	for _, tt := range tests {
		p := doc.Problem(tt.key, "this", "that", "hint")
		if p.Line != tt.line || p.Column != tt.column {
			t.Errorf("%s: %d:%d, want %d:%d", tt.key, p.Line, p.Column, tt.line, tt.column)
		}
		if want := fmt.Sprintf("kit.yaml:%d:%d: %s: got this, want that", tt.line, tt.column, tt.key); p.Error() != want {
			t.Errorf("%q, want %q", p.Error(), want)
		}
	}
}

func ExampleBind() {
	type sample struct {
		Code   string  `key:"code" doc:"Code of the sample."`
		Volume float64 `key:"volume" unit:"mL" above:"0" doc:"Volume received."`
	}
	var s sample
	_, problems := Bind("sample.yaml", []byte("code: 007\nvolume: 0.092 L\n"), &s)
	fmt.Println(s.Code, s.Volume, len(problems))

	_, problems = Bind("sample.yaml", []byte("cod: 007\nvolume: 92\n"), &s)
	for _, p := range problems {
		fmt.Println(p.Error())
		if p.Hint != "" {
			fmt.Println("hint:", p.Hint)
		}
	}
	// Output:
	// 007 92 0
	// sample.yaml:1:1: cod: got the unknown key "cod", want one of: code, volume
	// hint: did you mean "code"?
	// sample.yaml:1:1: code: got no such key, want text (Code of the sample)
	// sample.yaml:2:9: volume: got "92", want a volume such as "92 mL" (units: mL, uL, L), above 0 mL (Volume received)
	// hint: write the unit after the number, such as 92 mL
}
