package uncertainty

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"sync"
	"sync/atomic"

	"assaywrit/evidence/strictmath"
)

// MonteCarloAlgorithm names the propagation of distributions; a published version never changes its results.
const MonteCarloAlgorithm = "gum-s1-monte-carlo@1"

// blockTrials is the number of trials in a block: what JCGM 101:2008, 7.9.4, takes at a time for coverage probabilities up to 0.99.
const blockTrials = 10_000

// maxTrials bounds the memory for the results of the trials to 400 MB.
const maxTrials = 50_000_000

// A Run says how many trials to make, and from which seed.
type Run struct {
	Seed        uint64
	Probability float64 // coverage probability of the intervals, 0.5 to 0.99
	// Trials of a fixed run: at least 100/(1−Probability), at most 50 million. Of an adaptive run the most that are made; whole
	// blocks of 10,000.
	Trials int
	// Digits above 0 makes the run adaptive: it ends when twice the standard deviation of the mean, of the standard uncertainty and of
	// both ends of the symmetric interval is at most the tolerance of the standard uncertainty with that many significant digits.
	Digits int
	// Workers is the number of goroutines; 0 is one for each processor. The result does not depend on it.
	Workers int
}

// A Coverage is a coverage interval.
type Coverage struct {
	Low  float64 `json:"low"`
	High float64 `json:"high"`
}

// A Simulation is what the Monte Carlo method makes of a model.
type Simulation struct {
	Algorithm   string   `json:"algorithm"`
	Generator   string   `json:"generator"`
	Seed        uint64   `json:"seed"`
	Trials      int      `json:"trials"`
	Mean        float64  `json:"mean"`
	StdU        float64  `json:"std_u"`
	Probability float64  `json:"coverage_probability"`
	Symmetric   Coverage `json:"symmetric_interval"` // as much probability on either side
	Shortest    Coverage `json:"shortest_interval"`
	// Stable tells of an adaptive run whether it ended for the tolerance (Digits, Tolerance) or for the number of trials.
	Stable    *bool    `json:"stable,omitempty"`
	Digits    int      `json:"digits,omitempty"`
	Tolerance *float64 `json:"tolerance,omitempty"`
}

// Simulate propagates the distributions of the inputs through the model: trials in blocks, each drawn from a stream of its own (see
// GeneratorName), so that the same seed gives the same bits on every machine whatever the number of workers. Inputs with correlations
// must be normal and are drawn jointly, by the Cholesky factor of their correlation matrix.
//
// Errors name the input that cannot be used, the setting of the run, or the first trial for which the model gives no finite value.
//
// Source: JCGM 101:2008 (GUM Supplement 1), clause 7 (from memory): 7.6 mean and standard deviation, 7.7 intervals, 7.9 adaptive
// procedure.
func Simulate(f Model, inputs []Input, correlations []Correlation, run Run) (Simulation, error) {
	if err := checkInputs(inputs); err != nil {
		return Simulation{}, err
	}
	if err := run.check(); err != nil {
		return Simulation{}, err
	}
	if f == nil {
		return Simulation{}, errors.New("a simulation without a model")
	}
	r, err := correlationMatrix(inputs, correlations)
	if err != nil {
		return Simulation{}, err
	}
	s, err := newSampler(inputs, r)
	if err != nil {
		return Simulation{}, err
	}
	e := &engine{f: f, sampler: s, seed: run.Seed, centre: f(values(inputs)), workers: run.Workers}
	if math.IsNaN(e.centre) || math.IsInf(e.centre, 0) {
		return Simulation{}, fmt.Errorf("the model gives %g for the inputs' values: want a finite value", e.centre)
	}
	if e.workers <= 0 {
		e.workers = runtime.GOMAXPROCS(0)
	}
	result := Simulation{Algorithm: MonteCarloAlgorithm, Generator: GeneratorName, Seed: run.Seed, Probability: run.Probability}
	if run.Digits > 0 {
		err = e.adapt(run, &result)
	} else {
		err = e.extend(run.Trials)
	}
	if err != nil {
		return Simulation{}, err
	}
	return result, e.summarise(&result)
}

func (r Run) check() error {
	if !(r.Probability >= 0.5 && r.Probability <= 0.99) {
		return fmt.Errorf("a coverage probability of %g: want 0.5 to 0.99", r.Probability)
	}
	least := int(math.Ceil(100/(1-r.Probability) - 1e-6))
	if r.Digits > 0 {
		least = 2 * blockTrials
	}
	if r.Trials < least || r.Trials > maxTrials {
		return fmt.Errorf("%d trials: want %d to %d", r.Trials, least, maxTrials)
	}
	if r.Digits < 0 || r.Digits > 4 {
		return fmt.Errorf("a tolerance of %d significant digits: want 1 to 4, or 0 for a fixed number of trials", r.Digits)
	}
	return nil
}

// A block is one set of trials that were drawn from one stream.
type block struct {
	y       []float64 // sorted
	sum, sq float64   // of y − centre, and of its square
	err     error
}

type engine struct {
	f       Model
	sampler *sampler
	seed    uint64
	centre  float64 // the model at the inputs' values: sums of differences from it do not cancel
	workers int
	blocks  []block
}

// extend makes trials until there are as many, and returns the error of the first block that has one.
func (e *engine) extend(trials int) error {
	first := len(e.blocks)
	for have := first * blockTrials; have < trials; have += blockTrials {
		e.blocks = append(e.blocks, block{y: make([]float64, min(blockTrials, trials-have))})
	}
	e.parallel(len(e.blocks)-first, func() func(int) {
		g := &generator{source: rand.NewChaCha8([32]byte{})}
		x, z := make([]float64, len(e.sampler.inputs)), make([]float64, len(e.sampler.joint))
		return func(i int) { e.fill(first+i, g, x, z) }
	})
	for i := range e.blocks[first:] {
		if err := e.blocks[first+i].err; err != nil {
			return err
		}
	}
	return nil
}

// parallel shares n tasks among the workers; each worker has its own function, made by start.
func (e *engine) parallel(n int, start func() func(i int)) {
	workers := min(e.workers, n)
	if workers <= 1 {
		if n > 0 {
			task := start()
			for i := range n {
				task(i)
			}
		}
		return
	}
	var next atomic.Int64
	var wait sync.WaitGroup
	for range workers {
		wait.Go(func() {
			task := start()
			for i := int(next.Add(1)) - 1; i < n; i = int(next.Add(1)) - 1 {
				task(i)
			}
		})
	}
	wait.Wait()
}

// fill makes the trials of block i.
func (e *engine) fill(i int, g *generator, x, z []float64) {
	g.seed(e.seed, uint64(i))
	b := &e.blocks[i]
	var sum, sq float64
	for k := range b.y {
		e.sampler.draw(g, x, z)
		v := e.f(x)
		if math.IsNaN(v) || math.IsInf(v, 0) {
			b.err = fmt.Errorf("trial %d: the model gives %g for inputs of %g: want finite values wherever the distributions reach", i*blockTrials+k+1, v, x)
			return
		}
		d := v - e.centre
		sum += d
		sq += float64(d * d)
		b.y[k] = v + 0 // no negative zero: the order of the two would depend on the sorting
	}
	b.sum, b.sq = sum, sq
	slices.Sort(b.y)
}

// moments are the mean and the standard deviation of some blocks.
func (e *engine) moments(blocks []block) (mean, sd float64, err error) {
	sums, squares := make([]float64, len(blocks)), make([]float64, len(blocks))
	n := 0
	for i, b := range blocks {
		sums[i], squares[i] = b.sum, b.sq
		n += len(b.y)
	}
	shift := strictmath.Sum(sums) / float64(n)
	variance := (strictmath.Sum(squares) - float64(float64(n)*shift*shift)) / float64(n-1)
	mean, sd = e.centre+shift, math.Sqrt(max(variance, 0))
	if math.IsNaN(mean) || math.IsInf(mean, 0) || math.IsNaN(sd) || math.IsInf(sd, 0) {
		return 0, 0, errors.New("the results of the trials are too far apart for numbers")
	}
	return mean, sd, nil
}

// summarise fills the result from all blocks.
func (e *engine) summarise(result *Simulation) (err error) {
	if result.Mean, result.StdU, err = e.moments(e.blocks); err != nil {
		return err
	}
	y := e.sorted()
	result.Trials = len(y)
	result.Symmetric, result.Shortest = intervals(y, result.Probability)
	return nil
}

// sorted merges the blocks, pair by pair.
func (e *engine) sorted() []float64 {
	runs := make([][]float64, len(e.blocks))
	for i, b := range e.blocks {
		runs[i] = b.y
	}
	for len(runs) > 1 {
		merged := make([][]float64, (len(runs)+1)/2)
		e.parallel(len(merged), func() func(int) {
			return func(i int) {
				if 2*i+1 == len(runs) {
					merged[i] = runs[2*i]
					return
				}
				merged[i] = merge(runs[2*i], runs[2*i+1])
			}
		})
		runs = merged
	}
	return runs[0]
}

func merge(a, b []float64) []float64 {
	out := make([]float64, 0, len(a)+len(b))
	for len(a) > 0 && len(b) > 0 {
		if b[0] < a[0] {
			out, b = append(out, b[0]), b[1:]
		} else {
			out, a = append(out, a[0]), a[1:]
		}
	}
	return append(append(out, a...), b...)
}

// intervals are the probabilistically symmetric and the shortest coverage interval of sorted results (JCGM 101:2008, 7.7.2: q is the
// whole number nearest to pM, r is (M−q)/2 or the whole number below (M−q+1)/2; results are counted from 1).
func intervals(y []float64, p float64) (symmetric, shortest Coverage) {
	m := len(y)
	q := int(math.Floor(float64(p*float64(m)) + 0.5))
	q = min(q, m-1)
	r := max((m-q+1)/2, 1)
	symmetric = Coverage{y[r-1], y[r+q-1]}
	shortest = Coverage{y[0], y[q]}
	for i := 1; i+q < m; i++ {
		if y[i+q]-y[i] < shortest.High-shortest.Low {
			shortest = Coverage{y[i], y[i+q]}
		}
	}
	return symmetric, shortest
}
