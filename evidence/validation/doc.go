// Package validation computes the figures of a method's validation from its table of results, and of its controls from their history.
//
// Appraise takes the rows of a validation table (runs × levels × replicates, reference materials, blanks, spikes before and after
// extraction, carry-over, stability) and gives repeatability, intermediate precision, bias, recovery, matrix effect, process
// efficiency, carry-over, stability and limits from blanks, each with its degrees of freedom and interval, and the components of
// uncertainty that a method refers to. Charts takes controls of earlier batches and gives control charts. Whether a figure is good
// enough is not asked here.
//
// Concentrations are in ng/mL, relative figures are fractions (0.05 is 5 %), responses are in the unit of the table. Intervals are
// two-sided with a probability of 95 %. All arithmetic is bit-reproducible (package strictmath). Nothing that is computed here leaves
// as NaN or infinite: a figure that a table does not allow is absent, and a flag says why.
//
// Read reads a validation table, as spreadsheet programs save it. Its columns, in any order; those that a row's kind does not need
// stay empty:
//
//	kind,run,level,replicate,nominal [ng/mL],found [ng/mL]
//	precision,day 1,low,1,100,98.2
//	precision,day 1,low,2,100,101.4
//	precision,day 2,low,1,100,104.0
//	precision,day 2,low,2,100,103.1
//
// ReadHistory reads a table of controls:
//
//	batch,level,found [ng/mL]
//	B-1,low,98.2
//	B-2,low,101.4
package validation

// confidence is the probability of every interval.
const confidence = 0.95

// An Interval is a two-sided confidence interval.
type Interval struct {
	Low  float64 `json:"low"`
	High float64 `json:"high"`
}
