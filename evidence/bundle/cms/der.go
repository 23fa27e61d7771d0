package cms

import (
	"bytes"
	"fmt"
	"math/big"
	"slices"
	"strings"
)

// Tags of the types used here (ITU-T X.690, 8.1.2).
const (
	tagInteger         = 0x02
	tagOctetString     = 0x04
	tagOID             = 0x06
	tagUTF8String      = 0x0c
	tagUTCTime         = 0x17
	tagGeneralizedTime = 0x18
	tagSequence        = 0x30
	tagSet             = 0x31
	tagContext0        = 0xa0 // [0], constructed
	tagContext1        = 0xa1
	tagContext2        = 0xa2
	tagContext4        = 0xa4
)

// element returns one DER element: the tag, the shortest length, and the parts one after the other.
func element(tag byte, parts ...[]byte) []byte {
	n := 0
	for _, p := range parts {
		n += len(p)
	}
	out := []byte{tag}
	if n < 0x80 {
		out = append(out, byte(n))
	} else {
		length := big.NewInt(int64(n)).Bytes()
		out = append(append(out, 0x80|byte(len(length))), length...)
	}
	for _, p := range parts {
		out = append(out, p...)
	}
	return out
}

func sequence(parts ...[]byte) []byte { return element(tagSequence, parts...) }

// sortedSet returns the elements in the order that DER prescribes for a SET OF (X.690, 11.6).
func sortedSet(elements [][]byte) [][]byte {
	sorted := slices.Clone(elements)
	slices.SortFunc(sorted, bytes.Compare)
	return sorted
}

// oid encodes an object identifier in dotted form. Arcs may be larger than 64 bits.
func oid(dotted string) []byte {
	var body []byte
	first := new(big.Int)
	for i, text := range strings.Split(dotted, ".") {
		arc, ok := new(big.Int).SetString(text, 10)
		if !ok {
			panic("cms: internal error: object identifier " + dotted)
		}
		switch i {
		case 0:
			first.Mul(arc, big.NewInt(40))
			continue
		case 1:
			arc.Add(arc, first)
		}
		body = append(body, base128(arc)...)
	}
	return element(tagOID, body)
}

func base128(n *big.Int) []byte {
	rest, low := new(big.Int).Set(n), big.NewInt(0x7f)
	out := []byte{byte(new(big.Int).And(rest, low).Int64())}
	for rest.Rsh(rest, 7); rest.Sign() > 0; rest.Rsh(rest, 7) {
		out = append(out, 0x80|byte(new(big.Int).And(rest, low).Int64()))
	}
	slices.Reverse(out)
	return out
}

// A reading goes through the elements of a DER text. The first fault stays in err, and everything after it is empty.
type reading struct {
	rest []byte
	err  error
}

func (r *reading) fail(format string, args ...any) {
	if r.err == nil {
		r.err = fmt.Errorf(format, args...)
	}
	r.rest = nil
}

// peek returns the tag of the next element, or 0 at the end.
func (r *reading) peek() byte {
	if len(r.rest) == 0 {
		return 0
	}
	return r.rest[0]
}

// next takes the next element, whatever it is: all of it, and what is inside.
func (r *reading) next() (whole, inside []byte) {
	if len(r.rest) < 2 {
		r.fail("an element is cut short")
		return nil, nil
	}
	if r.rest[0]&0x1f == 0x1f {
		r.fail("tag %#x, want one of a single byte", r.rest[0])
		return nil, nil
	}
	head, n := 2, int(r.rest[1])
	if n >= 0x80 {
		size := n & 0x7f
		if size == 0 || size > 3 || len(r.rest) < 2+size {
			r.fail("a length that is indefinite, too large or cut short")
			return nil, nil
		}
		n = 0
		for _, b := range r.rest[2 : 2+size] {
			n = n<<8 | int(b)
		}
		if n < 0x80 || n>>(8*(size-1)) == 0 {
			r.fail("a length is not written in its shortest form")
			return nil, nil
		}
		head += size
	}
	if n > len(r.rest)-head {
		r.fail("an element is cut short")
		return nil, nil
	}
	whole, inside = r.rest[:head+n], r.rest[head:head+n]
	r.rest = r.rest[head+n:]
	return whole, inside
}

// want takes the next element, which must have the tag.
func (r *reading) want(tag byte, what string) (whole, inside []byte) {
	if r.err != nil {
		return nil, nil
	}
	if r.peek() != tag || len(r.rest) == 0 {
		r.fail("%s: found tag %#x, want %#x", what, r.peek(), tag)
		return nil, nil
	}
	return r.next()
}

// into takes the next element, which must have the tag, and returns a reading of what is inside it.
func (r *reading) into(tag byte, what string) *reading {
	_, inside := r.want(tag, what)
	return &reading{rest: inside, err: r.err}
}

// end notes a fault if something is left.
func (r *reading) end(what string) {
	if r.err == nil && len(r.rest) > 0 {
		r.fail("%s: %d bytes too many", what, len(r.rest))
	}
}

// all returns the elements that are left.
func (r *reading) all() [][]byte {
	var list [][]byte
	for r.err == nil && len(r.rest) > 0 {
		whole, _ := r.next()
		list = append(list, whole)
	}
	return list
}
