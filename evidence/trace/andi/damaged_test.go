package andi

import (
	"bytes"
	"encoding/binary"
	"errors"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/netcdf"
)

var update = flag.Bool("update", false, "write the damaged files anew")

const damagedFolder = "../../../testdata/damaged"

// A damage is one file and the refusal it must get.
type damage struct {
	name string
	data []byte
	want string
}

func damages(t testing.TB) []damage {
	// changed writes a file whose data set was changed.
	changed := func(make func() *netcdf.Dataset, change func(d *netcdf.Dataset)) []byte {
		d := make()
		change(d)
		return written(t, d)
	}
	lc := func(change func(d *netcdf.Dataset)) []byte { return changed(chromatography, change) }
	ms := func(change func(d *netcdf.Dataset)) []byte { return changed(spectrometry, change) }
	bent := func(d *netcdf.Dataset, change func(data []byte, f *netcdf.File)) []byte {
		data := written(t, d)
		f, err := netcdf.Open("good", bytes.NewReader(data))
		if err != nil {
			t.Fatal(err)
		}
		change(data, f)
		return data
	}
	word := func(at int, n uint32) []byte {
		return bent(chromatography(), func(data []byte, _ *netcdf.File) { binary.BigEndian.PutUint32(data[at:], n) })
	}
	// begin changes where a variable lies: the last word of its description, found by its offset.
	begin := func(name string, to func(f *netcdf.File) int64) []byte {
		return bent(chromatography(), func(data []byte, f *netcdf.File) {
			old := binary.BigEndian.AppendUint32(nil, uint32(f.Variable(name).Offset(0)))
			at := bytes.Index(data, append([]byte(name), make([]byte, (4-len(name)%4)%4)...))
			binary.BigEndian.PutUint32(data[at+bytes.Index(data[at:], old):], uint32(to(f)))
		})
	}
	value := func(d *netcdf.Dataset, name string, i int64, bits string) []byte {
		return bent(d, func(data []byte, f *netcdf.File) { copy(data[f.Variable(name).Offset(i):], bits) })
	}
	good := written(t, chromatography())
	scaled := func(factor any) []byte {
		return ms(func(d *netcdf.Dataset) { variable(d, "mass_values").Attributes[0].Values = factor })
	}
	return []damage{
		{"netcdf4", []byte("\x89HDF\r\n\x1a\n\x02\x08\x08\x00"), "got an HDF5 file (netCDF-4), by its signature at byte 0, want a classic netCDF file"},
		{"netcdf4_after_user_block", append(make([]byte, 512), "\x89HDF\r\n\x1a\n"...), "by its signature at byte 512"},
		{"unknown_version", append([]byte("CDF\x04"), good[4:]...), "got version 4 at byte 3"},
		{"foreign_mark", append([]byte("CDX\x01"), good[4:]...), `got "CDX\x01" at byte 0`},
		{"cut_mark", good[:3], `got "CDF" at byte 0`},
		{"cut_header", good[:200], "left in the file at byte "},
		{"cut_values", good[:len(good)-8], `got the variable "peak_stop_detection_code" from byte 964 on in a file of 968 bytes, want values within the file`},
		{"negative_record_count", word(4, 1<<31), "got a number of -2147483648 records at byte 4"},
		{"billions_of_dimensions", word(12, 1<<31-1), "got 2147483647 dimensions in a header with "},
		{"wrong_tag", word(8, 13), "got the tag 13 with a number of 3 at byte 8"},
		{"lying_name_length", word(16, 1<<30), "got a name of 1073741824 bytes with "},
		{"lying_dimension", word(32, 1<<30), `got the variable "ordinate_values", described at byte `},
		{"two_record_dimensions", bent(chromatography(), func(data []byte, _ *netcdf.File) {
			binary.BigEndian.PutUint32(data[32:], 0)
			binary.BigEndian.PutUint32(data[52:], 0)
		}), `got a second record dimension, "peak_number",`},
		{"billions_of_variables", bent(chromatography(), func(data []byte, _ *netcdf.File) {
			at := bytes.Index(data, []byte("\x00\x00\x00\x0b\x00\x00\x00\x09"))
			binary.BigEndian.PutUint32(data[at+4:], 1<<31-1)
		}), "got 2147483647 variables in a header with "},
		{"repeated_variable_name", bytes.Replace(good, []byte("\x00\x00\x00\x09peak_area\x00\x00\x00"), []byte("\x00\x00\x00\x09peak_name\x00\x00\x00"), 1), `got the name "peak_name" of a variable again`},
		{"control_character_in_name", bytes.Replace(good, []byte("peak_area"), []byte("peak\narea"), 1), `got the name "peak\narea" of a variable`},
		{"unknown_type", bytes.Replace(good, []byte("retention_unit\x00\x00\x00\x00\x00\x02"), []byte("retention_unit\x00\x00\x00\x00\x00\x63"), 1), "got the type 99 at byte "},
		{"values_in_header", begin("peak_area", func(*netcdf.File) int64 { return 8 }), `got the variable "peak_area" at byte 8, in the header`},
		{"negative_offset", begin("peak_area", func(*netcdf.File) int64 { return -4 }), `got the offset -4 of the variable "peak_area"`},
		{"offset_beyond_file", begin("peak_area", func(*netcdf.File) int64 { return 1 << 30 }), `got the variable "peak_area" from byte 1073741824 on`},
		{"shared_values", begin("peak_area", func(f *netcdf.File) int64 { return f.Variable("peak_retention_time").Offset(1) }), `got the variables "peak_retention_time" and "peak_area" both at byte `},

		{"neither_trace_nor_spectra", lc(func(d *netcdf.Dataset) { without(d, "ordinate_values", "aia_template_revision") }), "got a netCDF file with neither ordinate_values nor mass_values"},
		{"trace_and_spectra", lc(func(d *netcdf.Dataset) {
			d.Variables = append(d.Variables, netcdf.NewVariable{Name: "mass_values", Values: []float32{1}})
		}), "got the variables of a chromatography file and of a mass spectrometry file"},
		{"missing_ordinate_values", lc(func(d *netcdf.Dataset) { without(d, "ordinate_values") }), "got no variable ordinate_values"},
		{"missing_retention_unit", lc(func(d *netcdf.Dataset) { without(d, "retention_unit") }), "got no retention_unit, want seconds or minutes"},
		{"unknown_retention_unit", lc(func(d *netcdf.Dataset) { attribute(d, "retention_unit").Values = "furlongs" }), `got a retention_unit of "furlongs", want seconds or minutes`},
		{"unknown_sampling_flag", lc(func(d *netcdf.Dataset) { variable(d, "ordinate_values").Attributes[0].Values = "X" }), `got a uniform_sampling_flag of "X", want Y or N`},
		{"missing_sampling_interval", lc(func(d *netcdf.Dataset) { without(d, "actual_sampling_interval") }), "got no variable actual_sampling_interval"},
		{"missing_delay_time", lc(func(d *netcdf.Dataset) { without(d, "actual_delay_time") }), "got no variable actual_delay_time"},
		{"missing_retention", lc(func(d *netcdf.Dataset) { variable(d, "ordinate_values").Attributes[0].Values = "N" }), "got no variable raw_data_retention"},
		{"unknown_delay_time", lc(func(d *netcdf.Dataset) { variable(d, "actual_delay_time").Values = []float32{-9999} }), "got value 1 of actual_delay_time at byte "},
		{"zero_sampling_interval", lc(func(d *netcdf.Dataset) { variable(d, "actual_sampling_interval").Values = []float32{0} }), "got an actual_sampling_interval of 0, want a number above 0"},
		{"fewer_times_than_points", lc(func(d *netcdf.Dataset) {
			variable(d, "ordinate_values").Attributes[0].Values = "N"
			d.Variables = append(d.Variables, netcdf.NewVariable{Name: "raw_data_retention", Dimensions: []string{"peak_number"}, Values: []float32{1, 2}})
		}), "got 2 values of raw_data_retention, want 6"},
		{"backwards_time", lc(func(d *netcdf.Dataset) {
			variable(d, "ordinate_values").Attributes[0].Values = "N"
			d.Variables = append(d.Variables, netcdf.NewVariable{Name: "raw_data_retention", Dimensions: []string{"point_number"}, Values: []float32{1, 2, 3, 2.5, 4, 5}})
		}), "got a time of 2.5 min at point 4 (raw_data_retention), want one after 3 min"},
		{"no_points", lc(func(d *netcdf.Dataset) {
			d.Dimensions[0] = netcdf.Dimension{Name: "point_number", Record: true}
			variable(d, "ordinate_values").Values = []float32{}
		}), "got no values of ordinate_values"},
		{"nan_ordinate", value(chromatography(), "ordinate_values", 2, "\x7f\xc0\x00\x00"), `got NaN as value 3 of the variable "ordinate_values" at byte `},
		{"infinite_area", value(chromatography(), "peak_area", 0, "\x7f\x80\x00\x00"), `got +Inf as value 1 of the variable "peak_area" at byte `},
		{"unwritten_ordinate", value(chromatography(), "ordinate_values", 5, "\x7c\xf0\x00\x00"), "got value 6 of ordinate_values at byte "},
		{"text_for_ordinates", lc(func(d *netcdf.Dataset) { variable(d, "ordinate_values").Values = "123456" }), `got text in the variable "ordinate_values" at byte `},
		{"scale_factor_as_text", lc(func(d *netcdf.Dataset) {
			v := variable(d, "ordinate_values")
			v.Attributes = append(v.Attributes, netcdf.NewAttribute{Name: "scale_factor", Values: "two"})
		}), "got the attribute scale_factor of ordinate_values with 3 values of type char"},
		{"overflowing_ordinate", lc(func(d *netcdf.Dataset) {
			v := variable(d, "ordinate_values")
			v.Values = []float32{1, 1e30, 1, 1, 1, 1}
			v.Attributes = append(v.Attributes, netcdf.NewAttribute{Name: "scale_factor", Values: []float64{1e300}})
		}), "got value 2 of ordinate_values at byte "},
		{"short_peak_table", lc(func(d *netcdf.Dataset) {
			v := variable(d, "peak_area")
			v.Dimensions, v.Values = nil, []float32{3}
		}), "got 1 values of peak_area, want 2, as of peak_retention_time"},
		{"short_peak_names", lc(func(d *netcdf.Dataset) {
			v := variable(d, "peak_name")
			v.Dimensions, v.Values = []string{"_4_byte_string"}, "abcd"
		}), "got 1 values of peak_name, want 2, as of peak_retention_time"},

		{"missing_scan_variables", ms(func(d *netcdf.Dataset) { without(d, "scan_index", "point_count") }), "got no variable scan_index, point_count, want the mandatory variables of ASTM E2077"},
		{"text_for_masses", ms(func(d *netcdf.Dataset) { variable(d, "mass_values").Values = "1234567" }), "got text in the variable mass_values at byte "},
		{"unequal_arrays", ms(func(d *netcdf.Dataset) {
			v := variable(d, "mass_values")
			v.Dimensions, v.Values = []string{"scan_number"}, []int16{1, 2, 3}
		}), "got 3 mass_values and 7 intensity_values, want as many of each"},
		{"zero_scale_factor", scaled([]float64{0}), "got the attribute scale_factor of mass_values with 1 values of type double"},
		{"two_scale_factors", scaled([]float32{1, 2}), "got the attribute scale_factor of mass_values with 2 values of type float"},
		{"no_scans", ms(func(d *netcdf.Dataset) {
			d.Dimensions = append(d.Dimensions, netcdf.Dimension{Name: "seven", Length: 7})
			d.Dimensions[0].Length = 0
			for i := range d.Variables {
				switch v := &d.Variables[i]; v.Name {
				case "mass_values", "intensity_values":
					v.Dimensions = []string{"seven"}
				case "scan_acquisition_time":
					v.Dimensions, v.Values = []string{"point_number"}, []float64{}
				}
			}
		}), "got no values of scan_acquisition_time"},
		{"backwards_scan_time", ms(func(d *netcdf.Dataset) { variable(d, "scan_acquisition_time").Values = []float64{6, 12, 9} }), "got a time of 0.15 min for spectrum 3 at byte "},
		{"unknown_scan_time", ms(func(d *netcdf.Dataset) { variable(d, "scan_acquisition_time").Values = []float64{6, -9999, 9} }), "got value 2 of scan_acquisition_time at byte "},
		{"nan_scan_time", value(spectrometry(), "scan_acquisition_time", 1, "\x7f\xf8\x00\x00"), `got NaN as value 2 of the variable "scan_acquisition_time" at byte `},
		{"unknown_scan_time_unit", ms(func(d *netcdf.Dataset) {
			variable(d, "scan_acquisition_time").Attributes = []netcdf.NewAttribute{{Name: "units", Values: "scans"}}
		}), `got the units "scans" of scan_acquisition_time, want seconds or minutes`},
		{"fewer_indexes_than_scans", ms(func(d *netcdf.Dataset) {
			v := variable(d, "scan_index")
			v.Dimensions, v.Values = nil, []int32{0}
		}), "got 1 values of scan_index and 3 of point_count, want 3 of each"},
		{"negative_point_count", ms(func(d *netcdf.Dataset) { variable(d, "point_count").Values = []int32{3, 0, -4} }), "got a point_count of -4 for spectrum 3 at byte "},
		{"lying_point_count", ms(func(d *netcdf.Dataset) { variable(d, "point_count").Values = []int32{3, 0, 1 << 30} }), "got a point_count of 1.073741824e+09 for spectrum 3 at byte "},
		{"scan_beyond_arrays", ms(func(d *netcdf.Dataset) { variable(d, "scan_index").Values = []int32{0, -1, 4} }), "got a scan_index of 4 for spectrum 3 of 4 points at byte "},
		{"overlapping_scans", ms(func(d *netcdf.Dataset) { variable(d, "scan_index").Values = []int32{0, -1, 2} }), "got a scan_index of 2 for spectrum 3 of 4 points at byte "},
		{"broken_scan_index", ms(func(d *netcdf.Dataset) { variable(d, "scan_index").Values = []float32{0, -1, 3.5} }), "got a scan_index of 3.5 for spectrum 3 of 4 points at byte "},
		{"short_total_intensity", ms(func(d *netcdf.Dataset) {
			v := variable(d, "total_intensity")
			v.Dimensions, v.Values = nil, []float64{60}
		}), "got 1 values of total_intensity, want 3, as of scan_acquisition_time"},
	}
}

// TestDamaged reads the damaged files; every .cdf file in their folder is in the list.
func TestDamaged(t *testing.T) {
	listed, messages := map[string]bool{}, map[string]bool{}
	for _, d := range damages(t) {
		file := d.name + ".cdf"
		if listed[file] || messages[d.want] {
			t.Fatalf("%s or its message is listed twice", file)
		}
		listed[file], messages[d.want] = true, true
		path := filepath.Join(damagedFolder, file)
		if *update {
			if err := os.WriteFile(path, d.data, 0o644); err != nil {
				t.Fatal(err)
			}
		}
		t.Run(d.name, func(t *testing.T) {
			data, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			if !bytes.Equal(data, d.data) {
				t.Error("the file is not what its generator makes: run go test -update and look at the difference")
			}
			_, err = Read(file, bytes.NewReader(data))
			var syntax *trace.SyntaxError
			if !errors.As(err, &syntax) || !strings.Contains(err.Error(), d.want) || !strings.HasPrefix(err.Error(), file+": got ") || syntax.Want == "" {
				t.Errorf("got %v, want %s", err, d.want)
			}
		})
	}
	files, err := filepath.Glob(filepath.Join(damagedFolder, "*.cdf"))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		if !listed[filepath.Base(f)] {
			t.Errorf("%s is not in the list", f)
		}
	}
}

// TestCutAnywhere cuts good files at every byte: no beginning is read as a whole file.
func TestCutAnywhere(t *testing.T) {
	for _, d := range []*netcdf.Dataset{chromatography(), spectrometry()} {
		good := written(t, d)
		for n := range good[:len(good)-3] { // a few bytes may be filling
			if _, err := Read("cut.cdf", bytes.NewReader(good[:n])); err == nil {
				t.Fatalf("the first %d of %d bytes were read", n, len(good))
			}
		}
	}
}
