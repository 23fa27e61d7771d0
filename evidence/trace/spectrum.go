package trace

// A Mode tells how a spectrum was recorded.
type Mode string

const (
	Centroid Mode = "centroid" // one point for each peak
	Profile  Mode = "profile"  // points along the peaks
)

// A Scan is what a file states of one spectrum of a run; its arrays are read apart, when they are asked for. The zero values mean
// that the file does not say.
type Scan struct {
	ID          string
	TimeMin     float64 // since injection, minutes
	MSLevel     int     // 1, 2, …; 0 where it is no mass spectrum or the file does not say
	Polarity    Polarity
	PrecursorMZ float64
	Mode        Mode
	Points      int     // in its arrays
	TotalIon    float64 // total ion current as stated; 0 where it is not
	LowMZ       float64 // scan window as stated
	HighMZ      float64
}

// Scans are the spectra of one file, in its order. Several series, of two stages say, may take turns or follow each other.
type Scans interface {
	Len() int
	Scan(i int) Scan
	// Open returns a reader of the arrays, for one goroutine.
	Open() ScanReader
}

// A ScanReader reads the arrays of spectra. What it returns stays valid until the same method is called again.
// Values are finite; m/z never decrease, and both arrays of a scan have Scan.Points values. The error is a *SyntaxError where
// the file is at fault.
type ScanReader interface {
	MZ(i int) ([]float64, error)
	Intensity(i int) ([]float64, error)
}

// A Spectrum is the m/z and the intensities of one spectrum, as many of each; m/z never decrease.
type Spectrum struct {
	MZ        []float64 `json:"mz"`
	Intensity []float64 `json:"intensity_counts"`
}

// HeldScans are scans whose arrays are in memory. Headers and Spectra have the same length.
type HeldScans struct {
	Headers []Scan
	Spectra []Spectrum
}

func (h *HeldScans) Len() int         { return len(h.Headers) }
func (h *HeldScans) Scan(i int) Scan  { return h.Headers[i] }
func (h *HeldScans) Open() ScanReader { return heldReader{h} }

type heldReader struct{ h *HeldScans }

func (r heldReader) MZ(i int) ([]float64, error)        { return r.h.Spectra[i].MZ, nil }
func (r heldReader) Intensity(i int) ([]float64, error) { return r.h.Spectra[i].Intensity, nil }
