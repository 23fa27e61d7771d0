package inflate

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"testing"

	stdflate "compress/flate"
	stdzlib "compress/zlib"

	"github.com/klauspost/compress/zlib"
)

// reference is what the library says of the same bytes: at most limit of them.
func reference(src []byte, limit int) (out []byte, used int, err error) {
	in := bytes.NewReader(src)
	z, err := stdzlib.NewReader(in)
	if err != nil {
		return nil, 0, err
	}
	out, err = io.ReadAll(io.LimitReader(z, int64(limit)+1))
	return out, len(src) - in.Len(), err
}

// samples are data of several kinds, by name.
func samples() map[string][]byte {
	r := rand.New(rand.NewPCG(1, 2))
	random := make([]byte, 100_000)
	for i := range random {
		random[i] = byte(r.Uint32())
	}
	var masses, counts []byte
	for i := range 40_000 {
		masses = binary.LittleEndian.AppendUint64(masses, math.Float64bits(100+float64(i)*0.0137+r.Float64()*1e-3))
		counts = binary.LittleEndian.AppendUint32(counts, math.Float32bits(float32(r.ExpFloat64()*1000)))
	}
	text := bytes.Repeat([]byte("the quick brown fox jumps over the lazy dog; "), 3000)
	few := make([]byte, 70_000)
	for i := range few {
		few[i] = byte(r.Uint32() % 3)
	}
	return map[string][]byte{
		"empty": {}, "one byte": {7}, "zeros": make([]byte, 300_000), "random": random, "masses": masses, "counts": counts, "text": text, "few": few,
		"pairs": bytes.Repeat([]byte{1, 2}, 5000), "triples": bytes.Repeat([]byte{1, 2, 3}, 5000), "sevens": bytes.Repeat([]byte("abcdefg"), 999),
	}
}

func packed(t testing.TB, data []byte, level int) []byte {
	t.Helper()
	var b bytes.Buffer
	z, err := stdzlib.NewWriterLevel(&b, level)
	if err == nil {
		if _, err = z.Write(data); err == nil {
			err = z.Close()
		}
	}
	if err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// TestZlib undoes what the standard library packed, by every level, with and without room to spare.
func TestZlib(t *testing.T) {
	var d Decoder
	for name, data := range samples() {
		for _, level := range []int{stdflate.HuffmanOnly, 0, 1, 6, 9} {
			src := append(packed(t, data, level), "rest"...)
			for _, slack := range []int{0, 1, Slack} {
				dst := make([]byte, len(data), len(data)+slack)
				n, used, err := d.Zlib(dst, src)
				if err != nil || n != len(data) || used != len(src)-4 || !bytes.Equal(dst[:n], data) {
					t.Errorf("%s, level %d, slack %d: %d bytes of %d, used %d of %d, %v", name, level, slack, n, len(data), used, len(src)-4, err)
				}
			}
			if len(data) > 0 {
				if _, _, err := d.Zlib(make([]byte, len(data)-1, len(data)+Slack), src); !errors.Is(err, ErrLong) {
					t.Errorf("%s, level %d: one byte too small: %v", name, level, err)
				}
			}
		}
	}
}

// TestEveryCut refuses data that ends anywhere before its end, and a changed byte anywhere.
func TestEveryCut(t *testing.T) {
	var d Decoder
	data := samples()["counts"][:900]
	for _, level := range []int{stdflate.HuffmanOnly, 0, 6} {
		src := packed(t, data, level)
		for i := range src {
			dst := make([]byte, len(data), len(data)+Slack)
			if _, _, err := d.Zlib(dst, src[:i]); err == nil {
				t.Errorf("level %d: %d bytes of %d were accepted", level, i, len(src))
			}
			bad := bytes.Clone(src)
			bad[i] ^= 0x10
			if n, _, err := d.Zlib(dst, bad); err == nil && !bytes.Equal(dst[:n], data) {
				t.Errorf("level %d: byte %d changed, and nothing noticed", level, i)
			}
		}
	}
}

// FuzzZlib accepts and refuses what the standard library does, with the same bytes.
func FuzzZlib(f *testing.F) {
	for _, data := range samples() {
		data = data[:min(len(data), 3000)]
		for _, level := range []int{stdflate.HuffmanOnly, 0, 1, 9} {
			f.Add(packed(f, data, level))
		}
	}
	f.Add([]byte{0x78, 0x9c, 0x03, 0, 0, 0, 0, 1})
	var d Decoder
	f.Fuzz(func(t *testing.T, src []byte) {
		const limit = 1 << 16
		want, used, wantErr := reference(src, limit)
		for _, slack := range []int{0, Slack} {
			dst := make([]byte, limit, limit+slack)
			n, gotUsed, err := d.Zlib(dst, src)
			if len(want) > limit {
				if err == nil {
					t.Fatalf("%d bytes were accepted, want more than %d refused", n, limit)
				}
				continue
			}
			if (err == nil) != (wantErr == nil) {
				t.Fatalf("got %v, the library %v", err, wantErr)
			}
			if err == nil && (!bytes.Equal(dst[:n], want) || gotUsed != used) {
				t.Fatalf("%d bytes from %d, the library %d from %d", n, gotUsed, len(want), used)
			}
		}
	})
}

// BenchmarkInflate compares with the library, per byte of output.
func BenchmarkInflate(b *testing.B) {
	for _, name := range []string{"masses", "counts", "text"} {
		data := samples()[name]
		src := packed(b, data, 6)
		b.Run(fmt.Sprintf("data=%s/by=here", name), func(b *testing.B) {
			var d Decoder
			dst := make([]byte, len(data), len(data)+Slack)
			b.SetBytes(int64(len(data)))
			for b.Loop() {
				if _, _, err := d.Zlib(dst, src); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("data=%s/by=library", name), func(b *testing.B) {
			dst := make([]byte, len(data))
			in := bytes.NewReader(src)
			z, err := zlib.NewReader(in)
			if err != nil {
				b.Fatal(err)
			}
			b.SetBytes(int64(len(data)))
			for b.Loop() {
				in.Reset(src)
				if err := z.(zlib.Resetter).Reset(in, nil); err != nil {
					b.Fatal(err)
				}
				if _, err := io.ReadFull(z, dst); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
