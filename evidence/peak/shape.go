package peak

const (
	plateau        = 3 // points of one value that make a flat top
	fewPoints      = 5
	negativeNoises = 3.0
)

// A shape is the acquired points of one peak above its baseline.
type shape struct {
	t, y             []float64
	left, right, top int
	base             line
}

func (s *shape) height(i int) float64 { return s.y[i] - s.base.at(s.t[i]) }

// apex is the time of the top of the parabola through the highest point and its neighbours, at their own times. It is the
// highest point's own time where that point is no higher than a neighbour, and the middle of a flat top.
func (s *shape) apex() float64 {
	if from, to := s.flat(); to-from+1 >= plateau {
		return s.t[from] + float64((s.t[to]-s.t[from])/2)
	}
	i := s.top
	h := s.height(i)
	rise, fall := h-s.height(i-1), h-s.height(i+1)
	if rise < 0 || fall < 0 || rise+fall == 0 {
		return s.t[i]
	}
	// The parabola's slope runs straight from u, half a step before, to -v, half a step after.
	before, after := s.t[i]-s.t[i-1], s.t[i+1]-s.t[i]
	u, v := rise/before, fall/after
	return s.t[i] + (float64(u*after)-float64(v*before))/(2*(u+v))
}

// flat returns the first and last of the points around the top that share its value.
func (s *shape) flat() (from, to int) {
	from, to = s.top, s.top
	for from > s.left && s.y[from-1] == s.y[s.top] {
		from--
	}
	for to < s.right && s.y[to+1] == s.y[s.top] {
		to++
	}
	return from, to
}

// before and after return the times, going down from the highest point, at which the straight lines between acquired
// points first pass below level.
func (s *shape) before(level float64) (float64, bool) { return s.passes(level, -1, s.left) }
func (s *shape) after(level float64) (float64, bool)  { return s.passes(level, +1, s.right) }

func (s *shape) passes(level float64, step, stop int) (float64, bool) {
	for i := s.top; i != stop; i += step {
		a, b := s.height(i), s.height(i+step)
		if b <= level && a > b {
			return s.t[i] + float64((s.t[i+step]-s.t[i])*((a-level)/(a-b))), true
		}
	}
	return 0, false
}

func (s *shape) width(level float64) (float64, bool) {
	a, ok1 := s.before(level)
	b, ok2 := s.after(level)
	return b - a, ok1 && ok2 && b > a
}

// symmetry is the symmetry factor, the width at level over twice its part before the apex.
func (s *shape) symmetry(level, apex float64) (float64, bool) {
	a, ok1 := s.before(level)
	b, ok2 := s.after(level)
	if !ok1 || !ok2 || !(a < apex) {
		return 0, false
	}
	return (b - a) / (2 * (apex - a)), true
}

// aboveHalf counts the points in a row around the top that stand above half height.
func (s *shape) aboveHalf() int {
	half := s.height(s.top) / 2
	n := 1
	for i := s.top - 1; i >= s.left && s.height(i) > half; i-- {
		n++
	}
	for i := s.top + 1; i <= s.right && s.height(i) > half; i++ {
		n++
	}
	return n
}

// flags lists what deserves a look, in the order of the constants.
func (s *shape) flags(k *Peak, f facts) []string {
	var list []string
	add := func(on bool, flag string) {
		if on {
			list = append(list, flag)
		}
	}
	from, to := s.flat()
	above := s.aboveHalf()
	limit := -float64(negativeNoises * k.Noise)
	add(to-from+1 >= plateau, FlagSaturated)
	add(f.cutAtStart, FlagCutAtStart)
	add(f.cutAtEnd, FlagCutAtEnd)
	add(above == 1, FlagSpike)
	add(above < fewPoints, FlagFewPoints)
	add(f.shoulder, FlagShoulder)
	add(k.BaselineStartCounts < limit || k.BaselineEndCounts < limit, FlagNegativeBaseline)
	add(k.Area <= 0, FlagNegativeArea)
	add(s.top == s.left+1 && s.height(s.left) >= s.height(s.top) ||
		s.top == s.right-1 && s.height(s.right) >= s.height(s.top), FlagApexAtLimit)
	add(f.noiseFloor, FlagNoiseFloor)
	return list
}
