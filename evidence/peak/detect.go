package peak

import (
	"math"

	"assaywrit/evidence/trace"
)

// minRise is how far the smoothed trace of a peak must stand above the line joining its own two limits, in standard
// deviations of smoothed noise.
const minRise = 5.0

// Detect finds the peaks of c and integrates them. It is algorithm sg-walk@1.
//
// Noise (noise-quiet-differences@1) is a standard deviation, from the signal-free stretches: the acquired points outside
// all peaks. Each such point's distance from the straight line through its two neighbours, divided by the factor by
// which that distance is noisier than a point, is free of drift; distances beyond three times their scaled median
// absolute value are left out, and the root mean square of the rest is corrected for that. Where at least three blocks
// of 24 quiet points can be made (or else of 12), the median of the variances about their own straight lines is a second
// estimate, and the larger of the two counts: noise that a filter has smoothed hides in the differences. The smoothed
// trace's own noise is had from such blocks too. As peaks and noise depend on each other, both are found again until the
// noise settles (at most four times). With fewer than ten quiet points the whole trace is used (noise-whole-trace@1). A
// trace without measurable noise gets 2^-30 of its range (noise-floor@1), and its peaks carry a flag.
//
// Detection uses a Savitzky–Golay smoothed trace, less the median drift. A top must rise from the lowest point before and
// fall to the lowest after by at least four standard deviations of smoothed noise. From each apex the walk goes down
// both flanks to the lowest readable level (half the height, a quarter, … down to 1/64) and on, at the rate of fall last
// seen, until the flank would have come down to EdgeFraction of the height or to a tenth of the noise, whichever is
// higher: a tail is not cut where it sinks into the noise. Limits are acquired points. Neighbours whose limits overlap, or
// leave fewer points between them than the wider one has above half height, share the lowest smoothed point between them.
// A valley that only nicks a taller flank or top must be six standard deviations deep, of the noise there.
//
// The baseline is straight. It passes through the mean of the acquired points from the limit outwards, as many as the
// peak has above half height; peaks that share valleys have one baseline from the first limit to the last, and are
// divided by perpendiculars (Shared = Drop), or have lines of their own joining the signal at the valleys (Valley). A valley
// lower than ValleyFraction of the smaller peak's height above the common baseline separates: both sides then get
// baselines of their own, which pass through the mean of the points around the valley that stand no higher than half of
// that.
//
// Everything else comes from the points as acquired: the area as in Integrate, the height as the highest point above the
// baseline, signal-to-noise as height over noise. A peak is reported if its highest point stands at least MinSN noises
// above the baseline and above the line joining its own limits, the smoothed trace at least five of its own standard
// deviations, and its width at half height, smoothed, is at least MinWidthMin. A figure that cannot be had is absent:
// widths that a valley hides, and symmetry below a signal-to-noise of 20, where 5 % of the height is lost in noise.
//
// Left out: a peak whose apex the trace does not hold (it only falls from the start, or rises to the end); a fused peak
// without a maximum of its own, which stays in its neighbour and is flagged as a shoulder where the noise allows; and any
// judgement whether two tops that the noise does not tell apart are two. Noise that a filter has made strongly smooth is
// estimated low, and gives more false peaks than white noise.
//
// A trace of one constant value has no peaks and no noise. The error is a *ParameterError or a *TraceError.
func Detect(c trace.Chromatogram, p Parameters) (*Result, error) {
	if err := p.Validate(); err != nil {
		return nil, err
	}
	if err := check(c); err != nil {
		return nil, err
	}
	w := workspaces.Get().(*workspace)
	defer workspaces.Put(w)
	d := newDetector(c, p, w)
	if d.floor == 0 {
		return &Result{NoisePoints: len(d.y), NoiseMethod: NoiseAlgorithm}, nil
	}
	return d.run(), nil
}

const (
	maxPasses = 4
	settled   = 1.0 / 256 // relative change of the noise that asks for no other pass
)

// A detector is one run of Detect.
type detector struct {
	p     Parameters
	t, y  []float64
	s     []float64 // smoothed, less the drift
	drift float64   // counts a minute
	w     *workspace

	floor       float64 // least noise
	noise       float64
	method      string
	points      int
	keep        float64 // smoothed noise over noise
	smoothNoise float64
}

func newDetector(c trace.Chromatogram, p Parameters, w *workspace) *detector {
	n := len(c.TimeMin)
	if p.SmoothingPoints > n {
		p.SmoothingPoints = n - 1 + n%2
	}
	w.smooth = resize(w.smooth, n)
	w.residual = resize(w.residual, n)
	w.scratch = resize(w.scratch, n)
	w.quiet = resize(w.quiet, n)
	d := &detector{p: p, t: c.TimeMin, y: c.Intensity, s: w.smooth, w: w}
	lo, hi := d.y[0], d.y[0]
	for _, v := range d.y {
		lo, hi = min(lo, v), max(hi, v)
	}
	d.floor = float64((hi - lo) * floorFactor)
	if d.floor == 0 {
		return d
	}
	smooth(d.t, d.y, d.s, p.SmoothingPoints)
	d.drift = slope(d.t, d.y, w.scratch)
	for i := range d.s {
		d.s[i] -= float64(d.drift * (d.t[i] - d.t[0]))
	}
	residuals(d.t, d.y, w.residual)
	d.keep = math.Sqrt(evenWeights(p.SmoothingPoints)[0])
	d.setNoise(max(firstNoise(w.residual, w.scratch), firstBlockNoise(d.t, d.y, w.scratch)), n-2, NoiseWholeTrace)
	d.smoothNoise = max(d.smoothNoise, firstBlockNoise(d.t, d.s, w.scratch))
	return d
}

func (d *detector) setNoise(noise float64, points int, method string) {
	if noise < d.floor {
		noise, method = d.floor, NoiseFloor
	}
	d.noise, d.points, d.method = noise, points, method
	d.smoothNoise = float64(noise * d.keep)
}

// run repeats the search until the noise outside the peaks is the noise that they were found with.
func (d *detector) run() *Result {
	var tops []top
	for pass := 1; ; pass++ {
		tops = d.search()
		if pass == maxPasses {
			break
		}
		noise, smoothNoise, points := d.outside(tops)
		if points == 0 || (noise <= d.floor && d.method == NoiseFloor) {
			break
		}
		if pass > 1 && math.Abs(noise-d.noise) <= float64(settled*d.noise) {
			break
		}
		d.setNoise(noise, points, NoiseAlgorithm)
		d.smoothNoise = max(d.smoothNoise, smoothNoise)
	}
	r := &Result{Noise: d.noise, NoisePoints: d.points, NoiseMethod: d.method}
	if len(tops) > 0 {
		r.Peaks = make([]Peak, len(tops))
	}
	for i := range tops {
		p := &tops[i]
		f := facts{p.leftEnd.cut, p.rightEnd.cut, d.hasShoulder(p), d.method == NoiseFloor}
		measure(d.t, d.y, p.left, p.right, p.base, d.noise, f, &r.Peaks[i])
	}
	setResolution(r.Peaks)
	return r
}

// outside estimates the noise, and that of the smoothed trace, from the points outside the limits of the tops.
func (d *detector) outside(tops []top) (noise, smoothNoise float64, points int) {
	quiet := d.w.quiet
	for i := range quiet {
		quiet[i] = true
	}
	for i := range tops {
		for k := tops[i].left; k <= tops[i].right; k++ {
			quiet[k] = false
		}
	}
	noise, points = quietNoise(d.t, d.y, d.w.residual, quiet, d.w.scratch)
	return noise, blockNoise(d.t, d.s, quiet, d.w.scratch), points
}

// search finds the peaks with the noise as it is now.
func (d *detector) search() []top {
	tops := findTops(d.s, float64(significance*d.smoothNoise), d.w.tops[:0])
	d.w.tops = tops
	tops = d.mergeRipple(tops)
	for {
		d.setLimits(tops)
		d.setBaselines(tops)
		kept := d.dropWeak(tops)
		if len(kept) == len(tops) {
			return tops
		}
		tops = kept
	}
}

// straightened is an acquired point less the drift.
func (d *detector) straightened(i int) float64 {
	return d.y[i] - float64(d.drift*(d.t[i]-d.t[0]))
}

// dropWeak takes away the tops that are no peaks. Of weak neighbours that share a valley only the weaker goes: what is left
// of the two may be a peak.
func (d *detector) dropWeak(tops []top) []top {
	for i := range tops {
		tops[i].weak = !d.isPeak(&tops[i])
	}
	out := tops[:0]
	var before top // as it was: its place may hold another by now
	for i := range tops {
		p := tops[i]
		keep := !p.weak || (p.leftValley && before.weak && before.rise < p.rise) ||
			(p.joined && tops[i+1].weak && tops[i+1].rise <= p.rise)
		before = p
		if keep {
			out = append(out, p)
			continue
		}
		if len(out) > 0 {
			// The valley that stays is the lower of the two.
			if last := &out[len(out)-1]; i+1 == len(tops) || d.s[p.valley] < d.s[last.valley] {
				last.valley = p.valley
			}
		}
	}
	return out
}

// isPeak judges one top, and notes how far it rises above its own limits.
func (d *detector) isPeak(p *top) bool {
	own := line{d.t[p.left], p.line.at(d.t[p.left]), d.t[p.right], p.line.at(d.t[p.right])}
	if p.leftValley {
		own.y0 = d.s[p.left]
	}
	if p.joined {
		own.y1 = d.s[p.right]
	}
	p.rise = d.s[p.apex] - own.at(d.t[p.apex])
	if p.rise < float64(minRise*d.smoothNoise) {
		return false
	}
	at := highest(d.t, d.y, p.left, p.right, p.base.line)
	least := float64(d.p.MinSN * d.noise)
	if d.y[at]-p.base.line.at(d.t[at]) < least || d.straightened(at)-own.at(d.t[at]) < least {
		return false
	}
	if d.p.MinWidthMin == 0 {
		return true
	}
	return d.smoothWidth(p) >= d.p.MinWidthMin && !d.isNarrowSpike(p, at)
}

// isNarrowSpike tells whether the highest point stands alone above half height, with a width under MinWidthMin, and the
// smoothed trace rises no further than a lone point explains: smoothing makes one stray point as wide as its window.
func (d *detector) isNarrowSpike(p *top, at int) bool {
	s := shape{t: d.t, y: d.y, left: p.left, right: p.right, top: at, base: p.base.line}
	h := s.height(at)
	lone := max(0.5, float64(1.25*d.keep*d.keep)) // the weight of the middle point is keep squared
	if max(s.height(at-1), s.height(at+1)) > h/2 || p.rise > float64(lone*h) {
		return false
	}
	w, ok := s.width(h / 2)
	return ok && w < d.p.MinWidthMin
}

// smoothWidth is the width of the smoothed top at half height above its cluster's baseline, as far as its limits reach.
func (d *detector) smoothWidth(p *top) float64 {
	height := d.s[p.apex] - p.line.at(d.t[p.apex])
	width := 0.0
	for _, side := range [2]struct{ step, stop int }{{-1, p.left}, {+1, p.right}} {
		half, _, k := d.descend(p, side.step, side.stop, height/2, height/2)
		if half == 0 {
			half = math.Abs(d.t[k] - d.t[p.apex])
		}
		width += half
	}
	return width
}
