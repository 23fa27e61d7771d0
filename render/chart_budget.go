package render

import "assaywrit/evidence/uncertainty"

// budgetBars shows what each component contributes beside the combined standard uncertainty.
func (d *document) budgetBars(b uncertainty.Budget, unit string) {
	if !(b.StdU > 0) {
		return
	}
	const labelW, step, valueW = 62.0, 5.4, 24.0
	d.room(min(float64(len(b.Components)+1), 12)*step + 6)
	d.down(1)
	top := d.y
	bar := func(name string, u float64, total bool) {
		if d.y+step > lowest {
			d.newPage()
			top = d.y
		}
		f, fill := regular, tint
		if total {
			f, fill = bold, signal
		}
		d.font(f, sizeSmall)
		d.fit(left, d.y+3.6, labelW-3, name, ink)
		w := u / b.StdU * (textW - labelW - valueW)
		d.rect(left+labelW, d.y+1, w, 3.5, fill)
		d.frame(left+labelW, d.y+1, w, 3.5, signal, 0.4)
		d.text(left+labelW+w+1.5, d.y+3.6, number(u, 3)+" "+unit, ink)
		d.down(step)
	}
	for _, c := range b.Components {
		bar(c.Name, c.Contribution, false)
	}
	bar(d.t("budget.combined"), b.StdU, true)
	d.line(left+labelW, top, left+labelW, d.y, ink, 0.6, whole)
	d.down(3)
}
