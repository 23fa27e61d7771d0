// Package canonical writes canonical JSON (RFC 8785): one encoding for one set of facts, so that a hash of the bytes is
// a hash of the facts.
package canonical

import (
	"bytes"
	"encoding/json"

	"github.com/gowebpki/jcs"
)

// Marshal returns v as canonical JSON. It fails on NaN and infinities, on values that JSON cannot hold, and on text that
// is not valid UTF-8. Numbers come out in the shortest form that reads back to the same double; integers beyond 2^53
// would be rounded and must not be put in.
func Marshal(v any) ([]byte, error) {
	var plain bytes.Buffer
	enc := json.NewEncoder(&plain)
	enc.SetEscapeHTML(false)
	if err := enc.Encode(v); err != nil {
		return nil, err
	}
	return jcs.Transform(plain.Bytes())
}
