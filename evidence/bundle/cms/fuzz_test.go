package cms

import (
	"bytes"
	"testing"
	"time"
)

// FuzzVerify: whatever is read may be refused, never crash; what is accepted is the one encoding of what it says.
func FuzzVerify(f *testing.F) {
	who := players()
	f.Add(mustSign(f, who.signer, "reviewed", who.middle.cert), content)
	s := parts(f, "authorised")
	f.Add(s.encode(), content)
	f.Add(withoutAttributes(s), s.signed())
	f.Add([]byte{0x30, 0x80, 0, 0}, []byte(nil))
	f.Fuzz(func(t *testing.T, der, signed []byte) {
		v, err := Verify(der, signed)
		if err == nil {
			s, err := decode(der)
			if err != nil || !bytes.Equal(s.encode(), der) || v.Certificate == nil {
				t.Error("accepted, and another encoding")
			}
		}
	})
}

func FuzzTime(f *testing.F) {
	f.Add([]byte("\x17\x0d261201093000Z"))
	f.Add([]byte("\x18\x0f20611201093000Z"))
	f.Add([]byte("\x17\x0d500101000000Z"))
	f.Fuzz(func(t *testing.T, value []byte) {
		if at, err := decodeTime(value); err == nil && !bytes.Equal(encodeTime(at), value) {
			t.Errorf("%s comes back as % x", at.Format(time.RFC3339), encodeTime(at))
		}
	})
}
