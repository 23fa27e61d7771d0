package mzml

import (
	"crypto/sha1"
	"hash"
	"io"

	"assaywrit/evidence/trace"
)

// A follower computes the SHA-1 of the beginning of a file beside the reader, which tells it how far it may go.
type follower struct {
	src  trace.Source
	sum  hash.Hash
	to   chan int
	done chan error
}

func follow(src trace.Source) *follower {
	f := &follower{src: src, sum: sha1.New(), to: make(chan int, 64), done: make(chan error, 1)}
	go f.run()
	return f
}

func (f *follower) run() {
	buf, at := make([]byte, 1<<16), 0
	var failed error
	for to := range f.to {
		for at < to && failed == nil {
			n, err := f.src.ReadAt(buf[:min(len(buf), to-at)], int64(at))
			f.sum.Write(buf[:n])
			at += n
			if n == 0 && err != nil {
				failed = err
			}
		}
	}
	if failed == io.EOF {
		failed = io.ErrUnexpectedEOF
	}
	f.done <- failed
}

// finish returns the checksum of the bytes up to the last place told.
func (f *follower) finish() ([]byte, error) {
	close(f.to)
	if err := <-f.done; err != nil {
		return nil, err
	}
	return f.sum.Sum(nil), nil
}
