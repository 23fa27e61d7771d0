package render

import (
	"sync"

	"codeberg.org/go-fonts/dejavu/dejavusanscondensed"
	"codeberg.org/go-fonts/dejavu/dejavusanscondensedbold"
	"codeberg.org/go-fonts/dejavu/dejavusansmono"
	"golang.org/x/image/font/opentype"
	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
)

// A face is one cut of the family. One family serves text and charts, so that a sign looks the same everywhere.
type face int

const (
	regular face = iota
	bold
	mono
	faceCount
)

// What the PDF library calls the faces.
var (
	familyOf = [faceCount]string{"dejavu", "dejavu", "dejavumono"}
	styleOf  = [faceCount]string{"", "B", ""}
	ttfOf    = [faceCount][]byte{dejavusanscondensed.TTF, dejavusanscondensedbold.TTF, dejavusansmono.TTF}
)

// parsed fonts are shared by all documents; they are only read.
type parsed struct {
	fonts [faceCount]*sfnt.Font
	text  text.Handler // of the charts that gonum/plot draws
}

var fonts = sync.OnceValue(func() *parsed {
	p := &parsed{}
	for i, ttf := range ttfOf {
		f, err := opentype.Parse(ttf)
		if err != nil {
			panic("render: internal error: embedded font: " + err.Error())
		}
		p.fonts[i] = f
	}
	p.text = text.Plain{Fonts: font.NewCache(font.Collection{{Font: font.Font{Typeface: chartFace}, Face: p.fonts[regular]}})}
	return p
})

// chartFace is the regular face's name in gonum/plot's cache.
const chartFace = "DejaVu"
