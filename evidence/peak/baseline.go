package peak

// A baseline is a straight line through the means of two spans of acquired points.
type baseline struct {
	line        line
	from, to    span
	left, right int      // limits of the first and the last peak on it
	start, end  EdgeKind // what those limits are called
}

func newBaseline(t, y []float64, from, to span) line {
	return line{mean(t, from), mean(y, from), mean(t, to), mean(y, to)}
}

// setBaselines gives every top its baseline over the acquired points.
func (d *detector) setBaselines(tops []top) {
	for i := 0; i < len(tops); {
		last := clusterEnd(tops, i)
		b := baseline{left: tops[i].left, right: tops[last].right, start: AtBaseline, end: AtBaseline}
		b.from, b.to = d.anchors(tops, i, last)
		if tops[i].leftEnd.trace {
			b.start = AtTraceEnd
		}
		if tops[last].rightEnd.trace {
			b.end = AtTraceEnd
		}
		d.divide(tops[i:last+1], b)
		i = last + 1
	}
}

// divide gives the tops of a cluster, whose baseline is whole, lines of their own where valleys separate them; what lies
// between two such valleys has one in common.
func (d *detector) divide(tops []top, whole baseline) {
	b, begin := whole, 0
	for i := range tops {
		next := whole
		if i+1 < len(tops) {
			at, kind, apart := d.valleyAnchor(&tops[i], &tops[i+1])
			if !apart {
				continue
			}
			b.to, b.right, b.end = at, tops[i].valley, kind
			next.from, next.left, next.start = at, tops[i].valley, kind
		}
		b.line = newBaseline(d.t, d.y, b.from, b.to)
		for ; begin <= i; begin++ {
			tops[begin].base = b
		}
		b = next
	}
}

// valleyAnchor tells whether the valley between p and q separates them, and which points then fix the baseline there. They
// are those around a valley below ValleyFraction that stand no higher than half of it, or else, if peaks are integrated
// valley to valley, the valley itself.
func (d *detector) valleyAnchor(p, q *top) (at span, kind EdgeKind, apart bool) {
	v := p.valley
	height := func(k int) float64 { return d.s[k] - p.line.at(d.t[k]) }
	level := float64(d.p.ValleyFraction * min(height(p.apex), height(q.apex)))
	at = span{v, v}
	if d.p.ValleyFraction == 0 || height(v) >= level {
		return at, AtValley, d.p.Shared == Valley
	}
	for at.from-1 > p.apex && height(at.from-1) < level/2 {
		at.from--
	}
	for at.to+1 < q.apex && height(at.to+1) < level/2 {
		at.to++
	}
	return at, AtBaseline, true
}
