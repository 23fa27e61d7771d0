package render

import "image/color"

// Colours. Nothing is told by colour alone: a word, a sign, a line style or a place on the page says it too, and each is of another
// lightness, so that a copy in grey reads the same.
var (
	ink    = color.RGBA{0x1c, 0x24, 0x2e, 0xff}
	soft   = color.RGBA{0x55, 0x60, 0x6c, 0xff} // what stands in the second row
	rule   = color.RGBA{0xb4, 0xbd, 0xc7, 0xff} // lines between things
	shade  = color.RGBA{0xec, 0xef, 0xf2, 0xff} // grounds
	signal = color.RGBA{0x12, 0x4e, 0x82, 0xff} // what was measured, and places to go to
	tint   = color.RGBA{0xc9, 0xdd, 0xee, 0xff} // area under a peak or a curve
	band   = color.RGBA{0xe3, 0xe1, 0xdb, 0xff} // ranges that are accepted, or left open
	accent = color.RGBA{0x9a, 0x3d, 0x08, 0xff} // limits, baselines, what was not met
	paper  = color.RGBA{0xff, 0xff, 0xff, 0xff}
)

// Sizes of type, points.
const (
	sizeTitle = 25
	sizeH1    = 16
	sizeH2    = 11.5
	sizeBody  = 9.5
	sizeTable = 8
	sizeSmall = 7.5
	sizeChart = 6.8
)

// Page geometry, millimetres: A4 upright throughout, since places that links and bookmarks lead to are counted from one page height.
const (
	pageW, pageH = 210.0, 297.0
	left, right  = 18.0, 18.0
	top, bottom  = 26.0, 20.0
	textW        = pageW - left - right
	lowest       = pageH - bottom // nothing but the footer stands below
)

const (
	pointsPerMM = 72 / 25.4
	mmPerPoint  = 25.4 / 72
)

// lead is the distance of two lines of a size, in millimetres.
func lead(size float64) float64 { return size * mmPerPoint * 1.32 }
