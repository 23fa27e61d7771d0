package mzml

import (
	"fmt"
	"strconv"
)

// number is the kind of an array's numbers, all little-endian (mzML 1.1.0, element binary).
type number uint8

const (
	float64Number number = iota
	float32Number
	int64Number
	int32Number
)

// size in bytes.
func (k number) size() int {
	if k == float64Number || k == int64Number {
		return 8
	}
	return 4
}

// press is how numbers were packed before zlib (MS-Numpress).
type press uint8

const (
	unpressed press = iota
	linear
	positiveInteger
	shortLoggedFloat
)

// An array is one binaryDataArray: what the file says about it, and where its base64 stands. Its numbers are decoded when they are
// asked for.
type array struct {
	at          int // of its element in the file
	text, bytes int // of its base64
	encoded     int // base64 characters, as stated
	n           int // numbers
	content     content
	kind        number
	press       press
	zlib        bool
	seconds     bool // times in seconds
}

// content is what the numbers are.
type content uint8

const (
	otherContent content = iota
	timeContent
	intensityContent
	mzContent
	wavelengthContent
)

var contentNames = [...]string{"", "time", "intensity", "m/z", "wavelength"}

// A described is an array while its element is read: what its terms say.
type described struct {
	at              int
	length, encoded string // attributes
	content         string // accession of what it holds
	number          string // accession of the kind of number
	press           string // accession of a compression other than plain zlib
	zlib            string
	unit            string
	text, bytes     int
	held            []byte // the text itself, only in chromatograms
	seen            bool   // the element "binary"
}

// add takes the text of the element "binary", which comes in one piece.
func (b *described) add(s *scanner, text []byte) error {
	if b.seen {
		return s.fail(s.runAt, "an array in two pieces", "one run of base64", cutHint)
	}
	b.seen, b.text, b.bytes = true, s.runAt, s.runBytes
	b.held = append(b.held[:0], text...)
	return nil
}

// term takes what a term says about the array. Terms that say nothing about its numbers are passed over.
func (b *described) term(s *scanner, t term, at int) error {
	slot := &b.content
	_, isNumber := numbers[t.accession]
	_, isPress := presses[t.accession]
	switch {
	case isNumber || unreadNumbers[t.accession] != "":
		slot = &b.number
	case isPress || unreadCompressions[t.accession] != "":
		slot = &b.press
	case t.accession == accZlib || t.accession == accPlain:
		slot = &b.zlib
	case contents[t.accession] != otherContent:
		b.unit = t.unit
	case auxiliaryArrays[t.accession] != "":
	default:
		return nil
	}
	if *slot != "" && *slot != t.accession {
		return s.fail(at, fmt.Sprintf("an array that is both %s and %s", *slot, t.accession), "one of them", "")
	}
	*slot = t.accession
	return nil
}

// array is what the element describes, with n numbers unless it says otherwise. What it says must be enough to read it.
func (b *described) array(s *scanner, n int) (array, error) {
	a := array{at: b.at, text: b.text, bytes: b.bytes, n: n, content: contents[b.content], kind: numbers[b.number], seconds: contents[b.content] == timeContent && b.unit == unitSecond}
	if b.length != "" {
		var ok bool
		if a.n, ok = count(b.length); !ok {
			return a, s.fail(b.at, fmt.Sprintf("arrayLength %q", b.length), "a number of points", "")
		}
	}
	p := presses[b.press]
	a.press, a.zlib = p.press, p.zlib || b.zlib == accZlib
	if got, want, hint := b.unread(); want != "" {
		return a, s.fail(b.at, got, want, hint)
	}
	var err error
	if a.encoded, err = strconv.Atoi(b.encoded); err != nil {
		return a, s.fail(b.at, fmt.Sprintf("encodedLength %q", b.encoded), "the number of its base64 characters", "")
	}
	return a, nil
}

// wantCompression names the compressions that are read.
const wantCompression = "no compression (" + accPlain + "), zlib (" + accZlib + ") or MS-Numpress"

// unread tells why the array cannot be read as it describes itself; want is "" where it can.
func (b *described) unread() (got, want, hint string) {
	const again = "export the file again without this encoding"
	name, of := contentNames[contents[b.content]], contents[b.content]
	switch {
	case unreadNumbers[b.number] != "":
		return fmt.Sprintf("the %s array as %s (%s)", name, unreadNumbers[b.number], b.number), "32- or 64-bit floats or integers", again
	case unreadCompressions[b.press] != "":
		return fmt.Sprintf("the %s array in %s compression (%s)", name, unreadCompressions[b.press], b.press), wantCompression, again
	case b.number == "" && b.press == "":
		return fmt.Sprintf("the %s array without the kind of its numbers", name), "32- or 64-bit floats or integers", ""
	case b.press == "" && b.zlib == "":
		return fmt.Sprintf("the %s array without its compression", name), wantCompression, ""
	case of == timeContent && b.unit == "":
		return "a time array without a unit", "seconds (" + unitSecond + ") or minutes (" + unitMinute + ")", "a unit of time is not guessed: export the file again with a converter that states it"
	case of == timeContent && b.unit != unitSecond && b.unit != unitMinute:
		return fmt.Sprintf("a time array in the unit %q", b.unit), "seconds (" + unitSecond + ") or minutes (" + unitMinute + ")", ""
	case of == intensityContent && relativeUnits[b.unit] != "":
		return fmt.Sprintf("intensities in %s (%s)", relativeUnits[b.unit], b.unit), "intensities as acquired", "scaled traces cannot be compared with each other: export the file again without scaling"
	case b.encoded == "":
		return fmt.Sprintf("the %s array without encodedLength", name), "the number of its base64 characters", ""
	}
	return "", "", ""
}

// unitOf is the unit of an intensity array for people; "" where the file states none, or counts.
func (b *described) unitOf() string { return intensityUnits[b.unit] }
