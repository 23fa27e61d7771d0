package render

import (
	"image/color"
	"strconv"
	"time"

	"assaywrit/decision"
	"assaywrit/evidence/units"
)

// Colours. Each is told apart by shape or word as well, and by lightness in grey.
var (
	ink    = color.RGBA{0x1c, 0x24, 0x2e, 0xff}
	soft   = color.RGBA{0x5a, 0x66, 0x72, 0xff}
	rule   = color.RGBA{0xb9, 0xc2, 0xcb, 0xff}
	shade  = color.RGBA{0xee, 0xf1, 0xf4, 0xff}
	signal = color.RGBA{0x12, 0x4e, 0x82, 0xff} // traces and points
	tint   = color.RGBA{0xc9, 0xdd, 0xee, 0xff} // area under a peak
	accent = color.RGBA{0x9a, 0x3d, 0x08, 0xff} // baselines, limits, what needs a look
)

// Sizes of type, points.
const (
	sizeBody  = 9.5
	sizeTable = 8
	sizeSmall = 7.5
	sizeH1    = 15
	sizeH2    = 11.5
)

// Page geometry, millimetres.
const (
	pageW, pageH = 210.0, 297.0
	left, right  = 18.0, 18.0
	top, bottom  = 25.0, 20.0
	textW        = pageW - left - right
)

// number writes a value for people. Every number on a page goes through it or through decision.TextWithU.
func number(v float64, digits int) string { return decision.Text(v, digits) }

// plain writes a value as it was stated, in its shortest decimal.
func plain(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) }

// stated writes a stated fraction in per cent.
func statedPercent(v float64) string { return decision.Text(float64(v*100), 12) + " %" }

// when writes a time of the record for people: date, time to the minute (or second, where it has one), offset.
func when(text string) string {
	t, err := time.Parse(time.RFC3339, text)
	if err != nil {
		return text
	}
	if t.Second() != 0 {
		return t.Format("2006-01-02 15:04:05 -07:00")
	}
	return t.Format("2006-01-02 15:04 -07:00")
}

// optional is number, or a dash for what is missing.
func optional(v *float64, digits int) string {
	if v == nil {
		return "–"
	}
	return number(*v, digits)
}

// percentage writes a fraction in per cent.
func percentage(v *float64, digits int) string {
	if v == nil {
		return "–"
	}
	return number(*v*100, digits) + " %"
}

// inUnit converts ng/mL into the unit that people read.
func inUnit(v float64, unit string) float64 {
	x, err := units.Concentration.In(v, unit)
	if err != nil {
		return v // the case file has checked the unit
	}
	return x
}

// mark shows a result by word and sign.
func mark(r decision.Result) string {
	switch r {
	case decision.Passed:
		return "✓ passed"
	case decision.Failed:
		return "✗ failed"
	}
	return "– n/a"
}
