package bundle

import (
	"bytes"
	"encoding/base64"
	"fmt"
	"io"
	"math/rand/v2"
	"testing"
)

// batch is a payload of so many files of so many bytes: text with base64 of random bytes in it, as in mzML.
func batch(files, size int) []Payload {
	random := rand.NewChaCha8([32]byte{7})
	raw := make([]byte, size*3/4-100)
	var list []Payload
	for i := range files {
		if _, err := io.ReadFull(random, raw); err != nil {
			panic(err)
		}
		data := []byte("<binary>" + base64.StdEncoding.EncodeToString(raw) + "</binary>")
		list = append(list, Payload{fmt.Sprintf("inputs/case/raw/%04d.mzML", i), data})
	}
	return list
}

var sizes = []struct{ files, size int }{{40, 100_000}, {1000, 1000}}

func each(b *testing.B, run func(b *testing.B, payload []Payload, data []byte)) {
	for _, s := range sizes {
		payload := batch(s.files, s.size)
		data := written(b, testHeader(), payload)
		b.Run(fmt.Sprintf("files=%d/bytes=%d", s.files, s.size), func(b *testing.B) {
			b.SetBytes(int64(s.files * s.size))
			b.ReportAllocs()
			run(b, payload, data)
		})
	}
}

func BenchmarkWrite(b *testing.B) {
	each(b, func(b *testing.B, payload []Payload, _ []byte) {
		for b.Loop() {
			if _, err := Write(io.Discard, testHeader(), payload); err != nil {
				b.Fatal(err)
			}
		}
	})
}

func BenchmarkOpen(b *testing.B) {
	each(b, func(b *testing.B, _ []Payload, data []byte) {
		for b.Loop() {
			if _, err := Open(bytes.NewReader(data), int64(len(data))); err != nil {
				b.Fatal(err)
			}
		}
	})
}

func BenchmarkCheckFiles(b *testing.B) {
	each(b, func(b *testing.B, _ []Payload, data []byte) {
		opened := opened(b, data)
		for b.Loop() {
			if problems := opened.CheckFiles(); len(problems) > 0 {
				b.Fatal(problems)
			}
		}
	})
}
