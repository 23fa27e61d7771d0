package render

import (
	"bytes"
	"fmt"
)

// A bookmark is an entry of the outline that readers of the PDF show beside it.
type bookmark struct {
	level int
	inner int // how many entries stand below it
}

// mark adds an entry of the outline for the present place.
func (d *document) mark(level int, text string) {
	d.flush()
	d.font(regular, sizeBody)
	d.useFont() // the library writes a title as the current font would have it
	d.pdf.Bookmark(d.clean(regular, text), level, max(0, d.y-4))
	if level > 0 {
		for i := len(d.marks) - 1; i >= 0; i-- {
			if d.marks[i].level < level {
				d.marks[i].inner++
				break
			}
		}
	}
	d.marks = append(d.marks, bookmark{level: level})
}

// The library ends every entry of the outline like this, whether others stand below it or not. The standard wants the number of those,
// negative for an entry that is shown closed (ISO 32000-1, 12.3.3, table 153), so it is written over, at the same length: the line end
// goes, and "null" for the magnification, which zero says as well.
var entryEnd = []byte(" null]\n/Count 0>>\nendobj")

// openOutline puts the right counts into the entries of the outline.
func openOutline(pdf []byte, marks []bookmark) error {
	from := 0
	for i, m := range marks {
		at := bytes.Index(pdf[from:], entryEnd)
		if at < 0 {
			return fmt.Errorf("entry %d of %d of the outline is not in the PDF", i+1, len(marks))
		}
		from += at
		end := fmt.Sprintf(" 0]/Count %d>>", -m.inner)
		if m.inner == 0 {
			end = " 0]>>"
		}
		text := fmt.Sprintf("%-*s\nendobj", len(entryEnd)-len("\nendobj"), end)
		from += copy(pdf[from:], text)
	}
	return nil
}
