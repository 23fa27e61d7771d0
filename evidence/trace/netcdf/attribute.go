package netcdf

import (
	"fmt"
	"strings"
)

// An Attribute is a fact about a variable or about the file as a whole.
type Attribute struct {
	Name string
	Type Type

	raw []byte
}

// Len is the number of values; of text, of bytes.
func (a *Attribute) Len() int { return len(a.raw) / int(a.Type.Size()) }

// Text is the text of an attribute of characters, without NUL characters at its end, as the file has it: it may not be UTF-8.
// It is empty for any other type.
func (a *Attribute) Text() string {
	if a.Type != Char {
		return ""
	}
	return strings.TrimRight(string(a.raw), "\x00")
}

// Floats are the values of an attribute of numbers. Text, values that are not finite and integers beyond 2^53 are an error.
func (a *Attribute) Floats() ([]float64, error) {
	if a.Type == Char {
		return nil, fmt.Errorf("the attribute %q holds text, want numbers", a.Name)
	}
	dst := make([]float64, a.Len())
	if i, what := convert(dst, a.raw, a.Type); what != "" {
		return nil, fmt.Errorf("value %d of the attribute %q is %s", i+1, a.Name, what)
	}
	return dst, nil
}

// find returns the attribute of that name, or nil.
func find(list []Attribute, name string) *Attribute {
	for i := range list {
		if list[i].Name == name {
			return &list[i]
		}
	}
	return nil
}
