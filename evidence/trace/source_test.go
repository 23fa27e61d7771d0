package trace

import (
	"bytes"
	"errors"
	"io"
	"strings"
	"testing"
)

var (
	_ Source = (*bytes.Reader)(nil)
	_ Source = (*strings.Reader)(nil)
	_ Source = (*io.SectionReader)(nil)
)

// A liar is a source that claims a size.
type liar struct {
	*strings.Reader
	size int64
}

func (l liar) Size() int64 { return l.size }

func TestReadAll(t *testing.T) {
	for _, text := range []string{"", "some bytes"} {
		got, err := ReadAll(strings.NewReader(text))
		if err != nil || string(got) != text {
			t.Errorf("got %q, %v, want %q", got, err, text)
		}
	}
	if _, err := ReadAll(liar{strings.NewReader("some"), 5}); !errors.Is(err, io.ErrUnexpectedEOF) {
		t.Errorf("a source that ends early: %v", err)
	}
	for _, size := range []int64{-1, maxSize + 1, 1 << 62} {
		if _, err := ReadAll(liar{strings.NewReader("some"), size}); err == nil {
			t.Errorf("a size of %d was accepted", size)
		}
	}
}
