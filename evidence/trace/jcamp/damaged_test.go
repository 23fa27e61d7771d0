package jcamp

import (
	"bytes"
	"errors"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

var update = flag.Bool("update", false, "write the damaged files anew")

const damagedFolder = "../../../testdata/damaged"

// A damage is a kind of damage: its file, and what the refusal says after the file's name.
type damage struct{ name, data, want string }

func damages(t testing.TB) []damage {
	change := func(old, new string) string { return replaced(t, whole1, old, new) }
	pairs := func(list string) string {
		return replaced(t, replaced(t, replaced(t, whole1, "(X++(Y..Y))", "(XY..XY)"), someLines, list), "XFACTOR= 0.01", "XFACTOR= 1")
	}
	mass := run("SECONDS", "60", "61")
	page := func(old, new string) string { return replaced(t, mass, old, new) }
	return []damage{
		{"failed_y_check", change("K19", "K18"), `:20: got the ordinate 1839 at the end of the line, want 1840, with which the next line begins (Y-check)`},
		{"failed_last_y_check", change("109I", "109H"), `:21: got the ordinate 9 at the end of the line, want 8, with which the next line begins (Y-check)`},
		{"failed_x_check", change("104A", "108A"), `:21:1: got a line that begins at the abscissa 108, want one near 104, after as many points (X-check)`},
		{"missing_line", change("104A840P80j450r80j69j2\n109I\n", ""), `:20: got 5 points in the table of line 19, want 10, as ##NPOINTS= states`},
		{"fewer_points", change("NPOINTS= 10", "NPOINTS= 11"), `:22: got 10 points in the table of line 19, want 11, as ##NPOINTS= states`},
		{"more_points", change("NPOINTS= 10", "NPOINTS= 9"), `:21: got more than 9 points, want 9, as ##NPOINTS= states`},
		{"repeat_beyond_points", change("100A2L", "100A2S9999999"), `:20: got more than 10 points, want 10, as ##NPOINTS= states`},
		{"repeat_bomb", replaced(t, replaced(t, change("##NPOINTS= 10\n", ""), "##LASTX= 1.09", "##DELTAX= 0.01"), "100A2L", "100A2S9999999"), `:19: got more points than a file of this size may hold, want at most 1048576 and one for every two bytes`},
		{"repeat_of_nothing", change("100A2L", "100SA2"), `:20:4: got "SA2mK19J610", a repeat count, want one from 1 to 9007199254740992 after an ordinate of the line`},
		{"difference_first", change("104A840", "104K840"), `:21:4: got "K840", a difference, want an ordinate at the beginning of a line`},
		{"too_large_difference", change("K19", "K19999999999999999"), `:20:8: got "K19999999999999999J6", want a whole number up to 9007199254740992`},
		{"missing_ordinate", change("100A2L", "100A2?L"), `:20:6: got "?", want an ordinate in AFFN, PAC, SQZ, DIF or DUP form`},
		{"line_without_ordinates", change("109I", "109"), `:22:4: got a line without ordinates, want an ordinate after the abscissa`},
		{"text_among_ordinates", change("104A840", "paused"), `:21:1: got "pausedP80j450r80j69j", want an abscissa at the beginning of the line`},
		{"comma_without_ordinate", change("104A840", "104 1840,,"), `:21:10: got a comma without an ordinate, want an ordinate between commas`},
		{"ambiguous_exponent", change("A2L", " 1.2E1 "), `:20:5: got "1.2E1 mK19J610", want an exponent with a sign and two or three digits`},
		{"no_time_unit", change("##XUNITS= MINUTES\n", ""), `:18:1: got a chromatogram over "", want an x axis in MINUTES or SECONDS`},
		{"foreign_x_unit", change("MINUTES", "1/CM"), `:19:1: got a chromatogram over "1/CM", want an x axis in MINUTES or SECONDS`},
		{"other_data_type", change("GC CHROMATOGRAM", "NMR FID"), `:19:1: got data of the type "NMR FID" over "MINUTES", want a chromatogram or mass spectra`},
		{"no_data_type", change("##DATA TYPE= GC CHROMATOGRAM\n", ""), `:18:1: got data without ##DATA TYPE=, want a chromatogram or mass spectra`},
		{"backwards_time", pairs(strings.Replace(tenPairs(), "1.04,", "1.02,", 1)), `:19:1: got a time of 1.02 min at point 5, want one after 1.03 min`},
		{"missing_step", replaced(t, change("##LASTX= 1.09\n", ""), "##FIRSTX= 1.00\n", ""), `:17:1: got a table of the form (X++(Y..Y)) without its step, want ##FIRSTX=, ##LASTX= and ##NPOINTS=, or ##DELTAX=, before it`},
		{"second_factor", change("##YFACTOR= 1\n", "##YFACTOR= 1\n##YFACTOR= 2\n"), `:13:1: got a second ##YFACTOR= "2", want one of them, as in line 12`},
		{"factor_zero", change("##YFACTOR= 1", "##YFACTOR= 0"), `:12:1: got ##YFACTOR= "0", want a factor other than 0`},
		{"factor_no_number", change("##YFACTOR= 1", "##YFACTOR= one"), `:12:1: got ##YFACTOR= "one", want a number`},
		{"overflowing_factor", change("##YFACTOR= 1", "##YFACTOR= 1E307"), `:19: got point 4 of the table times its factors, want a number that 64 bits hold`},
		{"broken_point_count", change("NPOINTS= 10", "NPOINTS= 10.5"), `:15:1: got ##NPOINTS= "10.5", want a whole number of points`},
		{"unknown_form", change("(X++(Y..Y))", "(T++(Y..Y))"), `:19:1: got ##XYDATA= "(T++(Y..Y))", want (X++(Y..Y)) or (XY..XY)`},
		{"missing_form", change("= (X++(Y..Y))", "="), `:19:1: got ##XYDATA= "", want (X++(Y..Y)) or (XY..XY) alone in its line`},
		{"missing_equals_sign", change("##MINY= 9", "##MINY 9"), `:18:1: got the record "##MINY 9" without an equals sign, want a label between ## and =`},
		{"no_end_or_count", replaced(t, replaced(t, strings.TrimSuffix(whole1, "##END=\n"), "##NPOINTS= 10\n", ""), "##LASTX= 1.09", "##DELTAX= 0.01"), `:22:1: got the end of the file, want ##END= of the block of line 1`},
		{"cut_in_header", whole1[:200], `:8:1: got the record "##" without an equals sign, want a label between ## and =`},
		{"no_data", someHeader + "##END=\n", `:20:1: got a file without a table of data, want ##XYDATA=, ##XYPOINTS=, ##PEAK TABLE=, ##PEAK ASSIGNMENTS= or ##DATA TABLE=`},
		{"title_in_block", strings.TrimSuffix(whole1, "##END=\n") + whole1, `:23:1: got ##TITLE= inside a block, want ##END= of the block of line 1, or ##DATA TYPE= LINK in it`},
		{"text_after_end", whole1 + "more\n", `:24:1: got "more" after ##END=, want ##TITLE= of another block, or the end of the file`},
		{"too_deep", strings.Repeat("##TITLE= outer\n##DATA TYPE= LINK\n", 8) + whole1, `:17:1: got a block inside 8 others, want at most 7`},
		{"no_title", strings.TrimPrefix(whole1, "##TITLE= made-up trace\n"), `:1:1: got content that begins with "##JCAMP-DX= 5.01", want a JCAMP-DX file, which begins with ##TITLE=`},
		{"zero_byte", change("counts", "coun\x00ts"), `:10: got a zero byte, want text`},
		{"pair_without_ordinate", pairs("1.00, 12\n1.01,\n"), `:21:1: got an abscissa without an ordinate in its line, want whole points in each line`},
		{"decimal_comma", pairs("1,00, 12\n"), `:20:5: got ", 12", want a semicolon or blank space between points`},
		{"nan_ordinate", pairs("1.00, NaN\n"), `:20:5: got ", NaN", want a comma or blank space, and a number`},
		{"overflowing_ordinate", pairs("1.00, 1e999\n"), `:20:5: got ", 1e999", want a comma or blank space, and a number`},
		{"text_among_pairs", pairs("1.00, 12\nx\n"), `:21:1: got "x", want a number`},
		{"unclosed_assignment", replaced(t, pairs("(1.00, 12, <a>\n"), "##XYDATA= (XY..XY)", "##PEAK ASSIGNMENTS= (XYA)"), `:20: got a peak assignment without its end, want the parenthesis that closes the one of line 20`},
		{"text_for_assignment", replaced(t, pairs("1.00, 12, <a>\n"), "##XYDATA= (XY..XY)", "##PEAK ASSIGNMENTS= (XYA)"), `:20:1: got "1.00, 12, <a>", want a peak assignment in parentheses`},
		{"no_ordinate_in_assignment", replaced(t, pairs("(1.00, <a>)\n"), "##XYDATA= (XY..XY)", "##PEAK ASSIGNMENTS= (XYA)"), `:20:1: got "(1.00, <a>)", want an abscissa and an ordinate after the parenthesis`},
		{"backwards_page", page("T=61", "T=59"), `:17:1: got a retention time of 0.9833333333333333 min, want one not before 1 min`},
		{"page_without_time", page("T=61", "T=later"), `:17:1: got ##PAGE= "later", want a time, in seconds or with its unit`},
		{"unknown_page_unit", page("SECONDS", "SCANS"), `:12:1: got the unit "SCANS" of T, want SECONDS or MINUTES, and the same in ##PAGE=`},
		{"two_page_times", page("##PAGE= T=61\n", "##PAGE= T=61\n##.RETENTION TIME= 62\n"), `:18:1: got ##.RETENTION TIME= 62, want the time of ##PAGE= T=61`},
		{"missing_page", strings.TrimSuffix(page(", , 2", ", , 3"), "##END NTUPLES= MASS SPECTRUM\n##END=\n"), `:21:1: got the end of the file after 2 pages, want 3, as ##VAR_DIM= states of T`},
		{"unknown_symbol", page("(XY..XY), PEAKS", "(XZ..XZ), PEAKS"), `:15:1: got ##DATA TABLE= "(XZ..XZ)", want (XY..XY) or (X++(Y..Y)) with symbols of ##SYMBOL=`},
		{"repeated_symbol", page("X, Y, T", "X, Y, Y"), `:8:1: got the symbol "Y" twice, want each once`},
		{"too_many_variables", page("X, Y, T", "X, Y, T"+strings.Repeat(",", 70)), `:8:1: got 73 variables in ##SYMBOL=, want at most 64`},
		{"negative_mz", page("91.1,", "-91.1,"), `:15:1: got an m/z of -91.1, want none below 0`},
		{"mass_over_minutes", page("M/Z", "MINUTES"), `:15:1: got a mass spectrum over "MINUTES", want one over M/Z`},
		{"page_times_missing", strings.NewReplacer("= T=", "= N=", "Y, T", "Y, N", "RETENTION TIME", "PAGE NUMBER").Replace(mass), `:15:1: got 2 mass spectra, 2 of them without a retention time, want a ##.RETENTION TIME= or ##PAGE= T= for each`},
		{"missing_block", "##TITLE= outer\n##DATA TYPE= LINK\n##BLOCKS= 3\n" + whole1, `:27:1: got the end of the file after 1 blocks, want ##END= of the block of line 1, or as many as its ##BLOCKS= states`},
	}
}

// tenPairs are the ten points as pairs.
func tenPairs() string {
	var b strings.Builder
	for i, y := range someInts {
		fmt.Fprintf(&b, "1.0%d, %g\n", i, y)
	}
	return b.String()
}

func TestDamaged(t *testing.T) {
	if _, err := Read("good.jdx", strings.NewReader(whole1)); err != nil {
		t.Fatalf("the file without damage: %v", err)
	}
	listed, messages := map[string]bool{}, map[string]bool{}
	for _, d := range damages(t) {
		file := d.name + ".jdx"
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
			_, err = Read(file, bytes.NewReader(data))
			var syntax *trace.SyntaxError
			if !errors.As(err, &syntax) || err.Error() != file+d.want {
				t.Errorf("got  %v\nwant %s%s", err, file, d.want)
			}
		})
	}
	files, err := filepath.Glob(filepath.Join(damagedFolder, "*.jdx"))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		if !listed[filepath.Base(f)] {
			t.Errorf("%s is not in the list", f)
		}
	}
}

// TestCutAnywhere cuts a file at every byte. What is read of it is the whole table, with a warning.
func TestCutAnywhere(t *testing.T) {
	for n := range len(whole1) - 1 {
		f, err := Read("cut.jdx", strings.NewReader(whole1[:n]))
		if err != nil || codes(f.Warnings) == "" && whole1[:n] == strings.TrimSpace(whole1) {
			continue
		}
		if codes(f.Warnings) != "no-end" || fmt.Sprint(f.Chromatograms[0].Intensity) != fmt.Sprint(someInts) {
			t.Fatalf("the first %d of %d bytes were read: %v, warnings %v", n, len(whole1), f.Chromatograms, f.Warnings)
		}
	}
}

// TestAnyByteOfTheData changes each character of the lines in turn: either the file is refused, or its values are the same.
func TestAnyByteOfTheData(t *testing.T) {
	want, err := Read("good.jdx", strings.NewReader(whole1))
	if err != nil {
		t.Fatal(err)
	}
	from := strings.Index(whole1, someLines)
	refusals := 0
	for at := from; at < from+len(someLines)-1; at++ {
		for c := byte(9); c < 127; c++ {
			if c == whole1[at] {
				continue
			}
			f, err := Read("changed.jdx", strings.NewReader(whole1[:at]+string(rune(c))+whole1[at+1:]))
			if err != nil {
				refusals++
				continue
			}
			if fmt.Sprint(f.Chromatograms) != fmt.Sprint(want.Chromatograms) {
				t.Errorf("%q at byte %d of the lines changed the values unseen: %v", c, at-from, f.Chromatograms)
			}
		}
	}
	if refusals < 3000 {
		t.Errorf("only %d refusals", refusals)
	}
}
