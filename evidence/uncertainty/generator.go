package uncertainty

import (
	"encoding/binary"
	"math"
	"math/rand/v2"

	"assaywrit/evidence/strictmath"
)

// GeneratorName names the generator and how a block is seeded; a published version never changes its numbers.
//
// Each block of trials has a stream of its own, ChaCha8 as the specification chacha8rand (C2SP) has it, keyed with 32 bytes: the
// seed, the number of the block from 0 (both eight bytes, the lowest first), and the sixteen characters of generatorLabel. The numbers
// of a block depend on nothing else: neither on the other blocks, nor on how many goroutines share the work.
const GeneratorName = "chacha8-blocks@1"

const generatorLabel = "monte-carlo/v1.."

// A generator draws from one block's stream.
type generator struct {
	source *rand.ChaCha8
	spare  float64 // the second deviate of a pair
	held   bool
}

func (g *generator) seed(seed, block uint64) {
	var key [32]byte
	binary.LittleEndian.PutUint64(key[0:], seed)
	binary.LittleEndian.PutUint64(key[8:], block)
	copy(key[16:], generatorLabel)
	g.source.Seed(key)
	g.held = false
}

// uniform is a number from 0 to 1, both excluded: the upper 53 bits and a half, times 2^-53.
func (g *generator) uniform() float64 {
	return float64((float64(g.source.Uint64()>>11) + 0.5) * (1.0 / (1 << 53)))
}

// symmetric is a number between -1 and 1, never 0: an odd multiple of 2^-53.
func (g *generator) symmetric() float64 {
	return float64(float64(int64(g.source.Uint64())>>10|1) * (1.0 / (1 << 53)))
}

// disk is a point inside the unit circle, and the square of its distance from the centre.
func (g *generator) disk() (u, v, w float64) {
	for {
		u, v = g.symmetric(), g.symmetric()
		w = float64(u*u) + float64(v*v)
		if w < 1 {
			return u, v, w
		}
	}
}

// normal is a standard normal deviate, by the polar method; deviates come in pairs.
//
// Source: G. Marsaglia, T. A. Bray, SIAM Review 6 (1964) 260-264 (from memory).
func (g *generator) normal() float64 {
	if g.held {
		g.held = false
		return g.spare
	}
	u, v, w := g.disk()
	f := math.Sqrt(-2 * strictmath.Log(w) / w)
	g.spare, g.held = float64(v*f), true
	return float64(u * f)
}

// student is a deviate of Student's distribution with nu degrees of freedom, by the polar method.
//
// Source: R. W. Bailey, Math. Comp. 62 (1994) 779-781 (from memory).
func (g *generator) student(nu float64) float64 {
	u, _, w := g.disk()
	grown := strictmath.Exp(-2*strictmath.Log(w)/nu) - 1
	return float64(u * math.Sqrt(nu*grown/w))
}

// arcSine is a deviate of the arc sine distribution from -1 to 1: the cosine of twice the angle of a point of the disk.
func (g *generator) arcSine() float64 {
	u, v, w := g.disk()
	return (float64(u*u) - float64(v*v)) / w
}

// trapezoid is a deviate of the symmetric trapezoid from -1 to 1 whose top is top of its base (JCGM 101:2008, 6.4.4.4, from memory).
func (g *generator) trapezoid(top float64) float64 {
	a := float64((1 + top) * g.uniform())
	return a + float64((1-top)*g.uniform()) - 1
}
