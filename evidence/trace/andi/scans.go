package andi

import (
	"cmp"
	"fmt"
	"slices"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/netcdf"
)

// scans are the spectra of one file, whose arrays stay in the file until they are asked for.
type scans struct {
	nc                        *netcdf.File
	points                    int64 // in all
	massScale, intensityScale scale
	mode                      trace.Mode
	polarity                  trace.Polarity

	times   []float64 // minutes
	first   []int64   // place of the first point
	count   []int
	total   []float64 // nil where the file has none
	numbers []float64 // nil where the file has none
}

func (s *scans) Len() int { return len(s.times) }

func (s *scans) Scan(i int) trace.Scan {
	scan := trace.Scan{TimeMin: s.times[i], Polarity: s.polarity, Mode: s.mode, Points: s.count[i]}
	if s.total != nil {
		scan.TotalIon = s.total[i]
	}
	if s.numbers != nil {
		scan.ID = scanID(s.numbers[i])
	}
	return scan
}

func (s *scans) Open() trace.ScanReader {
	open := func(name string, scale scale) array {
		c, _ := s.nc.Cursor(name) // is there, or the file was refused
		return array{cursor: c, scale: scale}
	}
	return &scanReader{s: s, held: -1, ordered: -1,
		mass: open("mass_values", s.massScale), key: open("mass_values", s.massScale), intensity: open("intensity_values", s.intensityScale)}
}

// An array reads one of the two variables.
type array struct {
	cursor *netcdf.Cursor
	scale  scale
	held   []float64
	spare  []float64 // for sorting
}

// scanReader reads spectra. m/z that the file does not hold in rising order are put into it, and the intensities with them; points of
// the same m/z stay in the order of the file.
type scanReader struct {
	s         *scans
	mass      array // what MZ returns
	key       array // m/z that are read for their order, so that what MZ returned stays
	intensity array

	held    int   // the spectrum that mass belongs to, or -1
	ordered int   // the spectrum that order belongs to, or -1
	order   []int // places of the points by rising m/z; empty where they rise already
}

// read reads one array of a spectrum.
func (r *scanReader) read(a *array, name string, i int) error {
	n := r.s.count[i]
	a.held = slices.Grow(a.held[:0], n)[:n]
	if n == 0 {
		return nil
	}
	if err := a.cursor.Read(a.held, r.s.first[i]); err != nil {
		return err
	}
	v := r.s.nc.Variable(name)
	if fill, ok := v.Fill(); ok {
		for k, y := range a.held {
			if y == fill {
				return r.fail(i, k, v, "a value that was never written", "a measured value")
			}
		}
	}
	if k := a.scale.apply(a.held); k >= 0 {
		return r.fail(i, k, v, "a value that scale_factor and add_offset make infinite", "a finite number")
	}
	return nil
}

func (r *scanReader) fail(i, k int, v *netcdf.Variable, got, want string) error {
	at := v.Offset(r.s.first[i] + int64(k))
	return &trace.SyntaxError{File: r.s.nc.Name, Got: fmt.Sprintf("%s as point %d of spectrum %d in %s at byte %d", got, k+1, i+1, v.Name, at), Want: want}
}

// load reads the m/z of a spectrum into a, and their order.
func (r *scanReader) load(a *array, i int) error {
	r.ordered = -1
	if err := r.read(a, "mass_values", i); err != nil {
		return err
	}
	mz := a.held
	rising := true
	for k, m := range mz {
		if m <= 0 {
			return r.fail(i, k, r.s.nc.Variable("mass_values"), fmt.Sprintf("an m/z of %g", m), "one above 0")
		}
		if k > 0 && m < mz[k-1] {
			rising = false
		}
	}
	r.order = r.order[:0]
	if !rising {
		for k := range mz {
			r.order = append(r.order, k)
		}
		slices.SortStableFunc(r.order, func(a, b int) int { return cmp.Compare(mz[a], mz[b]) })
		a.arrange(r.order)
	}
	r.ordered = i
	return nil
}

// arrange puts what is held into an order.
func (a *array) arrange(order []int) {
	a.spare = slices.Grow(a.spare[:0], len(order))[:len(order)]
	for to, from := range order {
		a.spare[to] = a.held[from]
	}
	a.held, a.spare = a.spare, a.held
}

// MZ returns the m/z of spectrum i in rising order.
func (r *scanReader) MZ(i int) ([]float64, error) {
	if r.held != i {
		r.held = -1
		if err := r.load(&r.mass, i); err != nil {
			return nil, err
		}
		r.held = i
	}
	return r.mass.held, nil
}

// Intensity returns the intensities of spectrum i, in the order of MZ.
func (r *scanReader) Intensity(i int) ([]float64, error) {
	if r.ordered != i {
		if err := r.load(&r.key, i); err != nil {
			return nil, err
		}
	}
	if err := r.read(&r.intensity, "intensity_values", i); err != nil {
		return nil, err
	}
	if len(r.order) > 0 {
		r.intensity.arrange(r.order)
	}
	return r.intensity.held, nil
}
