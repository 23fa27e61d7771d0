package strictyaml

import "strings"

// A kit uses every tag and every type.
type kit struct {
	Format  string   `key:"format" enum:"kit/1" doc:"Format of this file."`
	ID      string   `key:"id" pattern:"^[a-z][a-z0-9-]*$" doc:"Name of the kit."`
	Lot     string   `key:"lot" doc:"Lot number."`
	Kind    colour   `key:"kind" enum:"red|amber|none" doc:"Kind of the kit."`
	Made    string   `key:"made" format:"rfc3339" doc:"When it was made."`
	Expires string   `key:"expires,optional" format:"date" doc:"Last day of use."`
	Leaflet string   `key:"leaflet,optional" format:"path" doc:"The leaflet."`
	Remark  string   `key:"remark,optional" minlen:"3" doc:"What else there is to say."`
	Used    bool     `key:"used" doc:"true: opened."`
	Vials   int      `key:"vials" min:"1" max:"40" doc:"How many vials."`
	Factor  float64  `key:"factor" above:"0" max:"10" doc:"A plain factor."`
	Amount  float64  `key:"amount" unit:"ng/mL" above:"0" doc:"What a vial holds."`
	Wait    *float64 `key:"wait,optional" unit:"min" min:"0" max:"60" doc:"Time to stand."`
	Loss    float64  `key:"loss" unit:"fraction" min:"0" max:"1" doc:"What may be lost."`
	Tags    []string `key:"tags,optional" minitems:"1" enum:"a|b" doc:"Tags."`
	Box     box      `key:"box" doc:"The box."`
	Spare   *box     `key:"spare,optional" doc:"Another box."`
	Parts   []part   `key:"parts" minitems:"1" doc:"The parts."`
	Ignored string
}

type colour string

type box struct {
	Width float64 `key:"width" unit:"mm" above:"0" doc:"Inner width."`
	source
}

type source struct {
	Clause string `key:"clause" doc:"Where it says so."`
}

type part struct {
	Name   string  `key:"name" doc:"Name of the part."`
	Volume float64 `key:"volume" unit:"uL" above:"0" doc:"What it holds."`
}

// goodKit is accepted; tests alter one thing in it.
const goodKit = `# a kit
format: kit/1
id: kit-a
lot: 007
kind: amber
made: 2026-03-14T16:20:00+01:00
expires: 2027-01-31
leaflet: documents\leaflet.pdf
remark: >-
  keep
  cool
used: false
vials: 12
factor: 2.5
amount: 1.2 ug/mL
wait: 90 s
loss: 15 %
tags: [a, b]
box:
  width: 10 cm
  clause: "section 7"
parts:
  - name: vial
    volume: 5 µL
  - {name: cap, volume: 0.005 mL}
`

// altered replaces old, which must be there once.
func altered(old, replacement string) string {
	if strings.Count(goodKit, old) != 1 {
		panic("strictyaml: internal error: the kit does not hold once: " + old)
	}
	return strings.Replace(goodKit, old, replacement, 1)
}
