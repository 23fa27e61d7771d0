package peak

const symmetryMinSN = 20.0

// facts are what is known of a peak before it is measured.
type facts struct{ cutAtStart, cutAtEnd, shoulder, noiseFloor bool }

// measure fills in k, the peak with its limits at left and right, above the baseline b.
func measure(t, y []float64, left, right int, b baseline, noise float64, f facts, k *Peak) {
	k.Algorithm = AreaAlgorithm
	k.StartMin, k.EndMin, k.Points = t[left], t[right], right-left+1
	k.StartKind, k.EndKind = AtValley, AtValley
	if left == b.left {
		k.StartKind = b.start
	}
	if right == b.right {
		k.EndKind = b.end
	}
	k.BaselineStartMin, k.BaselineStartCounts, k.BaselineStartPoints = t[b.left], b.line.at(t[b.left]), b.from.len()
	k.BaselineEndMin, k.BaselineEndCounts, k.BaselineEndPoints = t[b.right], b.line.at(t[b.right]), b.to.len()
	k.Area = trapezoid(t, y, left, right, b.line)
	k.AreaStdU = areaStdU(t, left, right, b, noise)
	s := shape{t: t, y: y, left: left, right: right, top: highest(t, y, left, right, b.line), base: b.line}
	k.Height = s.height(s.top)
	k.ApexMin = s.apex()
	k.Noise = noise
	if noise > 0 {
		k.SignalToNoise = k.Height / noise
	}
	if w, ok := s.width(k.Height / 2); ok {
		k.WidthHalfMin = &w
		if k.ApexMin > 0 {
			q := k.ApexMin / w
			n := float64(5.54 * float64(q*q))
			k.Plates = &n
		}
	}
	if k.SignalToNoise >= symmetryMinSN {
		if v, ok := s.symmetry(k.Height/20, k.ApexMin); ok {
			k.Symmetry = &v
		}
	}
	k.Flags = s.flags(k, f)
}

// setResolution gives neighbouring peaks their resolution, 1.18 (tR2 − tR1)/(wh1 + wh2), where both widths are known
// (USP <621>, Ph. Eur. 2.2.46).
func setResolution(peaks []Peak) {
	for i := 1; i < len(peaks); i++ {
		a, b := &peaks[i-1], &peaks[i]
		if a.WidthHalfMin == nil || b.WidthHalfMin == nil {
			continue
		}
		r := 1.18 * (b.ApexMin - a.ApexMin) / (*a.WidthHalfMin + *b.WidthHalfMin)
		a.ResolutionPos, b.ResolutionPre = &r, &r
	}
}
