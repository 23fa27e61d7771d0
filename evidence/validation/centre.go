package validation

import (
	"fmt"
	"math/big"
	"strings"

	"assaywrit/evidence/trace"
)

// Centre subtracts the first of some decimal numbers from all of them, exactly, before they become binary: numbers with more constant
// leading digits than a double holds beside their varying ones keep these, 1000000000000.4 for instance. What differs from the first
// number by v comes back as the double nearest to v. A sum of squares about the mean is the same for the differences. The error names
// the number that is no plain decimal, or one whose exponent is beyond ±400.
func Centre(decimals []string) ([]float64, error) {
	var first *big.Rat
	out := make([]float64, len(decimals))
	for i, text := range decimals {
		// The limits on length and value bound what the exact form takes.
		v, ok := trace.Decimal(text)
		if !ok || len(text) > 64 || v == 0 && strings.ContainsAny(text, "123456789") {
			return nil, fmt.Errorf("number %d: got %q, want a plain decimal of at most 64 characters", i+1, text)
		}
		exact := new(big.Rat)
		if v != 0 {
			if _, ok := exact.SetString(text); !ok {
				return nil, fmt.Errorf("number %d: got %q, want a plain decimal", i+1, text)
			}
		}
		if first == nil {
			first = exact
		}
		out[i], _ = new(big.Rat).Sub(exact, first).Float64()
	}
	return out, nil
}
