// Package units reads quantities as people write them, "150 ng/mL" or "2.31 min", and writes them back.
//
// A quantity is kept in the base unit of its family: minutes, ng/mL, mL, uL (injection volumes), mm, mL/min, and 1 for
// fractions. The decimal text is scaled by powers of ten (and by 60) before it becomes binary, so "1.2 ug/mL" is exactly 1200 and
// every result is the double nearest to what was written. A quantity without a unit is refused, and so is one of another
// family: ng/mL cannot be taken for ug/mL.
package units

import (
	"fmt"
	"math"
	"math/big"
	"regexp"
	"strings"
)

// A Family is a kind of quantity, with its units.
type Family struct {
	name    string // "a mass concentration"
	example string // "150 ng/mL"
	base    string
	units   []unit // in the order in which they are offered
	bare    bool   // a number without a unit is accepted
}

// unit: one of it is num/den · 10^exp of the base unit.
type unit struct {
	symbol   string
	num, den int64
	exp      int
}

// The families. Symbols follow the SI and are case-sensitive, except that the litre is taken as l or L (both are SI symbols).
var (
	Time = Family{"a time", "2.31 min", "min", []unit{{"min", 1, 1, 0}, {"s", 1, 60, 0}, {"h", 60, 1, 0}}, false}

	Concentration = Family{"a mass concentration", "150 ng/mL", "ng/mL", []unit{
		{"ng/mL", 1, 1, 0}, {"ug/mL", 1, 1, 3}, {"mg/mL", 1, 1, 6}, {"pg/mL", 1, 1, -3},
		{"g/L", 1, 1, 6}, {"mg/L", 1, 1, 3}, {"ug/L", 1, 1, 0}, {"ng/L", 1, 1, -3}}, false}

	Volume          = Family{"a volume", "92 mL", "mL", []unit{{"mL", 1, 1, 0}, {"uL", 1, 1, -3}, {"L", 1, 1, 3}}, false}
	InjectionVolume = Family{"a volume", "5 uL", "uL", []unit{{"uL", 1, 1, 0}, {"mL", 1, 1, 3}, {"nL", 1, 1, -3}}, false}
	Length          = Family{"a length", "100 mm", "mm", []unit{{"mm", 1, 1, 0}, {"cm", 1, 1, 1}, {"m", 1, 1, 3}, {"um", 1, 1, -3}}, false}
	Flow            = Family{"a flow", "0.4 mL/min", "mL/min", []unit{{"mL/min", 1, 1, 0}, {"uL/min", 1, 1, -3}}, false}
	Fraction        = Family{"a fraction", "15 %", "1", []unit{{"%", 1, 1, -2}}, true}
)

// Families by the name of their base unit, as struct tags write it.
var byTag = map[string]Family{"min": Time, "ng/mL": Concentration, "mL": Volume, "uL": InjectionVolume, "mm": Length, "mL/min": Flow, "fraction": Fraction}

// ForTag returns the family whose base unit has this name; "fraction" is that of fractions.
func ForTag(tag string) (Family, bool) {
	f, ok := byTag[tag]
	return f, ok
}

var (
	number   = regexp.MustCompile(`^[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d{1,3})?$`)
	quantity = regexp.MustCompile(`^([+-]?[0-9.][0-9.,]*(?:[eE][+-]?\d{1,3})?)\s*(.*)$`)
)

// Want says what the family accepts, for an error message.
func (f Family) Want() string {
	names := make([]string, 0, len(f.units))
	for _, u := range f.units {
		names = append(names, u.symbol)
	}
	if f.bare {
		return fmt.Sprintf("%s such as %q or a plain number", f.name, f.example)
	}
	return fmt.Sprintf("%s such as %q (units: %s)", f.name, f.example, strings.Join(names, ", "))
}

// Pattern is a regular expression (ECMA 262) for what the family accepts.
func (f Family) Pattern() string {
	names := make([]string, 0, len(f.units))
	for _, u := range f.units {
		name := regexp.QuoteMeta(u.symbol)
		if strings.HasPrefix(u.symbol, "u") {
			name = "[uµμ]" + name[1:]
		}
		names = append(names, strings.ReplaceAll(strings.ReplaceAll(name, "L", "[lL]"), "/", `\/`))
	}
	tail := `(` + strings.Join(names, "|") + `)`
	if f.bare {
		tail += "?"
	}
	return `^[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d{1,3})?\s*` + strings.ReplaceAll(tail, `\/`, "/") + `$`
}

// Parse reads a quantity into the family's base unit. The error says what was found and what would be accepted.
func (f Family) Parse(text string) (float64, error) {
	value, symbol, ok := split(text)
	if !ok {
		return 0, fmt.Errorf("got %q, want %s", text, f.Want())
	}
	if strings.Contains(value, ",") {
		return 0, fmt.Errorf("got %q, want %s, with a decimal point", text, f.Want())
	}
	if symbol == "" && f.bare {
		return ParseNumber(value)
	}
	for _, u := range f.units {
		if u.symbol == symbol {
			return scale(value, u)
		}
	}
	return 0, fmt.Errorf("got %q, want %s", text, f.Want())
}

// split takes a quantity apart; the symbol comes with "u" for both micro signs and "L" for the litre.
func split(text string) (value, symbol string, ok bool) {
	m := quantity.FindStringSubmatch(strings.TrimSpace(text))
	if m == nil {
		return "", "", false
	}
	return m[1], Symbol(m[2]), true
}

// Symbol writes a unit with "u" for both micro signs and "L" for the litre.
func Symbol(s string) string {
	s = strings.NewReplacer("µ", "u", "μ", "u").Replace(strings.TrimSpace(s))
	parts := strings.Split(s, "/")
	for i, p := range parts {
		switch p {
		case "l", "ml", "ul", "nl", "dl":
			parts[i] = p[:len(p)-1] + "L"
		}
	}
	return strings.Join(parts, "/")
}

// Has tells whether the family has a unit of this symbol.
func (f Family) Has(symbol string) bool {
	for _, u := range f.units {
		if u.symbol == Symbol(symbol) {
			return true
		}
	}
	return false
}

// ParseIn reads a plain decimal number that is in the given unit of the family.
func (f Family) ParseIn(text, symbol string) (float64, error) {
	for _, u := range f.units {
		if u.symbol == Symbol(symbol) {
			return scale(text, u)
		}
	}
	return 0, fmt.Errorf("got unit %q, want %s", symbol, f.Want())
}

// ParseNumber reads a plain decimal number: no other base, no underscores, no infinity.
func ParseNumber(text string) (float64, error) { return scale(text, unit{"", 1, 1, 0}) }

// scale is text·num/den·10^exp, rounded once.
func scale(text string, u unit) (float64, error) {
	if !number.MatchString(text) {
		return 0, fmt.Errorf("got %q, want a decimal number such as 12.5", text)
	}
	r, ok := new(big.Rat).SetString(strings.TrimSuffix(text, "."))
	if !ok {
		return 0, fmt.Errorf("got %q, want a decimal number such as 12.5", text)
	}
	v, _ := r.Mul(r, ratio(u)).Float64()
	if math.IsInf(v, 0) {
		return 0, fmt.Errorf("got %q, want a number within the range of a double", text)
	}
	return v, nil
}

func ratio(u unit) *big.Rat {
	r := big.NewRat(u.num, u.den)
	ten := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(u.exp, -u.exp))), nil)
	if u.exp < 0 {
		return r.Quo(r, new(big.Rat).SetInt(ten))
	}
	return r.Mul(r, new(big.Rat).SetInt(ten))
}

// In converts a value in the family's base unit into another of its units, for people; the shortest decimal of the value is
// scaled, so that 1200 ng/mL is 1.2 ug/mL.
func (f Family) In(value float64, symbol string) (float64, error) {
	for _, u := range f.units {
		if u.symbol != Symbol(symbol) {
			continue
		}
		r, ok := new(big.Rat).SetString(fmt.Sprintf("%v", value))
		if !ok {
			return 0, fmt.Errorf("%v cannot be converted", value)
		}
		v, _ := r.Quo(r, ratio(u)).Float64()
		return v, nil
	}
	return 0, fmt.Errorf("got unit %q, want %s", symbol, f.Want())
}

// Base is the symbol of the base unit.
func (f Family) Base() string { return f.base }

// Bare tells whether a number without a unit is accepted.
func (f Family) Bare() bool { return f.bare }
