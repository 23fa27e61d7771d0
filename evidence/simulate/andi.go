package simulate

import (
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"time"

	"assaywrit/evidence/trace/netcdf"
)

// WriteANDI writes a run of full-scan mass spectra as a netCDF file with the names of ASTM E2077: a centroid spectrum at each time, with
// a point for each trace (its precursor m/z) whose intensity is above zero. All traces must share their times. Times are written in
// seconds in 64 bits, m/z and intensities in 32.
func WriteANDI(w io.Writer, run Run) error {
	if err := run.check(); err != nil {
		return err
	}
	if len(run.Traces) == 0 {
		return errors.New("simulate: a run without traces")
	}
	start, err := time.Parse(time.RFC3339, run.StartTime)
	if err != nil {
		return fmt.Errorf("simulate: start %q, want RFC 3339", run.StartTime)
	}
	order := make([]int, len(run.Traces))
	for i, c := range run.Traces {
		order[i] = i
		if !slices.Equal(c.TimeMin, run.Traces[0].TimeMin) || c.Transition.PrecursorMZ <= 0 {
			return fmt.Errorf("simulate: the trace %q without an m/z or with times of its own", c.ID)
		}
	}
	slices.SortFunc(order, func(a, b int) int {
		return int(math.Copysign(1, run.Traces[a].Transition.PrecursorMZ-run.Traces[b].Transition.PrecursorMZ))
	})
	var seconds, total []float64
	var index, count []int32
	var mz, y []float32
	for k, t := range run.Traces[0].TimeMin {
		seconds, index = append(seconds, float64(t*60)), append(index, int32(len(mz)))
		sum := 0.0
		for _, i := range order {
			if v := run.Traces[i].Intensity[k]; v > 0 {
				mz, y = append(mz, float32(run.Traces[i].Transition.PrecursorMZ)), append(y, float32(v))
				sum += float64(float32(v))
			}
		}
		total, count = append(total, sum), append(count, int32(len(mz))-index[k])
	}
	scans, points := []string{"scan_number"}, []string{"point_number"}
	return netcdf.Write(w, &netcdf.Dataset{
		Dimensions: []netcdf.Dimension{{Name: "scan_number", Length: int64(len(seconds))}, {Name: "point_number", Length: int64(len(mz))}},
		Attributes: []netcdf.NewAttribute{
			{Name: "dataset_completeness", Values: "C1"}, {Name: "ms_template_revision", Values: "1.0.1"},
			{Name: "experiment_date_time_stamp", Values: start.Format("20060102150405-0700")},
			{Name: "experiment_type", Values: "Centroided Mass Spectrum"}, {Name: "test_ionization_mode", Values: "Electron Impact"},
			{Name: "test_ionization_polarity", Values: "Positive Polarity"}, {Name: "test_scan_function", Values: "Mass Scan"},
			{Name: "test_separation_type", Values: "Gas-Liquid Chromatography"}, {Name: "sample_internal_id", Values: run.SampleCode},
			{Name: "instrument_name", Values: run.Model + ", serial number " + run.Serial},
		},
		Variables: []netcdf.NewVariable{
			{Name: "scan_acquisition_time", Dimensions: scans, Values: seconds},
			{Name: "total_intensity", Dimensions: scans, Values: total},
			{Name: "scan_index", Dimensions: scans, Values: index},
			{Name: "point_count", Dimensions: scans, Values: count},
			{Name: "mass_values", Dimensions: points, Values: mz},
			{Name: "intensity_values", Dimensions: points, Values: y},
		},
	})
}
