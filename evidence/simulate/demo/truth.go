package demo

import "assaywrit/evidence/simulate"

// A compound of the example: what the simulated instrument and sample know about it.
type compound struct {
	id           string
	retention    float64 // min
	precursor    float64
	products     []float64 // quantifier first
	ratios       []float64 // areas over that of the quantifier
	response     float64   // counts·min of the quantifier for 1 ng/mL
	top          float64   // ng/mL in the highest calibrator
	standard     string    // internal standard
	standardIons [2]float64
	standardRT   float64
	standardConc float64 // ng/mL added
	inSample     float64 // ng/mL in the sample, before dilution
	neighbour    neighbour
}

// A neighbour is another substance of the matrix that the same transitions pick up; amounts are ng/mL in the vial, as if it
// answered like the compound itself.
type neighbour struct {
	name     string
	after    float64 // min behind the compound
	ratios   []float64
	inUrine  float64
	inSample float64
}

// In all urine something comes close behind salbutamol, in its quantifier alone. In the sample something looks like clenbuterol, but
// comes later and breaks into other shares.
var compounds = []compound{
	{id: "terbutaline", retention: 1.85, precursor: 226.2, products: []float64{152.1, 125.1, 107.1}, ratios: []float64{1, 0.42, 0.27}, response: 2200, top: 40,
		standard: "terbutaline-d9", standardIons: [2]float64{235.2, 153.1}, standardRT: 1.83, standardConc: 15, inSample: 17.5},
	{id: "salbutamol", retention: 2.30, precursor: 240.2, products: []float64{148.1, 222.1, 166.1}, ratios: []float64{1, 0.61, 0.33}, response: 80, top: 2000,
		standard: "salbutamol-d3", standardIons: [2]float64{243.2, 151.1}, standardRT: 2.285, standardConc: 500, inSample: 1450,
		neighbour: neighbour{"matrix substance behind salbutamol", 0.155, []float64{1, 0, 0}, 40, 70}},
	{id: "clenbuterol", retention: 3.62, precursor: 277.1, products: []float64{203.0, 259.1, 168.0}, ratios: []float64{1, 0.36, 0.24}, response: 21000, top: 4,
		standard: "clenbuterol-d9", standardIons: [2]float64{286.1, 204.0}, standardRT: 3.585, standardConc: 2, inSample: 0,
		neighbour: neighbour{"look-alike of clenbuterol", 0.135, []float64{1, 0.11, 0.63}, 0, 0.55}},
}

// Truth is what the sample of the example holds, in ng/mL, by analyte.
func Truth() map[string]float64 {
	t := map[string]float64{}
	for _, c := range compounds {
		t[c.id] = c.inSample
	}
	return t
}

// Peaks is how every peak of the example was made, injection by injection.
func Peaks() []simulate.Truth {
	b := simulated()
	var list []simulate.Truth
	for i := range b.Injections {
		list = append(list, b.Truth(i)...)
	}
	return list
}
