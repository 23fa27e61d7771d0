package mzml

import "assaywrit/evidence/trace"

// Accessions of the PSI-MS vocabulary (psi-ms.obo 4.1.257) and of the Unit Ontology that decide something here.
const (
	accFloat64 = "MS:1000523"
	accFloat32 = "MS:1000521"
	accInt64   = "MS:1000522"
	accInt32   = "MS:1000519"

	accZlib  = "MS:1000574"
	accPlain = "MS:1000576"

	accTime       = "MS:1000595"
	accIntensity  = "MS:1000515"
	accMZ         = "MS:1000514"
	accWavelength = "MS:1000617"
	unitSecond    = "UO:0000010"
	unitMinute    = "UO:0000031"

	accLevel     = "MS:1000511"
	accCentroid  = "MS:1000127"
	accProfile   = "MS:1000128"
	accScanStart = "MS:1000016"
	accTotalIon  = "MS:1000285"
	accWindowLow = "MS:1000501" // scan window lower limit
	accWindowTop = "MS:1000500" // scan window upper limit

	accTarget   = "MS:1000827" // isolation window target m/z
	accSelected = "MS:1000744" // selected ion m/z
	accNegative = "MS:1000129"
	accPositive = "MS:1000130"

	accModel  = "MS:1000031" // instrument model: states one by its value only
	accSerial = "MS:1000529"
	accTool   = "MS:1000799" // custom unreleased software tool: states one by its value only
)

// numbers are the kinds of number that are read.
var numbers = map[string]number{accFloat64: float64Number, accInt64: int64Number, accFloat32: float32Number, accInt32: int32Number}

// contents are the arrays that are read.
var contents = map[string]content{accTime: timeContent, accIntensity: intensityContent, accMZ: mzContent, accWavelength: wavelengthContent}

// presses are the compressions of MS-Numpress, alone and with zlib.
var presses = map[string]struct {
	press press
	zlib  bool
}{
	"MS:1002312": {linear, false}, "MS:1002313": {positiveInteger, false}, "MS:1002314": {shortLoggedFloat, false},
	"MS:1002746": {linear, true}, "MS:1002747": {positiveInteger, true}, "MS:1002748": {shortLoggedFloat, true},
}

// unreadNumbers are kinds of numbers known by accession and not read.
var unreadNumbers = map[string]string{"MS:1000520": "16-bit floats", "MS:1001479": "strings"}

// kindsByAccession are the chromatogram types. What is not here is trace.Other.
var kindsByAccession = map[string]trace.Kind{
	"MS:1000235": trace.TIC,
	"MS:1000627": trace.SIM,   // selected ion current
	"MS:1000628": trace.Other, // base peak
	"MS:1000810": trace.Other, // ion current
	"MS:1000811": trace.Other, // electromagnetic radiation
	"MS:1000812": trace.Absorption,
	"MS:1000813": trace.Other, // emission
	"MS:1001472": trace.SIM,
	"MS:1001473": trace.SRM,
	"MS:1003019": trace.Other, // pressure
	"MS:1003020": trace.Other, // flow rate
}

// unreadCompressions are known by accession and not read.
var unreadCompressions = map[string]string{
	"MS:1003780": "zstd",
	"MS:1003781": "byte-shuffled zstd",
	"MS:1003782": "dictionary-encoded zstd",
	"MS:1003783": "MS-Numpress linear prediction with zstd",
	"MS:1003784": "MS-Numpress positive integer with zstd",
	"MS:1003785": "MS-Numpress short logged float with zstd",
}

// auxiliaryArrays record the pump or the oven instead of a detector.
var auxiliaryArrays = map[string]string{"MS:1000820": "flow rate", "MS:1000821": "pressure", "MS:1000822": "temperature"}

// relativeUnits are intensities that were scaled trace by trace: abundances can no longer be compared between traces.
var relativeUnits = map[string]string{"MS:1000132": "percent of base peak", "MS:1000905": "percent of base peak times 100"}

// intensityUnits are units other than counts, as people write them.
var intensityUnits = map[string]string{"UO:0000269": "AU", "MS:1000814": "counts/s", "UO:0000218": "V", "UO:0000247": "mV"}
