package andi

import (
	"bytes"
	"compress/gzip"
	"encoding/json"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/netcdf"
)

const folder = "../../../testdata/andi"

// contents is a file, unpacked if it is in gzip; a file that is only there packed is found too.
func contents(t testing.TB, path string) []byte {
	t.Helper()
	data, err := os.ReadFile(path)
	if os.IsNotExist(err) {
		data, err = os.ReadFile(path + ".gz")
	}
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.HasPrefix(data, []byte("\x1f\x8b")) {
		return data
	}
	z, err := gzip.NewReader(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	if data, err = io.ReadAll(z); err != nil {
		t.Fatal(err)
	}
	return data
}

func read(t testing.TB, path string) *trace.File {
	t.Helper()
	f, err := Read(filepath.Base(path), bytes.NewReader(contents(t, path)))
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// What expected.json says of a file.
type known struct {
	Kind    string
	Global  map[string]string
	Points  int     `json:"n_points"`
	First   float64 `json:"time_first_s"`
	Last    float64 `json:"time_last_s"`
	Least   float64 `json:"y_min"`
	Most    float64 `json:"y_max"`
	Sum     float64 `json:"y_sum"`
	Peaks   []knownPeak
	NScans  int     `json:"n_scans"`
	Total   float64 `json:"sum_total_intensity"`
	Scans   []knownScan
	Version int `json:"netcdf_version_byte"`
}

type knownPeak struct {
	K          int
	Retention  float64 `json:"retention_time_s"`
	Start      float64 `json:"start_s"`
	End        float64 `json:"end_s"`
	Baseline   [4]float64
	Area       float64 `json:"area_in_file"`
	Height     float64 `json:"height_in_file"`
	Recomputed float64 `json:"area_recomputed"`
}

type knownScan struct {
	Scan     int
	Time     float64 `json:"rt_s"`
	N        int
	Total    float64 `json:"tic_in_file"`
	Sum      float64 `json:"sum_intensity"`
	FirstMZ  float64 `json:"mz_first"`
	LastMZ   float64 `json:"mz_last"`
	BaseMZ   float64 `json:"base_peak_mz"`
	BasePeak float64 `json:"base_peak_intensity"`
}

func expected(t testing.TB, folder string) map[string]known {
	t.Helper()
	var all map[string]known
	if err := json.Unmarshal(contents(t, filepath.Join(folder, "expected.json")), &all); err != nil {
		t.Fatal(err)
	}
	return all
}

func (k known) global(name string) string { return strings.TrimRight(k.Global[name], "\x00") }

// chromatography is a made-up chromatography file with even sampling and two peaks.
func chromatography() *netcdf.Dataset {
	return &netcdf.Dataset{
		Dimensions: []netcdf.Dimension{{Name: "point_number", Length: 6}, {Name: "peak_number", Length: 2}, {Name: "_4_byte_string", Length: 4}},
		Attributes: []netcdf.NewAttribute{{Name: "aia_template_revision", Values: "1.0\x00"}, {Name: "retention_unit", Values: "minutes"},
			{Name: "detector_unit", Values: "mV"}, {Name: "detector_name", Values: "flame ionization"}, {Name: "sample_name", Values: "C-0001"},
			{Name: "injection_date_time_stamp", Values: "20260102030405-0130"}, {Name: "detection_method_name", Values: "method 7"}},
		Variables: []netcdf.NewVariable{
			{Name: "actual_delay_time", Values: []float32{0.5}},
			{Name: "actual_sampling_interval", Values: []float32{0.25}},
			{Name: "ordinate_values", Dimensions: []string{"point_number"}, Values: []float32{1, 2, 9, 4, -9999, 1}, Attributes: []netcdf.NewAttribute{{Name: "uniform_sampling_flag", Values: "Y"}}},
			{Name: "peak_retention_time", Dimensions: []string{"peak_number"}, Values: []float32{1, 1.5}},
			{Name: "peak_area", Dimensions: []string{"peak_number"}, Values: []float32{3, -9999}},
			{Name: "peak_name", Dimensions: []string{"peak_number", "_4_byte_string"}, Values: "abc\x00d   "},
			{Name: "peak_start_detection_code", Dimensions: []string{"peak_number", "_4_byte_string"}, Values: "B\x00\x00\x00V\x00\x00\x00"},
			{Name: "peak_stop_detection_code", Dimensions: []string{"peak_number", "_4_byte_string"}, Values: "V\x00\x00\x00\x00\x00\x00\x00"},
			{Name: "manually_reintegrated_peaks", Dimensions: []string{"peak_number"}, Values: []int16{0, 1}},
		},
	}
}

// spectrometry is a made-up mass spectrometry file with three spectra: falling m/z, none, and m/z in no order.
func spectrometry() *netcdf.Dataset {
	return &netcdf.Dataset{
		Dimensions: []netcdf.Dimension{{Name: "point_number", Length: 7, Record: true}, {Name: "scan_number", Length: 3}, {Name: "instrument_number", Length: 1}, {Name: "_8_byte_string", Length: 8}},
		Attributes: []netcdf.NewAttribute{{Name: "ms_template_revision", Values: "1.0.1"}, {Name: "experiment_type", Values: "Continuum Mass Spectrum"},
			{Name: "test_ionization_polarity", Values: "Negative Polarity"}, {Name: "experiment_date_time_stamp", Values: "20260102030405+0100"},
			{Name: "sample_internal_id", Values: "C-0002"}, {Name: "test_scan_function", Values: "Mass Scan"}},
		Variables: []netcdf.NewVariable{
			{Name: "scan_acquisition_time", Dimensions: []string{"scan_number"}, Values: []float64{6, 12, 12.6}},
			{Name: "scan_index", Dimensions: []string{"scan_number"}, Values: []int32{0, -1, 3}},
			{Name: "point_count", Dimensions: []string{"scan_number"}, Values: []int32{3, 0, 4}},
			{Name: "total_intensity", Dimensions: []string{"scan_number"}, Values: []float64{60, 0, 100}, Attributes: []netcdf.NewAttribute{{Name: "units", Values: "counts"}}},
			{Name: "actual_scan_number", Dimensions: []string{"scan_number"}, Values: []int32{11, 12, 13}},
			{Name: "mass_values", Dimensions: []string{"point_number"}, Values: []int16{300, 200, 100, 80, 60, 80, 70}, Attributes: []netcdf.NewAttribute{{Name: "scale_factor", Values: []float64{0.5}}}},
			{Name: "intensity_values", Dimensions: []string{"point_number"}, Values: []float32{1, 2, 3, 4, 5, 6, 7}, Attributes: []netcdf.NewAttribute{{Name: "scale_factor", Values: []float32{2}}, {Name: "add_offset", Values: []float32{10}}}},
			{Name: "instrument_mfr", Dimensions: []string{"instrument_number", "_8_byte_string"}, Values: "maker   "},
			{Name: "instrument_model", Dimensions: []string{"instrument_number", "_8_byte_string"}, Values: "model\x00\x00\x00"},
			{Name: "instrument_serial_no", Dimensions: []string{"instrument_number", "_8_byte_string"}, Values: "no 7\x00zzz"},
			{Name: "instrument_app_version", Dimensions: []string{"instrument_number", "_8_byte_string"}, Values: "soft 2\x00\x00"},
		},
	}
}

func written(t testing.TB, d *netcdf.Dataset) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := netcdf.Write(&b, d); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// variable returns one of a data set, to be changed.
func variable(d *netcdf.Dataset, name string) *netcdf.NewVariable {
	for i := range d.Variables {
		if d.Variables[i].Name == name {
			return &d.Variables[i]
		}
	}
	panic("no variable " + name)
}

// attribute returns one of a data set, to be changed.
func attribute(d *netcdf.Dataset, name string) *netcdf.NewAttribute {
	for i := range d.Attributes {
		if d.Attributes[i].Name == name {
			return &d.Attributes[i]
		}
	}
	panic("no attribute " + name)
}

// without takes variables and attributes of the file out of a data set.
func without(d *netcdf.Dataset, names ...string) {
	for _, name := range names {
		var variables []netcdf.NewVariable
		for _, v := range d.Variables {
			if v.Name != name {
				variables = append(variables, v)
			}
		}
		var attributes []netcdf.NewAttribute
		for _, a := range d.Attributes {
			if a.Name != name {
				attributes = append(attributes, a)
			}
		}
		d.Variables, d.Attributes = variables, attributes
	}
}
