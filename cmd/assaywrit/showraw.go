package main

import (
	"crypto/sha256"
	"encoding/csv"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"path"
	"path/filepath"
	"strconv"
	"text/tabwriter"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/formats"
	"assaywrit/evidence/trace/table"
)

// A rawView is what is asked about a raw file.
type rawView struct {
	method      string
	trace, scan string
	asJSON      bool
}

// A rawSummary is everything that was read from a raw file, but for the points.
type rawSummary struct {
	Format        string             `json:"format"`
	FormatVersion string             `json:"format_version,omitempty"`
	Bytes         int64              `json:"bytes"`
	SHA256        string             `json:"sha256"`
	StartTime     string             `json:"start_time,omitempty"`
	Instrument    string             `json:"instrument,omitempty"`
	Software      string             `json:"software,omitempty"`
	Method        string             `json:"method,omitempty"`
	SampleCode    string             `json:"sample_code,omitempty"`
	Traces        []traceSummary     `json:"traces"`
	Spectra       []spectraSummary   `json:"spectra,omitempty"`
	StoredPeaks   []trace.StoredPeak `json:"stored_peaks,omitempty"`
	Warnings      []trace.Warning    `json:"warnings,omitempty"`
}

type traceSummary struct {
	ID         string           `json:"id"`
	Kind       trace.Kind       `json:"kind"`
	Transition trace.Transition `json:"transition"`
	Unit       string           `json:"unit,omitempty"`
	Points     int              `json:"points"`
	FromMin    float64          `json:"from_min"`
	ToMin      float64          `json:"to_min"`
	Lowest     float64          `json:"lowest"`
	Highest    float64          `json:"highest"`
	HighestMin float64          `json:"highest_at_min"`
}

// spectraSummary gathers the spectra of one kind.
type spectraSummary struct {
	MSLevel  int            `json:"ms_level,omitempty"`
	Polarity trace.Polarity `json:"polarity,omitempty"`
	Mode     trace.Mode     `json:"mode,omitempty"`
	N        int            `json:"n"`
	FirstID  string         `json:"first_id"`
	LastID   string         `json:"last_id"`
	FromMin  float64        `json:"from_min"`
	ToMin    float64        `json:"to_min"`
	Points   int            `json:"points"` // in all of them
	LowMZ    float64        `json:"lowest_mz"`
	HighMZ   float64        `json:"highest_mz"`
	Highest  float64        `json:"highest"`
	FromMZ   float64        `json:"window_low_mz,omitempty"` // scan window as stated, of the first
	ToMZ     float64        `json:"window_high_mz,omitempty"`
}

func (v *rawView) show(w io.Writer, name string) error {
	f, err := os.Open(name)
	if err != nil {
		return err
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return err
	}
	layout, err := v.layout(name)
	if err != nil {
		return err
	}
	file, err := formats.Read(name, io.NewSectionReader(f, 0, info.Size()), layout)
	if err != nil {
		return err
	}
	switch {
	case v.trace != "":
		return writeTrace(w, name, file, v.trace)
	case v.scan != "":
		return writeScan(w, name, file, v.scan)
	}
	s := &rawSummary{Format: file.Format, FormatVersion: file.FormatVersion, Bytes: info.Size(), StartTime: file.StartTime, Instrument: file.Instrument,
		Software: file.Software, Method: file.Method, SampleCode: file.SampleCode, StoredPeaks: file.StoredPeaks, Warnings: file.Warnings, Traces: []traceSummary{}}
	for i := range file.Chromatograms {
		s.Traces = append(s.Traces, summaryOf(&file.Chromatograms[i]))
	}
	if s.Spectra, err = spectraOf(file.Scans); err != nil {
		return err
	}
	sum := sha256.New()
	if _, err := io.Copy(sum, io.NewSectionReader(f, 0, info.Size())); err != nil {
		return err
	}
	s.SHA256 = hex.EncodeToString(sum.Sum(nil))
	if v.asJSON {
		return json.NewEncoder(w).Encode(s)
	}
	return s.print(w)
}

// layout finds how the method lays out delimited text. Its patterns are for paths in the case folder, so that the end of the path is
// enough here.
func (v *rawView) layout(name string) (func(string) (table.Layout, bool), error) {
	if v.method == "" {
		return nil, nil
	}
	data, err := os.ReadFile(v.method)
	if err != nil {
		return nil, err
	}
	var m casefile.Method
	if _, problems := strictyaml.Bind(v.method, data, &m); len(problems) > 0 {
		return nil, problems
	}
	full, err := filepath.Abs(name)
	if err != nil {
		return nil, err
	}
	full = filepath.ToSlash(full)
	return func(string) (table.Layout, bool) {
		for _, t := range m.Tables {
			for at := len(full); at > 0; at-- {
				if full[at-1] != '/' {
					continue
				}
				if ok, err := path.Match(t.Files, full[at:]); err == nil && ok {
					return evidence.TableLayout(t), true
				}
			}
		}
		return table.Layout{}, false
	}, nil
}

func summaryOf(c *trace.Chromatogram) traceSummary {
	s := traceSummary{ID: c.ID, Kind: c.Kind, Transition: c.Transition, Unit: c.Unit, Points: len(c.TimeMin)}
	if s.Points == 0 {
		return s
	}
	s.FromMin, s.ToMin, s.Lowest, s.Highest, s.HighestMin = c.TimeMin[0], c.TimeMin[s.Points-1], c.Intensity[0], c.Intensity[0], c.TimeMin[0]
	for i, y := range c.Intensity {
		s.Lowest = min(s.Lowest, y)
		if y > s.Highest {
			s.Highest, s.HighestMin = y, c.TimeMin[i]
		}
	}
	return s
}

// spectraOf reads every spectrum and gathers them by level, polarity and mode, in the order in which these first come.
func spectraOf(scans trace.Scans) ([]spectraSummary, error) {
	if scans == nil {
		return nil, nil
	}
	var list []spectraSummary
	r := scans.Open()
	for i := range scans.Len() {
		x := scans.Scan(i)
		at := -1
		for k, s := range list {
			if s.MSLevel == x.MSLevel && s.Polarity == x.Polarity && s.Mode == x.Mode {
				at = k
			}
		}
		if at < 0 {
			at = len(list)
			list = append(list, spectraSummary{MSLevel: x.MSLevel, Polarity: x.Polarity, Mode: x.Mode, FirstID: x.ID, FromMin: x.TimeMin, ToMin: x.TimeMin, FromMZ: x.LowMZ, ToMZ: x.HighMZ})
		}
		s := &list[at]
		s.LastID, s.FromMin, s.ToMin = x.ID, min(s.FromMin, x.TimeMin), max(s.ToMin, x.TimeMin)
		s.N++
		mz, err := r.MZ(i)
		if err != nil {
			return nil, err
		}
		y, err := r.Intensity(i)
		if err != nil {
			return nil, err
		}
		if len(mz) > 0 {
			if s.Points == 0 {
				s.LowMZ, s.HighMZ = mz[0], mz[0]
			}
			s.LowMZ, s.HighMZ = min(s.LowMZ, mz[0]), max(s.HighMZ, mz[len(mz)-1])
		}
		for _, v := range y {
			s.Highest = max(s.Highest, v)
		}
		s.Points += len(mz)
	}
	return list, nil
}

func (s *rawSummary) print(w io.Writer) error {
	fmt.Fprintf(w, "%s %s, %d bytes, SHA-256 %s\n", s.Format, s.FormatVersion, s.Bytes, s.SHA256)
	for _, x := range []struct{ name, value string }{{"start", s.StartTime}, {"instrument", s.Instrument}, {"software", s.Software}, {"method", s.Method}, {"sample", s.SampleCode}} {
		if x.value != "" {
			fmt.Fprintf(w, "%s: %s\n", x.name, x.value)
		}
	}
	for _, x := range s.Warnings {
		fmt.Fprintf(w, "warning %s: %s\n", x.Code, x.Detail)
	}
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	if len(s.Traces) > 0 {
		fmt.Fprintln(t, "\ntrace\tkind\tprecursor m/z\tproduct m/z\tpolarity\tpoints\tfrom min\tto min\tlowest\thighest\tat min\tunit")
	}
	for _, c := range s.Traces {
		fmt.Fprintf(t, "%s\t%s\t%s\t%s\t%s\t%d\t", c.ID, c.Kind, stated(c.Transition.PrecursorMZ), stated(c.Transition.ProductMZ), c.Transition.Polarity, c.Points)
		if c.Points > 0 {
			fmt.Fprintf(t, "%.4f\t%.4f\t%.6g\t%.6g\t%.4f", c.FromMin, c.ToMin, c.Lowest, c.Highest, c.HighestMin)
		} else {
			fmt.Fprint(t, "\t\t\t\t")
		}
		unit := c.Unit
		if unit == "" {
			unit = "counts"
		}
		fmt.Fprintf(t, "\t%s\n", unit)
	}
	if len(s.Spectra) > 0 {
		fmt.Fprintln(t, "\nspectra\tMS level\tpolarity\tmode\tfrom min\tto min\tpoints\tlowest m/z\thighest m/z\thighest\twindow m/z\tfirst\tlast")
	}
	for _, x := range s.Spectra {
		fmt.Fprintf(t, "%d\t%s\t%s\t%s\t%.4f\t%.4f\t%d\t%.4f\t%.4f\t%.6g\t%s\t%s\t%s\n", x.N, stated(float64(x.MSLevel)), x.Polarity, x.Mode, x.FromMin, x.ToMin, x.Points, x.LowMZ, x.HighMZ, x.Highest, scanWindow(x), x.FirstID, x.LastID)
	}
	if len(s.StoredPeaks) > 0 {
		fmt.Fprintln(t, "\npeak in the file\ttrace\tat min\tfrom min\tto min\tarea (unit·min)\theight")
	}
	for _, p := range s.StoredPeaks {
		fmt.Fprintf(t, "%s\t%s\t%.4f\t%s\t%s\t%s\t%s\n", p.Name, p.TraceID, p.RetentionMin, optional(p.StartMin, "%.4f"), optional(p.EndMin, "%.4f"), optional(p.Area, "%.6g"), optional(p.Height, "%.6g"))
	}
	return t.Flush()
}

func scanWindow(x spectraSummary) string {
	if x.FromMZ == 0 && x.ToMZ == 0 {
		return ""
	}
	return fmt.Sprintf("%g to %g", x.FromMZ, x.ToMZ)
}

// stated is a number, or nothing where the file does not state it.
func stated(v float64) string {
	if v == 0 {
		return ""
	}
	return strconv.FormatFloat(v, 'g', -1, 64)
}

func optional(v *float64, format string) string {
	if v == nil {
		return ""
	}
	return fmt.Sprintf(format, *v)
}

func writeTrace(w io.Writer, name string, f *trace.File, id string) error {
	for _, c := range f.Chromatograms {
		if c.ID == id {
			unit := "intensity"
			if c.Unit != "" {
				unit += " [" + c.Unit + "]"
			}
			return writePoints(w, "time [min]", unit, c.TimeMin, c.Intensity)
		}
	}
	return &failure{exitUsage, fmt.Errorf("%s: no trace %q", name, id), "assaywrit show " + name + " lists what it holds"}
}

func writeScan(w io.Writer, name string, f *trace.File, id string) error {
	for i := 0; f.Scans != nil && i < f.Scans.Len(); i++ {
		if f.Scans.Scan(i).ID != id {
			continue
		}
		r := f.Scans.Open()
		mz, err := r.MZ(i)
		y, err2 := r.Intensity(i)
		if err = errors.Join(err, err2); err != nil {
			return err
		}
		return writePoints(w, "m/z", "intensity", mz, y)
	}
	return &failure{exitUsage, fmt.Errorf("%s: no spectrum %q", name, id), "assaywrit show " + name + " lists what it holds"}
}

// writePoints writes two columns in the shortest exact form.
func writePoints(w io.Writer, first, second string, x, y []float64) error {
	out := csv.NewWriter(w)
	out.Write([]string{first, second})
	for i := range x {
		out.Write([]string{strconv.FormatFloat(x[i], 'g', -1, 64), strconv.FormatFloat(y[i], 'g', -1, 64)})
	}
	out.Flush()
	return out.Error()
}
