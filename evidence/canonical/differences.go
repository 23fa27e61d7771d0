package canonical

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"
)

// A Difference is one value that two JSON texts do not share. A side that lacks it is "(absent)".
type Difference struct {
	Pointer string `json:"pointer"` // RFC 6901
	Left    string `json:"left"`
	Right   string `json:"right"`
}

// Differences compares two JSON texts value by value and lists where they differ, in the order of sorted keys. Numbers
// differ when they are apart by more than relative times the larger of the two; with relative 0 they must be written alike.
func Differences(left, right []byte, relative float64) ([]Difference, error) {
	l, err := decode(left)
	if err != nil {
		return nil, err
	}
	r, err := decode(right)
	if err != nil {
		return nil, err
	}
	c := comparison{relative: relative}
	c.walk("", l, r)
	return c.found, nil
}

func decode(data []byte) (any, error) {
	dec := json.NewDecoder(bytes.NewReader(data))
	dec.UseNumber()
	var v any
	if err := dec.Decode(&v); err != nil {
		return nil, err
	}
	return v, nil
}

type comparison struct {
	relative float64
	found    []Difference
}

func (c *comparison) walk(at string, l, r any) {
	switch lv := l.(type) {
	case map[string]any:
		if rv, ok := r.(map[string]any); ok {
			c.objects(at, lv, rv)
			return
		}
	case []any:
		if rv, ok := r.([]any); ok {
			c.arrays(at, lv, rv)
			return
		}
	case json.Number:
		if rv, ok := r.(json.Number); ok && (lv == rv || c.near(lv, rv)) {
			return
		}
	default:
		if l == r {
			return
		}
	}
	c.add(at, text(l), text(r))
}

func (c *comparison) objects(at string, l, r map[string]any) {
	keys := make([]string, 0, len(l))
	for k := range l {
		keys = append(keys, k)
	}
	for k := range r {
		if _, both := l[k]; !both {
			keys = append(keys, k)
		}
	}
	sort.Strings(keys)
	for _, k := range keys {
		lv, inLeft := l[k]
		rv, inRight := r[k]
		here := at + "/" + strings.NewReplacer("~", "~0", "/", "~1").Replace(k)
		switch {
		case !inLeft:
			c.add(here, absent, text(rv))
		case !inRight:
			c.add(here, text(lv), absent)
		default:
			c.walk(here, lv, rv)
		}
	}
}

func (c *comparison) arrays(at string, l, r []any) {
	for i := range max(len(l), len(r)) {
		here := at + "/" + strconv.Itoa(i)
		switch {
		case i >= len(l):
			c.add(here, absent, text(r[i]))
		case i >= len(r):
			c.add(here, text(l[i]), absent)
		default:
			c.walk(here, l[i], r[i])
		}
	}
}

func (c *comparison) near(l, r json.Number) bool {
	a, errA := l.Float64()
	b, errB := r.Float64()
	return errA == nil && errB == nil && c.relative > 0 && math.Abs(a-b) <= c.relative*max(math.Abs(a), math.Abs(b))
}

const absent = "(absent)"

func (c *comparison) add(at, l, r string) {
	c.found = append(c.found, Difference{at, l, r})
}

// text shows a value in a line: short values whole, others by their kind.
func text(v any) string {
	switch t := v.(type) {
	case map[string]any:
		return fmt.Sprintf("an object of %d", len(t))
	case []any:
		return fmt.Sprintf("a list of %d", len(t))
	case json.Number:
		return t.String()
	}
	out, err := json.Marshal(v)
	if err != nil {
		return fmt.Sprint(v)
	}
	return string(out)
}
