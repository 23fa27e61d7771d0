package calibration

import (
	"bufio"
	"math"
	"math/big"
	"math/rand/v2"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// An exactLine is a weighted line in rational arithmetic: no rounding at all.
type exactLine struct{ a, b, sumW, xBar, yBar, sxx, rss *big.Rat }

func rat(x float64) *big.Rat { return new(big.Rat).SetFloat64(x) }

func newRat() *big.Rat { return new(big.Rat) }

func fitExactly(x, y, w []float64) exactLine {
	l := exactLine{sumW: newRat(), xBar: newRat(), yBar: newRat(), sxx: newRat(), rss: newRat()}
	for i := range x {
		l.sumW.Add(l.sumW, rat(w[i]))
		l.xBar.Add(l.xBar, newRat().Mul(rat(w[i]), rat(x[i])))
		l.yBar.Add(l.yBar, newRat().Mul(rat(w[i]), rat(y[i])))
	}
	l.xBar.Quo(l.xBar, l.sumW)
	l.yBar.Quo(l.yBar, l.sumW)
	sxy := newRat()
	for i := range x {
		d := newRat().Sub(rat(x[i]), l.xBar)
		wd := newRat().Mul(rat(w[i]), d)
		l.sxx.Add(l.sxx, newRat().Mul(wd, d))
		sxy.Add(sxy, newRat().Mul(wd, newRat().Sub(rat(y[i]), l.yBar)))
	}
	l.b = newRat().Quo(sxy, l.sxx)
	l.a = newRat().Sub(l.yBar, newRat().Mul(l.b, l.xBar))
	for i := range x {
		r := newRat().Sub(rat(y[i]), newRat().Add(l.a, newRat().Mul(l.b, rat(x[i]))))
		l.rss.Add(l.rss, newRat().Mul(rat(w[i]), newRat().Mul(r, r)))
	}
	return l
}

func float(r *big.Rat) float64 { v, _ := r.Float64(); return v }

// TestAgainstRationals compares every statistic and prediction with the textbook's formulas in rational arithmetic, on random designs,
// among them amounts far from zero and amounts over four decades.
func TestAgainstRationals(t *testing.T) {
	rnd := rand.New(rand.NewPCG(11, 3))
	for trial := range 200 {
		n := 4 + rnd.IntN(12)
		x, y, w := make([]float64, n), make([]float64, n), make([]float64, n)
		for i := range x {
			switch trial % 3 {
			case 0:
				x[i] = 1 + 10*rnd.Float64()
			case 1:
				x[i] = 1e6 + rnd.Float64() // far from zero
			default:
				x[i] = math.Pow(10, 4*rnd.Float64()) // over decades
			}
			y[i] = -0.3 + 2.5*x[i] + 0.01*rnd.NormFloat64()
		}
		for _, kind := range []Weighting{Unweighted, InverseX, InverseX2} {
			for i := range w {
				w[i] = weightAt(x[i], kind)
			}
			f, err := FitLine(pointsOf(x, y), kind)
			if err != nil {
				t.Fatal(err)
			}
			l := fitExactly(x, y, w)
			s := math.Sqrt(float(l.rss) / float64(n-2))
			sb := s / math.Sqrt(float(l.sxx))
			within := 1e-12
			near(t, "b", f.B, float(l.b), within*(float(l.b)+sb))
			near(t, "a", f.A, float(l.a), within*(math.Abs(float(l.a))+float(l.b)*float(l.xBar)))
			near(t, "Σw", f.SumW, float(l.sumW), 1e-15*float(l.sumW))
			near(t, "x̄", f.XBar, float(l.xBar), 1e-15*float(l.xBar))
			near(t, "ȳ", f.YBar, float(l.yBar), 1e-15*math.Abs(float(l.yBar)))
			// Distances from x̄ and ȳ are rounded at their places: that is 10^-10 of a scatter of 0.01 around 2.5·10^6.
			near(t, "Sxx", f.Sxx, float(l.sxx), 1e-9*float(l.sxx))
			near(t, "s", f.S, s, 1e-9*s)
			near(t, "s(b)", f.SB, sb, 1e-9*sb)
			sa := s * math.Sqrt(1/float(l.sumW)+float(l.xBar)*float(l.xBar)/float(l.sxx))
			near(t, "s(a)", f.SA, sa, 1e-9*sa)
			near(t, "cov", f.Cov, -float(l.xBar)*sb*sb, 1e-9*sa*sb)

			y0, m, w0 := y[rnd.IntN(n)], 1+rnd.IntN(4), w[rnd.IntN(n)]
			p, err := f.Predict(y0, m, w0)
			if err != nil {
				t.Fatal(err)
			}
			d := newRat().Quo(newRat().Sub(rat(y0), l.yBar), l.b)
			line := newRat().Add(newRat().Inv(l.sumW), newRat().Quo(newRat().Mul(d, d), l.sxx))
			whole := newRat().Add(line, newRat().Inv(newRat().Mul(rat(w0), rat(float64(m)))))
			x0 := float(newRat().Quo(newRat().Sub(rat(y0), l.a), l.b))
			near(t, "x0", p.X, x0, 1e-12*math.Abs(x0))
			u := s / float(l.b) * math.Sqrt(float(whole))
			near(t, "u", p.StdU, u, 1e-9*u)
			u = s / float(l.b) * math.Sqrt(float(line))
			near(t, "u of the line", p.StdULine, u, 1e-9*u)
		}
	}
}

// TestPowersOfTwo: measured in other units, by a power of two, the same bits come out, scaled: there is no hidden constant in the
// arithmetic.
func TestPowersOfTwo(t *testing.T) {
	rnd := rand.New(rand.NewPCG(2, 9))
	for _, kind := range []Weighting{Unweighted, InverseX, InverseX2} {
		var points, scaled []Point
		for i := range 8 {
			x := 3 + 20*float64(i)
			y := 0.2 + 0.03*x*(1+0.02*rnd.NormFloat64())
			points = append(points, Point{x, y})
			scaled = append(scaled, Point{math.Ldexp(x, 10), math.Ldexp(y, -14)})
		}
		f, err := FitLine(points, kind)
		if err != nil {
			t.Fatal(err)
		}
		g, err := FitLine(scaled, kind)
		if err != nil {
			t.Fatal(err)
		}
		p, err := f.PredictSample(2, 3)
		if err != nil {
			t.Fatal(err)
		}
		q, err := g.PredictSample(math.Ldexp(2, -14), 3)
		if err != nil {
			t.Fatal(err)
		}
		for _, v := range []struct {
			what      string
			got, want float64
		}{
			{"a", g.A, math.Ldexp(f.A, -14)}, {"b", g.B, math.Ldexp(f.B, -24)}, {"s(a)", g.SA, math.Ldexp(f.SA, -14)}, {"s(b)", g.SB, math.Ldexp(f.SB, -24)},
			{"r", g.R, f.R}, {"x0", q.X, math.Ldexp(p.X, 10)}, {"the line's u", q.StdULine, math.Ldexp(p.StdULine, 10)}, {"u", q.StdU, math.Ldexp(p.StdU, 10)},
			{"relative bias", *g.Points[2].RelativeBias, *f.Points[2].RelativeBias},
		} {
			// With 1/x a scale of 2^10 comes under the root as 2^5, which is exact too.
			if v.got != v.want {
				t.Errorf("weights %s: %s is %.17g, want exactly %.17g", kind, v.what, v.got, v.want)
			}
		}
	}
}

var certified = regexp.MustCompile(`^\s*B(\d)\s+(-?[\d.E+-]+)\s+([\d.E+-]+)`)

// TestNorris is the certified line of the NIST Statistical Reference Datasets (Norris, calibration of ozone monitors; public domain):
// estimates, their standard deviations, residual standard deviation and R².
func TestNorris(t *testing.T) {
	f, err := os.Open(filepath.Join("..", "..", "testdata", "nist-strd", "Norris.dat"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	num := func(s string) float64 {
		v, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	var points []Point
	var b, sb []float64
	inData := false
	for sc := bufio.NewScanner(f); sc.Scan(); {
		fields := strings.Fields(sc.Text())
		if m := certified.FindStringSubmatch(sc.Text()); m != nil {
			b, sb = append(b, num(m[2])), append(sb, num(m[3]))
		}
		if inData && len(fields) == 2 {
			points = append(points, Point{X: num(fields[1]), Y: num(fields[0])})
		}
		inData = inData || len(fields) == 3 && fields[0] == "Data:" && fields[1] == "y"
	}
	if len(points) != 36 || len(b) != 2 {
		t.Fatalf("%d points and %d estimates, want 36 and 2", len(points), len(b))
	}
	line, err := FitLine(points, Unweighted)
	if err != nil {
		t.Fatal(err)
	}
	for _, v := range []struct {
		what      string
		got, want float64
	}{
		{"intercept", line.A, b[0]}, {"slope", line.B, b[1]}, {"s(intercept)", line.SA, sb[0]}, {"s(slope)", line.SB, sb[1]},
		{"residual standard deviation", line.S, 0.884796396144373}, {"R²", line.R2, 0.999993745883712},
	} {
		off := math.Abs(v.got/v.want - 1)
		t.Logf("%-28s %.1f digits", v.what, -math.Log10(max(off, 1e-15)))
		if off > 1e-12 {
			t.Errorf("%s: %.16g, certified is %.16g", v.what, v.got, v.want)
		}
	}
}
