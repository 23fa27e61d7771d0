package netcdf

import "fmt"

// A Type is the type of the values of a variable or an attribute, by its number in the file (nc_type).
type Type uint32

// The types of the classic format; those after Double are of CDF-5 alone.
const (
	Byte   Type = 1 // signed, 8 bits
	Char   Type = 2
	Short  Type = 3 // signed, 16 bits
	Int    Type = 4 // signed, 32 bits
	Float  Type = 5 // IEEE 754, 32 bits
	Double Type = 6 // IEEE 754, 64 bits
	UByte  Type = 7
	UShort Type = 8
	UInt   Type = 9
	Int64  Type = 10
	UInt64 Type = 11
)

var types = [...]struct {
	name string
	size int64
	fill float64 // what the library leaves where nothing was written
	has  bool    // whether that value cannot be mistaken for a measured one, and fits a float64
}{
	Byte:   {"byte", 1, 0, false},
	Char:   {"char", 1, 0, false},
	Short:  {"short", 2, -32767, true},
	Int:    {"int", 4, -2147483647, true},
	Float:  {"float", 4, 0x1.ep122, true},
	Double: {"double", 8, 0x1.ep122, true},
	UByte:  {"ubyte", 1, 0, false},
	UShort: {"ushort", 2, 65535, true},
	UInt:   {"uint", 4, 4294967295, true},
	Int64:  {"int64", 8, 0, false},
	UInt64: {"uint64", 8, 0, false},
}

func (t Type) valid(version byte) bool {
	return t >= Byte && t <= Double || version == 5 && t <= UInt64 && t > Double
}

// Size is the number of bytes of one value; 0 for a type that does not exist.
func (t Type) Size() int64 {
	if int(t) >= len(types) {
		return 0
	}
	return types[t].size
}

// String is the name that the type has in CDL, the text form of the format.
func (t Type) String() string {
	if t.Size() == 0 {
		return fmt.Sprintf("type %d", uint32(t))
	}
	return types[t].name
}
