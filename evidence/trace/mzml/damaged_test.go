package mzml

import (
	"encoding/base64"
	"errors"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

var update = flag.Bool("update", false, "write the damaged files anew")

const damagedFolder = "../../../testdata/damaged"

// A damage is a kind of damage: its file, and what the refusal must say.
type damage struct {
	name string
	data string
	want string // part of the message
}

// changed are ten values with one of them replaced.
func changed(v []float64, i int, x float64) []float64 {
	v = append([]float64(nil), v...)
	v[i] = x
	return v
}

// damages makes each damaged file.
func damages(t testing.TB) []damage {
	good := whole(t)
	change := func(old, new string) string { return replaced(t, good, old, new) }
	arrays := func(n int, times, ints string) string { return fileOf(chromatogramOf("300.2 > 91.1", n, times, ints)) }
	tt, yy := timeArray(t, someTimes), intensityArray(t, someInts)
	plain := func(raw []byte) string {
		return arrayOf(accPlain, base64.StdEncoding.EncodeToString(raw), accIntensity, counts)
	}
	squeezed := func(change func(raw []byte) []byte) string {
		raw, err := base64.StdEncoding.DecodeString(packed(t, floats(someInts)))
		if err != nil {
			t.Fatal(err)
		}
		return arrays(10, tt, arrayOf(accZlib, base64.StdEncoding.EncodeToString(change(raw)), accIntensity, counts))
	}
	text := packed(t, floats(someInts))
	return append(append(xmlDamages(t, good), spectrumDamages(t)...), []damage{
		{"truncated_base64", arrays(10, tt, arrayOf(accZlib, text[:len(text)-3], accIntensity, counts)), "damaged base64 (illegal base64 data"},
		{"foreign_base64_character", change(text, text[:20]+"*"+text[21:]), "damaged base64 (illegal base64 data at input byte 20)"},
		{"lying_array_length", change(`defaultArrayLength="10"`, `defaultArrayLength="11"`), "zlib data that holds 80 bytes, want zlib data of 88 bytes"},
		{"lying_plain_array_length", arrays(11, timeArray(t, append(someTimes, 2)), plain(floats(someInts))), "an array of 80 bytes, want 88, for 11 numbers of 8 bytes"},
		{"short_array_length", change(`defaultArrayLength="10"`, `defaultArrayLength="9"`), "zlib data that holds more than 72 bytes"},
		{"unequal_array_lengths", arrays(10, tt, replaced(t, intensityArray(t, someInts[:9]), "<binaryDataArray ", `<binaryDataArray arrayLength="9" `)),
			`10 times and 9 intensities at point 10 of the chromatogram "300.2 > 91.1", want as many of each`},
		{"bad_array_length", change(`defaultArrayLength="10"`, `defaultArrayLength="ten"`), `defaultArrayLength "ten", want a number of points`},
		{"lying_encoded_length", change(fmt.Sprintf(`encodedLength="%d"`, len(text)), `encodedLength="4"`), fmt.Sprintf(`%d characters of base64, want 4, as encodedLength says`, len(text))},
		{"missing_encoded_length", change(fmt.Sprintf(` encodedLength="%d"`, len(text)), ""), "array without encodedLength"},
		{"odd_byte_count", arrays(10, tt, plain(floats(someInts)[:79])), "an array of 79 bytes, want 80"},
		{"truncated_zlib", squeezed(func(raw []byte) []byte { return raw[:len(raw)-9] }), "damaged zlib data (data that ends early)"},
		{"wrong_zlib_checksum", squeezed(func(raw []byte) []byte { raw[len(raw)-1] ^= 1; return raw }), "damaged zlib data (a checksum that does not fit)"},
		{"wrong_zlib_header", squeezed(func(raw []byte) []byte { raw[0] = 0; return raw }), "damaged zlib data (no zlib header)"},
		{"text_after_zlib", squeezed(func(raw []byte) []byte { return append(raw, "more"...) }), "4 bytes after the end of the zlib data"},
		{"zlib_bomb", arrays(10, tt, arrayOf(accZlib, packed(t, make([]byte, 1<<20)), accIntensity, counts)), "zlib data that holds more than 80 bytes"},
		{"zlib_claim_beyond_data", change(`defaultArrayLength="10"`, `defaultArrayLength="500000"`), "bytes of zlib data, which cannot hold that much"},
		{"points_beyond_memory", change(`defaultArrayLength="10"`, `defaultArrayLength="2000000000"`), "chromatograms that take far more memory than the file"},
		{"backwards_time", arrays(10, timeArray(t, changed(someTimes, 6, 1.045)), yy), `a time of 1.045 min at point 7 of the chromatogram "300.2 > 91.1", want one after 1.05 min`},
		{"repeated_time", arrays(10, timeArray(t, changed(someTimes, 6, 1.05)), yy), `a time of 1.05 min at point 7 of the chromatogram "300.2 > 91.1", want one after 1.05 min`},
		{"infinite_time", arrays(10, timeArray(t, changed(someTimes, 9, math.Inf(1))), yy), "a time of +Inf at point 10"},
		{"nan_intensity", arrays(10, tt, intensityArray(t, changed(someInts, 4, math.NaN()))), `an intensity of NaN at point 5 of the chromatogram "300.2 > 91.1", want a finite number`},
		{"infinite_intensity", arrays(10, tt, intensityArray(t, changed(someInts, 4, math.Inf(-1)))), "an intensity of -Inf at point 5"},
		{"inexact_integer", replaced(t, arrays(10, tt, plain(floats(someInts))), "<cvParam cvRef=\"MS\" accession=\"MS:1000523\" name=\"\"/>\n            "+param(accPlain, ""), param(accInt64, "")+param(accPlain, "")),
			"at most 2^53, up to which every integer is exact"},
		{"missing_time_unit", change(minutes, ""), "a time array without a unit, want seconds (UO:0000010) or minutes (UO:0000031)"},
		{"unknown_time_unit", change("UO:0000031", "UO:0000032"), `a time array in the unit "UO:0000032"`},
		{"scaled_intensities", change("MS:1000131", "MS:1000132"), "intensities in percent of base peak (MS:1000132), want intensities as acquired"},
		{"missing_number_kind", change(param(accFloat64, ""), ""), "the time array without the kind of its numbers"},
		{"two_number_kinds", change(param(accFloat64, ""), param(accFloat64, "")+param(accFloat32, "")), "an array that is both MS:1000523 and MS:1000521"},
		{"half_precision", change(accFloat64, "MS:1000520"), "the time array as 16-bit floats (MS:1000520)"},
		{"missing_compression", change(param(accZlib, ""), ""), "the time array without its compression"},
		{"numpress_count", pressedTimes(t, `defaultArrayLength="10"`, `defaultArrayLength="9"`), "MS-Numpress data of 10 numbers, want MS-Numpress data of 9 numbers"},
		{"numpress_cut", cutTimes(t), "MS-Numpress data that are cut"},
		{"numpress_scale", scaledTimes(t), "MS-Numpress data with the scale 0"},
		{"zstd_array", change(accZlib, "MS:1003780"), "the time array in zstd compression (MS:1003780)"},
		{"missing_intensity_array", change(accIntensity, "MS:1000517"), `the chromatogram "300.2 > 91.1" without its time or intensity array`},
		{"second_time_array", fileOf(chromatogramOf("300.2 > 91.1", 10, tt, tt, yy)), `a second array of one kind in the chromatogram "300.2 > 91.1"`},
		{"array_in_two_pieces", change(text, text[:40]+"<!-- -->"+text[40:]), "an array in two pieces"},
		{"repeated_chromatogram_id", fileOf(chromatogramOf("a", 10, tt, yy), chromatogramOf("a", 10, tt, yy)), `the chromatogram id "a", want an id that no other chromatogram has`},
		{"missing_chromatogram_id", change(`id="300.2 > 91.1"`, `id=""`), `the chromatogram id ""`},
		{"bad_precursor_mz", change(`value="300.2"`, `value="0x12c"`), `m/z "0x12c" in the chromatogram "300.2 > 91.1"`},
		{"negative_product_mz", change(`value="91.1"`, `value="-91.1"`), `m/z "-91.1"`},
		{"two_product_mz", change(param(accTarget, ` value="91.1"`), param(accTarget, ` value="91.1"`)+param(accTarget, ` value="92.1"`)), "the m/z 91.1 and 92.1 for one product"},
		{"two_polarities", change(param(accPositive, ""), param(accPositive, "")+param(accNegative, "")), "the polarities positive and negative"},
		{"two_chromatogram_types", change(param("MS:1001473", ""), param("MS:1001473", "")+param("MS:1000235", "")), "the chromatogram types MS:1001473 and MS:1000235"},
		{"repeated_sample_id", change(`<sample id="s1" name="C-0001"/>`, `<sample id="s1" name="C-0001"/><sample id="s1" name="C-0002"/>`), `the sample id "s1", want an id that no other has`},
		{"repeated_parameter_group", change("<sampleList", `<referenceableParamGroupList><referenceableParamGroup id="g"/><referenceableParamGroup id="g"/></referenceableParamGroupList><sampleList`), `the parameter group id "g"`},
		{"second_precursor", change("<product>", "<precursor></precursor><product>"), `a second element "precursor" inside "chromatogram"`},
		{"unknown_parameter_group", change(param(accPositive, ""), `<referenceableParamGroupRef ref="g"/>`), `a reference to the parameter group "g"`},
	}...)
}

// xmlDamages are those of the file's frame.
func xmlDamages(t testing.TB, good string) []damage {
	change := func(old, new string) string { return replaced(t, good, old, new) }
	half := strings.Index(good, "<product>")
	return []damage{
		{"cut_file", good[:half], `the element "chromatogram", which has no end`},
		{"cut_tag", good[:half+5], `the tag "prod", which is cut`},
		{"cut_attribute", good[:strings.Index(good, `="300.2 `)+5], `the attribute "id", which is cut`},
		{"unclosed_tag", change("</chromatogramList>", ""), `"</run>", want </chromatogramList>`},
		{"misspelt_tag", change("</product>", "</produkt>"), `"</produkt>", want </product>`},
		{"unclosed_comment", change("<run", "<!-- <run"), `"<!--" without its end`},
		{"billion_laughs", replaced(t, good, "<mzML", billionLaughs()+"<mzML"), "billion_laughs.mzML:2:1: got \"<!DOCTYPE\""},
		{"doctype_entity", change("<mzML", "<!DOCTYPE mzML [<!ENTITY a \"aaaaaaaaaa\">]>\n<mzML"), `"<!DOCTYPE", want elements only`},
		{"literal_section", change("<run", "<![CDATA[ ]]><run"), `"<![CDATA[", want elements only`},
		{"unknown_entity", change(`name="C-0001"`, `name="&code;"`), `the entity "&code" in the attribute "name"`},
		{"forbidden_character_number", change(`name="C-0001"`, `name="&#0;"`), `the entity "&#0" in the attribute "name"`},
		{"control_character", change(`name="C-0001"`, "name=\"C\x01\""), `the control character 0x01 in the attribute "name"`},
		{"entity_in_array", change("<binary>", "<binary>&amp;"), "an entity in the text"},
		{"unquoted_attribute", change(`name="C-0001"`, `name=C-0001`), `the attribute "name" without quotes`},
		{"attribute_without_value", change(`name="C-0001"`, `name`), `an attribute with a value`},
		{"tag_in_attribute", change(`name="C-0001"`, `name="<b>"`), `< in the attribute "name", want &lt;`},
		{"repeated_attribute", change(`name="C-0001"`, `name="C-0001" name="C-0002"`), `the attribute "name" a second time in "sample"`},
		{"attributes_run_together", change(`id="s1" name`, `id="s1"name`), `in the tag "sample", want an attribute, or >`},
		{"text_between_elements", change("<run", "see below <run"), `text in the element "mzML" ("see below ")`},
		{"text_after_root", good + "more", `text outside the root element ("more")`},
		{"second_root", good + "<mzML></mzML>", "a second root element"},
		{"second_run", change("<run", "<run></run><run"), `a second element "run" inside "mzML"`},
		{"chromatogram_in_chromatogram", change("<product>", `<chromatogram id="b" defaultArrayLength="0"></chromatogram><product>`), `the element "chromatogram" inside "chromatogram", want it inside chromatogramList`},
		{"too_deep", change("<run", strings.Repeat("<a>", 80)+"<run"), "nesting that goes too deep"},
		{"foreign_root", strings.ReplaceAll(good, "mzML", "html"), `the root element "html", want mzML or indexedmzML`},
		{"draft_version", replaced(t, change("http://psi.hupo.org/ms/mzml", "http://psi.hupo.org/schema_revision/mzML_0.99.1"), `version="1.1.0"`, `version="0.99.1"`), `mzML version "0.99.1", want version 1.0 or 1.1`},
		{"later_version", change(`version="1.1.0"`, `version="2.0"`), `mzML version "2.0", want version 1.0 or 1.1`},
		{"foreign_namespace", change("http://psi.hupo.org/ms/mzml", "http://example.org/mzml"), `mzML in the namespace "http://example.org/mzml"`},
		{"unknown_encoding", change(`encoding="utf-8"`, `encoding="EBCDIC"`), `text in the encoding "EBCDIC", want UTF-8 or ISO-8859-1`},
		{"not_utf8", change(`name="C-0001"`, "name=\"C-\xb5\""), `text that is not UTF-8 in the attribute "name"`},
		{"utf16", "\xff\xfe<\x00m\x00z\x00M\x00L\x00/\x00>\x00", "text in UTF-16"},
		{"no_element", "<?xml version=\"1.0\"?>\n<!-- nothing -->\n", "a file without an element"},
	}
}

// TestDamaged refuses each damaged file, with a message of its own.
func TestDamaged(t *testing.T) {
	if _, err := Read("whole.mzML", strings.NewReader(whole(t))); err != nil {
		t.Fatalf("the file without damage: %v", err)
	}
	listed, messages := map[string]bool{}, map[string]bool{}
	for _, d := range damages(t) {
		file := d.name + ".mzML"
		if listed[file] || messages[d.want] {
			t.Fatalf("%s or its message is listed twice", file)
		}
		listed[file], messages[d.want] = true, true
		path := filepath.Join(damagedFolder, file)
		if *update {
			if err := os.WriteFile(path, []byte(d.data), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		t.Run(d.name, func(t *testing.T) {
			data, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			if string(data) != d.data {
				t.Error("the file is not what its generator makes: run go test -update and look at the difference")
			}
			err = readEverything(file, data)
			var syntax *trace.SyntaxError
			if !errors.As(err, &syntax) {
				t.Fatalf("got %v, want a refusal", err)
			}
			if !strings.Contains(err.Error(), d.want) || syntax.Line < 1 || syntax.Column < 1 || syntax.Want == "" {
				t.Errorf("got %v, want %s", err, d.want)
			}
		})
	}
	files, err := filepath.Glob(filepath.Join(damagedFolder, "*.mzML"))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		if !listed[filepath.Base(f)] {
			t.Errorf("%s is not in the list", f)
		}
	}
}

// TestCutAnywhere cuts a good file at every byte: no beginning of it is read as a whole file.
func TestCutAnywhere(t *testing.T) {
	good := strings.TrimRight(whole(t), "\n")
	for n := range len(good) {
		if f, err := Read("cut.mzML", strings.NewReader(good[:n])); err == nil {
			t.Fatalf("the first %d of %d bytes were read: %d chromatograms", n, len(good), len(f.Chromatograms))
		}
	}
}

// TestAnyByteOfAnArray changes each character of the arrays in turn: either the file is refused, or its values are the same.
func TestAnyByteOfAnArray(t *testing.T) {
	good := whole(t)
	want, err := Read("good.mzML", strings.NewReader(good))
	if err != nil {
		t.Fatal(err)
	}
	refusals := 0
	for from := 0; ; {
		i := strings.Index(good[from:], "<binary>")
		if i < 0 {
			break
		}
		from += i + len("<binary>")
		for at := from; good[at] != '<'; at++ {
			for _, c := range []byte("Aa0/=\n") {
				if c == good[at] {
					continue
				}
				f, err := Read("changed.mzML", strings.NewReader(good[:at]+string(c)+good[at+1:]))
				if err != nil {
					refusals++
					continue
				}
				if !sameValues(f.Chromatograms[0], want.Chromatograms[0]) {
					t.Fatalf("%q at byte %d changed the values unseen", c, at)
				}
			}
		}
	}
	if refusals < 500 {
		t.Errorf("only %d refusals", refusals)
	}
}

func sameValues(a, b trace.Chromatogram) bool {
	return fmt.Sprint(a.TimeMin, a.Intensity) == fmt.Sprint(b.TimeMin, b.Intensity)
}

// billionLaughs is a document type whose last entity stands for ten to the ninth words.
func billionLaughs() string {
	text := "<!DOCTYPE mzML [<!ENTITY l0 \"ha\">"
	for i := range 9 {
		text += fmt.Sprintf("<!ENTITY l%d \"%s\">", i+1, strings.Repeat(fmt.Sprintf("&l%d;", i), 10))
	}
	return text + "]>\n"
}
