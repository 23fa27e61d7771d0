package peak

import "sync"

// A workspace holds the slices that one call of Detect needs, so that the next call can use them again.
type workspace struct {
	smooth, residual, scratch []float64
	quiet                     []bool
	tops                      []top
}

var workspaces = sync.Pool{New: func() any { return new(workspace) }}

// resize returns s with length n; what it holds is not cleared.
func resize[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}

// nth returns the value that would stand at index k if v were sorted; v is put in another order. Its time grows with the
// length of v (quickselect with the median of three).
func nth(v []float64, k int) float64 {
	lo, hi := 0, len(v)-1
	for lo < hi {
		pivot := median3(v[lo], v[lo+(hi-lo)/2], v[hi])
		i, j := lo, hi
		for i <= j {
			for v[i] < pivot {
				i++
			}
			for v[j] > pivot {
				j--
			}
			if i <= j {
				v[i], v[j] = v[j], v[i]
				i++
				j--
			}
		}
		switch {
		case k <= j:
			hi = j
		case k >= i:
			lo = i
		default:
			return v[k]
		}
	}
	return v[lo]
}

func median3(a, b, c float64) float64 { return max(min(a, b), min(max(a, b), c)) }
