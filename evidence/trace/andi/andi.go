// Package andi reads the interchange files for chromatography (ASTM E1947) and for mass spectrometry (ASTM E2077), which are netCDF
// files with agreed names. Times come out in minutes; intensities as they were acquired, with the file's scale_factor and add_offset
// applied; stored areas in the trace's unit times minutes.
//
// What the file leaves out stays empty. A chromatography file must state its unit of time, although the standard names seconds as
// the default: without the attribute a file is refused, as a factor of 60 cannot be seen in the numbers. In a mass spectrometry
// file times are in seconds by the standard's definition of scan_acquisition_time. The level of fragmentation (MS level) has no
// field in the standard, and is left out.
//
// Sources: ASTM E1947-98 and E2077-00 (from memory), with the names of variables as files of either kind have them.
package andi

import (
	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/netcdf"
)

// Sniff tells whether a file begins as netCDF. netCDF-4 (HDF5) is among it, so that Read refuses it with advice.
func Sniff(head []byte) bool { return netcdf.IsClassic(head) || netcdf.IsHDF5(head) }

// Read reads a file of either standard. The error is a *trace.SyntaxError where the file is at fault; Got names the byte, where one is
// at fault. The spectra of a mass spectrometry file are read when they are asked for: src must stay open.
func Read(name string, src trace.Source) (*trace.File, error) {
	f, err := netcdf.Open(name, src)
	if err != nil {
		return nil, err
	}
	r := &reader{nc: f, file: &trace.File{Warnings: f.Warnings}}
	// The variables decide; the revision of a template alone tells what is missing.
	chromatography := f.Variable("ordinate_values") != nil
	spectrometry := f.Variable("mass_values") != nil || f.Variable("scan_acquisition_time") != nil
	if !chromatography && !spectrometry {
		chromatography = f.Attribute("aia_template_revision") != nil
		spectrometry = !chromatography && f.Attribute("ms_template_revision") != nil
	}
	switch {
	case chromatography && spectrometry:
		return nil, r.fail("the variables of a chromatography file and of a mass spectrometry file", "those of one (ASTM E1947 or E2077)", "")
	case chromatography:
		err = r.chromatography()
	case spectrometry:
		err = r.spectrometry()
	default:
		return nil, r.fail("a netCDF file with neither ordinate_values nor mass_values", "a chromatography or mass spectrometry file (ASTM E1947 or E2077)",
			"netCDF holds data of any kind; export the run in the ANDI or AIA format")
	}
	if err != nil {
		return nil, err
	}
	return r.file, nil
}

// A reader fills in one file.
type reader struct {
	nc     *netcdf.File
	file   *trace.File
	recode bool // whether text that is not UTF-8 was met
}

func (r *reader) fail(got, want, hint string) error {
	return &trace.SyntaxError{File: r.nc.Name, Got: got, Want: want, Hint: hint}
}

func (r *reader) warn(code, detail string) {
	r.file.Warnings = append(r.file.Warnings, trace.Warning{Code: code, Detail: detail})
}
