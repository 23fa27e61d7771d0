package fullscan

import (
	"sync"
	"sync/atomic"

	"assaywrit/evidence/trace"
)

// Combine says what becomes of several points in one window.
type Combine string

const (
	Sum     Combine = "sum"     // their sum
	Maximum Combine = "maximum" // the highest of them
)

// An Ion is one ion trace to extract.
type Ion struct {
	Window  Window
	Combine Combine
}

// Traces holds ion traces over the same scans.
type Traces struct {
	TimeMin   []float64
	Intensity [][]float64 // for each ion; 0 where a scan has no point in its window
}

// Extract makes the traces of the ions from the chosen scans: m/z are decoded for these alone, intensities only where a window has a
// point. workers goroutines share the scans, at least one. The first scan that cannot be read, by its place in the file, gives the
// error.
func Extract(scans trace.Scans, f Filter, ions []Ion, workers int) (*Traces, error) {
	chosen, err := f.choose(scans)
	if err != nil {
		return nil, err
	}
	t := &Traces{TimeMin: make([]float64, len(chosen)), Intensity: make([][]float64, len(ions))}
	for i := range ions {
		t.Intensity[i] = make([]float64, len(chosen))
	}
	err = each(scans, chosen, workers, func(r trace.ScanReader, at, scan int) error {
		t.TimeMin[at] = scans.Scan(scan).TimeMin
		return t.take(r, at, scan, ions)
	})
	if err != nil {
		return nil, err
	}
	return t, nil
}

// each calls work for every chosen scan, on several goroutines, and returns the error of the first that failed.
func each(scans trace.Scans, chosen []int, workers int, work func(r trace.ScanReader, at, scan int) error) error {
	const batch = 16
	workers = max(1, min(workers, (len(chosen)+batch-1)/batch))
	failed := make([]error, workers)
	failedAt := make([]int, workers)
	var next atomic.Int64
	var group sync.WaitGroup
	for w := range workers {
		group.Go(func() {
			r := scans.Open()
			for {
				from := int(next.Add(batch)) - batch
				if from >= len(chosen) {
					return
				}
				for at := from; at < min(from+batch, len(chosen)); at++ {
					if err := work(r, at, chosen[at]); err != nil {
						failed[w], failedAt[w] = err, at
						next.Store(int64(len(chosen))) // batches before this one are under way and finish
						return
					}
				}
			}
		})
	}
	group.Wait()
	first := -1
	for w, err := range failed {
		if err != nil && (first < 0 || failedAt[w] < failedAt[first]) {
			first = w
		}
	}
	if first < 0 {
		return nil
	}
	return failed[first]
}

// take fills the place of one scan in every trace.
func (t *Traces) take(r trace.ScanReader, at, scan int, ions []Ion) error {
	mz, err := r.MZ(scan)
	if err != nil {
		return err
	}
	var y []float64
	for i, ion := range ions {
		from, to := between(mz, ion.Window)
		if from == to {
			continue
		}
		if y == nil {
			if y, err = r.Intensity(scan); err != nil {
				return err
			}
		}
		t.Intensity[i][at] = combine(y[from:to], ion.Combine)
	}
	return nil
}

func combine(y []float64, how Combine) float64 {
	v := y[0]
	for _, x := range y[1:] {
		if how == Maximum {
			v = max(v, x)
		} else {
			v += x
		}
	}
	return v
}

// between returns the points inside a window, of m/z that do not decrease.
func between(mz []float64, w Window) (from, to int) {
	from = search(mz, w.Low, false)
	to = from + search(mz[from:], w.High, true)
	return from, to
}

// search returns the number of values below x, or up to and with it.
func search(v []float64, x float64, with bool) int {
	low, high := 0, len(v)
	for low < high {
		mid := (low + high) / 2
		if v[mid] < x || with && v[mid] == x {
			low = mid + 1
		} else {
			high = mid
		}
	}
	return low
}
