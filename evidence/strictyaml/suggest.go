package strictyaml

import (
	"fmt"
	"strings"
)

// Suggest asks whether one of the options was meant that differs from the name in a letter or two, in capitals or in hyphens; it
// is empty where none is near. Options with other digits are never near: raw/009.mzML is no misspelling of raw/010.mzML.
func Suggest(name string, options []string) string {
	best, bestAway := "", 1+max(1, min(3, len(name)/3))
	for _, o := range options {
		d := distance(name, o)
		if loose(name) == loose(o) {
			d = 0
		}
		if d < bestAway && o != name && digits(o) == digits(name) {
			best, bestAway = o, d
		}
	}
	if best == "" {
		return ""
	}
	return fmt.Sprintf("did you mean %q?", best)
}

func digits(s string) string {
	return strings.Map(func(r rune) rune {
		if r < '0' || r > '9' {
			return -1
		}
		return r
	}, s)
}

func loose(s string) string {
	return strings.NewReplacer("-", "", "_", "", " ", "").Replace(strings.ToLower(s))
}

// nearKey suggests the key that was meant: one that is near, or one without the unit that was put behind it.
func nearKey(name string, fields []field) string {
	names := make([]string, len(fields))
	for i, f := range fields {
		names[i] = f.key
		if f.family != nil && strings.HasPrefix(name, f.key+"_") {
			return fmt.Sprintf("the key is %q, and the unit stands in the value: %s: %s", f.key, f.key, f.family.Example())
		}
	}
	return Suggest(name, names)
}

// distance is the number of letters to insert, delete, replace, or exchange with their neighbour (optimal string alignment). Long
// names are not compared.
func distance(a, b string) int {
	const long = 64
	if len(a) > long || len(b) > long {
		return max(len(a), len(b))
	}
	rows := make([][]int, len(a)+1)
	for i := range rows {
		rows[i] = make([]int, len(b)+1)
		rows[i][0] = i
	}
	for j := range rows[0] {
		rows[0][j] = j
	}
	for i := 1; i <= len(a); i++ {
		for j := 1; j <= len(b); j++ {
			cost := rows[i-1][j-1]
			if a[i-1] != b[j-1] {
				cost++
			}
			rows[i][j] = min(cost, rows[i-1][j]+1, rows[i][j-1]+1)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				rows[i][j] = min(rows[i][j], rows[i-2][j-2]+1)
			}
		}
	}
	return rows[len(a)][len(b)]
}
