// Package simulate makes chromatograms with a known truth, for the worked example and for rehearsing a method, and writes them as
// mzML. A Batch is a sequence of injections: what each vial holds, how its matrix suppresses ionisation (an analyte and its internal
// standard alike, but for a small part), what comes along from the injection before, and how retention drifts. Its traces are
// exponentially modified Gaussian peaks over a drifting baseline, with counting and electronic noise.
//
// Random numbers come from SplitMix64, one stream for each purpose and name, and become normal deviates by the inverse of the normal
// distribution: the same seed gives the same bits on every processor. Times are in minutes, intensities in detector counts, areas in
// counts·min, amounts in ng/mL of what is injected. Left out: saturation, peaks that change shape, isotopes.
//
// Simulated data shows how the program works; it never proves that it works rightly.
package simulate

import (
	"hash/fnv"

	"assaywrit/evidence/strictmath"
)

// A Stream is a sequence of random numbers that depends on its seed and name alone, so that another stream more or less
// changes no other.
type Stream struct{ state uint64 }

// NewStream starts a stream for a seed and a name, such as those of an injection and a trace.
func NewStream(seed uint64, name ...string) *Stream {
	h := fnv.New64a()
	for _, n := range name {
		h.Write([]byte(n))
		h.Write([]byte{0})
	}
	return &Stream{seed ^ h.Sum64()}
}

// next is SplitMix64.
//
// Source: G. L. Steele, D. Lea, C. H. Flood, Fast splittable pseudorandom number generators, OOPSLA 2014 (from memory).
func (s *Stream) next() uint64 {
	s.state += 0x9e3779b97f4a7c15
	z := s.state
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return z ^ z>>31
}

// Uniform is a number above 0 and below 1.
func (s *Stream) Uniform() float64 { return (float64(s.next()>>12) + 0.5) / (1 << 52) }

// Normal is a standard normal deviate, by the inverse of its distribution.
func (s *Stream) Normal() float64 { return strictmath.NormQuantile(s.Uniform()) }

// Scatter is 1 with a relative standard deviation of rsd.
func (s *Stream) Scatter(rsd float64) float64 { return 1 + float64(rsd*s.Normal()) }
