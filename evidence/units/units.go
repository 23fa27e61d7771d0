// Package units reads quantities as people write them, "150 ng/mL" or "2.31 min", and writes them back.
//
// A quantity is kept in the base unit of its family: minutes, ng/mL, mL, uL (injection volumes), mm, mL/min, and 1 for
// fractions. The decimal text is scaled by powers of ten (and by 60) before it becomes binary, so "1.2 ug/mL" is exactly 1200 and
// every result is the double nearest to what was written. A quantity without a unit is refused, and so is one of another
// family: ng/mL cannot be taken for ug/mL.
//
// Numbers are plain decimals: an optional sign, digits, and a point with digits on both of its sides (a naked ".5" is easily
// read as 5), and an optional exponent of ten. No other base, no leading zeros, no separators of thousands, no decimal comma.
// Symbols follow the SI and are case-sensitive, except that the litre is taken as l or L (The International System of Units, 9th
// ed., table 8: both are its symbols); micro is u, µ (U+00B5) or μ (U+03BC). A fraction is written in per cent, or below 1 as a bare
// number that begins with 0: a bare "1" could be meant as 1 % or as the whole and is refused.
package units

import (
	"fmt"
	"regexp"
	"strings"
)

// A Family is a kind of quantity, with its units.
type Family struct {
	name    string // "a mass concentration"
	example string // "150 ng/mL"
	base    string
	units   []unit // in the order in which they are offered
	bare    bool   // a number below 1 without a unit is accepted
}

// unit: one of it is num/den · 10^exp of the base unit.
type unit struct {
	symbol   string
	num, den int64
	exp      int
}

// The families.
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

// Base is the symbol of the base unit.
func (f Family) Base() string { return f.base }

// Bare tells whether a number without a unit is accepted.
func (f Family) Bare() bool { return f.bare }

// Example is a quantity of the family.
func (f Family) Example() string { return f.example }

// Has tells whether the family has a unit of this symbol.
func (f Family) Has(symbol string) bool {
	_, ok := f.unit(symbol)
	return ok
}

func (f Family) unit(symbol string) (unit, bool) {
	symbol = Symbol(symbol)
	for _, u := range f.units {
		if u.symbol == symbol {
			return u, true
		}
	}
	return unit{}, false
}

// Symbol writes a unit with "u" for both micro signs and "L" for the litre.
func Symbol(s string) string {
	s = strings.NewReplacer("µ", "u", "μ", "u").Replace(strings.TrimSpace(s))
	parts := strings.Split(s, "/")
	for i, p := range parts {
		switch p {
		case "l", "ml", "ul", "nl":
			parts[i] = p[:len(p)-1] + "L"
		}
	}
	return strings.Join(parts, "/")
}

// Want says what the family accepts, for an error message.
func (f Family) Want() string {
	if f.bare {
		return fmt.Sprintf("%s such as %q or %q", f.name, f.example, "0.15")
	}
	names := make([]string, 0, len(f.units))
	for _, u := range f.units {
		names = append(names, u.symbol)
	}
	return fmt.Sprintf("%s such as %q (units: %s)", f.name, f.example, strings.Join(names, ", "))
}

// The grammar, in what Go's regular expressions and those of ECMA 262 have in common.
const (
	numberPattern = `[+-]?(0|[1-9]\d*)(\.\d+)?([eE][+-]?\d{1,3})?`
	barePattern   = `[+-]?0(\.\d+)?`
	gapPattern    = `[ \u00a0\u2009\u202f]*` // blanks, thin and unbreakable ones too
)

// SymbolPattern is a regular expression (ECMA 262), without anchors, for the symbols of the family.
func (f Family) SymbolPattern() string {
	names := make([]string, 0, len(f.units))
	for _, u := range f.units {
		name := u.symbol
		if strings.HasPrefix(name, "u") {
			name = "[uµμ]" + name[1:]
		}
		names = append(names, strings.ReplaceAll(name, "L", "[lL]"))
	}
	return "(" + strings.Join(names, "|") + ")"
}

// Pattern is a regular expression (ECMA 262) for the texts that the family accepts.
func (f Family) Pattern() string {
	all := numberPattern + gapPattern + f.SymbolPattern()
	if f.bare {
		all = "(" + barePattern + "|" + all + ")"
	}
	return "^" + strings.NewReplacer(`\u00a0`, "\u00a0", `\u2009`, "\u2009", `\u202f`, "\u202f").Replace(all) + "$"
}

var (
	number   = regexp.MustCompile("^" + numberPattern + "$")
	bare     = regexp.MustCompile("^" + barePattern + "$")
	quantity = regexp.MustCompile(`^([+-]?[0-9.,]*[0-9.](?:[eE][+-]?\d+)?)[ \x{00a0}\x{2009}\x{202f}]*(.*)$`)
)

// Hint says what is wrong with a text that Parse refuses, or nothing where that is not clear.
func (f Family) Hint(text string) string {
	if m := quantity.FindStringSubmatch(strings.TrimSpace(text)); m != nil {
		symbol := Symbol(m[2])
		_, known := f.unit(symbol)
		switch {
		case strings.Contains(m[1], ","):
			return "write a decimal point, and no separators of thousands"
		case !number.MatchString(m[1]) && (known || f.bare):
			return NumberHint(m[1])
		case symbol == "" && f.bare:
			return fmt.Sprintf("write %s %% if that is meant, or 0.… below 1", m[1])
		case symbol == "":
			return fmt.Sprintf("write the unit after the number, such as %s %s", m[1], f.units[0].symbol)
		}
		for _, u := range f.units {
			if strings.EqualFold(u.symbol, symbol) {
				return fmt.Sprintf("capital and small letters differ in units: write %s if that is meant", u.symbol)
			}
		}
	}
	return ""
}

// NumberHint says what is wrong with a text that ParseNumber refuses, or nothing where that is not clear.
func NumberHint(text string) string {
	digits := strings.TrimLeft(text, "+-")
	switch {
	case strings.Contains(text, ","):
		return "write a decimal point, and no separators of thousands"
	case strings.HasPrefix(digits, "."):
		return "write a zero before the decimal point"
	case strings.HasSuffix(digits, "."):
		return "write a digit after the decimal point, or leave the point out"
	case len(digits) > 1 && digits[0] == '0' && digits[1] >= '0' && digits[1] <= '9':
		return "leave out the zeros in front"
	}
	return ""
}
