package jcamp

import "bytes"

// A label is the label of a data record that this reader uses.
type label int

const (
	labelOther label = iota
	labelTitle
	labelVersion
	labelDataType
	labelDataClass
	labelOrigin
	labelOwner
	labelCAS
	labelFormula
	labelSample
	labelInstrument
	labelDate
	labelTime
	labelLongDate
	labelBlocks
	labelXUnits
	labelYUnits
	labelXLabel
	labelXFactor
	labelYFactor
	labelFirstX
	labelLastX
	labelDeltaX
	labelFirstY
	labelLastY
	labelMaxY
	labelMinY
	labelPoints
	labelVarName // to labelLast: the lists of variables
	labelSymbol
	labelVarDim
	labelUnits
	labelFactor
	labelFirst
	labelLast
	labelPage
	labelRetention
	labelTIC
	labelScanNumber
	labelIonization
	labelMassRange
	labelEndNTuples
	labelEnd
	labelXYData
	labelXYPoints
	labelPeakTable
	labelPeakAssignments
	labelDataTable
	labels // how many
)

// names are the labels in the form in which labels are compared: in capitals, without blanks, dashes, slashes and underscores.
var names = map[string]label{
	"TITLE": labelTitle, "JCAMPDX": labelVersion, "DATATYPE": labelDataType, "DATACLASS": labelDataClass, "ORIGIN": labelOrigin,
	"OWNER": labelOwner, "CASREGISTRYNO": labelCAS, "MOLFORM": labelFormula, "SAMPLEDESCRIPTION": labelSample,
	"SPECTROMETERDATASYSTEM": labelInstrument, "DATE": labelDate, "TIME": labelTime, "LONGDATE": labelLongDate, "BLOCKS": labelBlocks,
	"XUNITS": labelXUnits, "YUNITS": labelYUnits, "XLABEL": labelXLabel, "XFACTOR": labelXFactor, "YFACTOR": labelYFactor,
	"FIRSTX": labelFirstX, "LASTX": labelLastX, "DELTAX": labelDeltaX, "FIRSTY": labelFirstY, "LASTY": labelLastY, "MAXY": labelMaxY,
	"MINY": labelMinY, "NPOINTS": labelPoints, "VARNAME": labelVarName, "SYMBOL": labelSymbol, "VARDIM": labelVarDim,
	"UNITS": labelUnits, "FACTOR": labelFactor, "FIRST": labelFirst, "LAST": labelLast, "PAGE": labelPage,
	".RETENTIONTIME": labelRetention, "RETENTIONTIME": labelRetention, ".TOTALIONCURRENT": labelTIC, ".TIC": labelTIC, "TIC": labelTIC,
	".SCANNUMBER": labelScanNumber, "SCANNUMBER": labelScanNumber, ".IONIZATIONMODE": labelIonization, "IONIZATIONMODE": labelIonization,
	".MASSRANGE": labelMassRange, "MASSRANGE": labelMassRange, "ENDNTUPLES": labelEndNTuples, "END": labelEnd,
	"XYDATA": labelXYData, "XYPOINTS": labelXYPoints, "PEAKTABLE": labelPeakTable, "PEAKASSIGNMENTS": labelPeakAssignments,
	"DATATABLE": labelDataTable,
}

// spelt is how the standard writes the labels that messages name.
var spelt = map[label]string{
	labelPoints: "##NPOINTS=", labelFirstX: "##FIRSTX=", labelLastX: "##LASTX=", labelDeltaX: "##DELTAX=", labelXFactor: "##XFACTOR=",
	labelYFactor: "##YFACTOR=", labelFirstY: "##FIRSTY=", labelLastY: "##LASTY=", labelMaxY: "##MAXY=", labelMinY: "##MINY=",
	labelRetention: "##.RETENTION TIME=", labelTIC: "##TIC=", labelBlocks: "##BLOCKS=", labelDataType: "##DATA TYPE=",
	labelXUnits: "##XUNITS=", labelYUnits: "##YUNITS=", labelSymbol: "##SYMBOL=", labelVarDim: "##VAR_DIM=", labelUnits: "##UNITS=",
	labelFactor: "##FACTOR=", labelFirst: "##FIRST=", labelLast: "##LAST=", labelVarName: "##VAR_NAME=", labelPage: "##PAGE=",
	labelXYData: "##XYDATA=", labelXYPoints: "##XYPOINTS=", labelPeakTable: "##PEAK TABLE=", labelPeakAssignments: "##PEAK ASSIGNMENTS=",
	labelDataTable: "##DATA TABLE=",
}

// once are the labels that may have one value only for a table: a second one would change what the numbers mean.
var once = map[label]bool{
	labelDataType: true, labelXUnits: true, labelYUnits: true, labelXFactor: true, labelYFactor: true, labelFirstX: true, labelLastX: true,
	labelDeltaX: true, labelPoints: true, labelSymbol: true, labelVarDim: true, labelUnits: true, labelFactor: true, labelFirst: true,
	labelLast: true, labelPage: true, labelRetention: true,
}

// ofTable are the labels that are said of one table and not of the next in the same block.
var ofTable = [...]label{labelPoints, labelFirstX, labelLastX, labelDeltaX, labelFirstY, labelLastY, labelMaxY, labelMinY, labelRetention,
	labelTIC, labelScanNumber}

// longestLabel is more than any label that is used, in normal form.
const longestLabel = 32

// cutLabel splits a record, which begins with ##, at its equals sign, which must stand in the same line. ok is false where there is no
// record or no equals sign; value is then what follows the ##.
func cutLabel(record []byte) (l label, value []byte, ok bool) {
	if !bytes.HasPrefix(record, []byte("##")) {
		return labelOther, record, false
	}
	value = record[2:]
	var normal [longestLabel]byte
	n := 0
	for i, c := range value {
		switch {
		case c == '=':
			return names[string(normal[:n])], value[i+1:], true
		case c == '\n' || c == '\r':
			return labelOther, value, false
		case c == ' ' || c == '\t' || c == '-' || c == '/' || c == '_':
			continue
		case c >= 'a' && c <= 'z':
			c -= 'a' - 'A'
		}
		if n == longestLabel-1 { // then it can be none of the known ones
			normal[0] = '?'
			continue
		}
		normal[n] = c
		n++
	}
	return labelOther, value, false
}
