package strictmath

import (
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"math"
	"testing"
)

// TestSameBitsEverywhere hashes the results of all functions over fixed arguments, some 200,000 of them. The constant is a regression
// guard: it was printed by this program on amd64. Run on another processor, or under emulation of one, it shows that the bits are
// the same there:
//
//	GOARCH=arm64 go test -exec qemu-aarch64-static ./evidence/strictmath/
func TestSameBitsEverywhere(t *testing.T) {
	const want = "ecfd6c071a2ccfa6f9afe24833774eca7682272f4956c81aa12b300a6a599e1e"
	h := sha256.New()
	n := 0
	put := func(values ...float64) {
		for _, v := range values {
			bits := math.Float64bits(v)
			if math.IsNaN(v) {
				bits = 0x7ff8000000000000 // the sign and payload of NaN are nobody's promise
			}
			h.Write(binary.LittleEndian.AppendUint64(nil, bits))
			n++
		}
	}
	for i, x := range between(20000, -30, 30) {
		u := (x + 30) / 60
		put(Exp(x), Exp(float64(25*x)), Log(math.Abs(x)), Pow(math.Abs(x), float64(4*u)-2), Erf(x/5), Erfc(x), Erfcx(x/2), NormCDF(x), NormSF(x/6), NormQuantile(u))
		if i%10 == 0 {
			nu := Pow(10, float64(20*u)-2)
			put(nu, TCDF(x/3, nu), TSF(x, 1+float64(50*u)), TQuantile(u, nu), TQuantile(float64(u*u*u*u*1e-9), 1+float64(30*u)))
		}
	}
	for n := 3; n <= 200; n++ {
		rows := make([][]float64, n)
		y, w := between(n, 0, 1), between(n+1000, 0.1, 2)[:n]
		for i, x := range between(n+2000, -1, 1)[:n] {
			rows[i] = []float64{1, x, float64(x * x)}
		}
		s, err := WeightedLeastSquares(rows, y, w)
		if err != nil {
			t.Fatal(err)
		}
		put(s.Coef...)
		for _, row := range s.Cov {
			put(row...)
		}
		put(s.RSS, Sum(y), Dot(y, w), Mean(y), SD(y))
	}
	if n < 200000 {
		t.Errorf("only %d values", n)
	}
	if got := hex.EncodeToString(h.Sum(nil)); got != want {
		t.Errorf("the bits hash to %s, want %s", got, want)
	}
}
