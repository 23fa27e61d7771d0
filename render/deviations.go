package render

import (
	"assaywrit/evidence"
	"assaywrit/evidence/peak"
)

func (d *document) deviations() {
	c := d.in.Record.Case
	if len(c.Deviations) == 0 {
		d.paragraph(d.t("deviations.none"))
	} else {
		var rows []row
		for i, x := range c.Deviations {
			rows = append(rows, row{cells: cells(itoa(i+1), when(x.At), x.Text, x.ApprovedBy)})
		}
		d.table(table{name: "deviations", columns: "rlwl", rows: rows, bare: true})
	}
	for _, s := range c.Sample.Irregularities {
		d.paragraph(d.t("deviations.irregularity", "text", s))
	}
	for _, r := range d.in.Record.Sequence {
		if r.Role == "excluded" {
			d.paragraph(d.t("deviations.excluded", "id", r.ID, "why", r.Note))
		}
	}
}

// A handSet is a measurement whose limits a person set.
type handSet struct {
	inj *evidence.Injection
	m   *evidence.Measurement
}

func (d *document) handSets() []handSet {
	var list []handSet
	for i := range d.in.Record.Injections {
		inj := &d.in.Record.Injections[i]
		for j := range inj.Measurements {
			if m := &inj.Measurements[j]; m.Manual != nil {
				list = append(list, handSet{inj, m})
			}
		}
	}
	return list
}

// manual shows each integration set by hand beside the automatic one that it replaces.
func (d *document) manual() {
	list := d.handSets()
	if len(list) == 0 {
		d.paragraph(d.t("manual.none"))
		return
	}
	d.paragraph(d.t("manual.note", "n", itoa(len(list))))
	for _, h := range list {
		d.sideBySide(h)
	}
}

func (d *document) sideBySide(h handSet) {
	const gap, high = 6.0, 62.0
	w := (textW - gap) / 2
	d.room(high + 58)
	d.font(bold, sizeBody)
	d.down(5)
	d.text(left, d.y, d.injectionTitle(h.inj)+"  ·  "+h.m.Compound+", "+d.words.or("trace.", h.m.Trace), ink)
	d.down(2)
	s := spanOf([]*evidence.Measurement{h.m})
	for i, p := range []*peak.Peak{h.m.Automatic, h.m.Peak} {
		x := left + float64(i)*(w+gap)
		d.font(bold, sizeTable)
		d.text(x, d.y+3, d.t([]string{"manual.automatic", "manual.by-hand"}[i]), ink)
		c := d.chart(h.inj, h.m, s, x, d.y+4, w, high-6, true)
		c.used, c.other, c.figures = p, nil, d.figures(h.m, p, false)
		c.draw()
	}
	d.down(high + 5)
	side := func(p *peak.Peak, value func(*peak.Peak) string) string {
		if p == nil {
			return missing
		}
		return value(p)
	}
	line := func(key string, value func(*peak.Peak) string) row {
		return row{cells: cells(d.t(key), side(h.m.Automatic, value), side(h.m.Peak, value))}
	}
	d.table(table{name: "manual", columns: "wdd", rows: []row{
		line("manual.start", func(p *peak.Peak) string { return fixed(p.StartMin, 4) }),
		line("manual.end", func(p *peak.Peak) string { return fixed(p.EndMin, 4) }),
		line("manual.apex", func(p *peak.Peak) string { return fixed(p.ApexMin, 4) }),
		line("manual.area", func(p *peak.Peak) string { return powered(p.Area, 5) }),
		line("manual.height", func(p *peak.Peak) string { return powered(p.Height, 5) }),
	}})
	change := d.t("manual.no-automatic")
	if v := h.m.Manual.AreaChange; v != nil {
		change = signed(*v*100, 2) + " %"
	}
	d.pairs([]pair{{d.t("label.area-change"), change}, {d.t("label.set-by"), h.m.Manual.By + ", " + when(h.m.Manual.At)}, {d.t("label.approved-by"), h.m.Manual.ApprovedBy}, {d.t("label.reason"), h.m.Manual.Reason}})
}
