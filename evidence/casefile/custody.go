package casefile

import (
	"fmt"
	"strings"
)

// checkCustody follows each item from hand to hand. An event with "to" says who has the item from then on; one with "from" says who
// gave it, and that must be the one who had it; one with "from" alone leaves it with nobody, in a store say.
func (l *loader) checkCustody() {
	events := l.folder.Case.Custody
	holder := map[string]string{}   // by item; empty where nobody holds it
	spelling := map[string]string{} // of items, by their letters
	for i, e := range events {
		key := fmt.Sprintf("custody[%d]", i)
		if i > 0 && at(e.At).Before(at(events[i-1].At)) {
			l.inCase(key+".at", quote(e.At), "a time not before "+events[i-1].At+", that of the event above", "events stand in order of time")
		}
		l.person(key+".from", e.From)
		l.person(key+".to", e.To)
		letters := strings.ToLower(strings.Join(strings.Fields(e.Item), " "))
		if other, ok := spelling[letters]; ok && other != e.Item {
			l.inCase(key+".item", quote(e.Item), quote(other)+", as above", "two spellings would be two items, each with a gap in its chain")
		} else {
			spelling[letters] = e.Item
		}
		l.handOver(key, e, holder)
	}
}

// handOver compares an event with who holds its item, and notes who holds it afterwards.
func (l *loader) handOver(key string, e CustodyEvent, holder map[string]string) {
	const hint = "every hand-over is an event of its own"
	had, known := holder[e.Item]
	switch {
	case !known: // the first event of an item
	case e.From != "" && had == "":
		l.inCase(key+".from", quote(e.From), "no \"from\": nobody holds "+e.Item+" since the event before", hint)
	case e.From != "" && e.From != had:
		l.inCase(key+".from", quote(e.From), quote(had)+", who holds "+e.Item+" since the event before", hint)
	case e.From == "" && e.To != "" && had != "" && e.To != had:
		l.inCase(key+".to", quote(e.To)+" without \"from\"", "\"from: "+had+"\" beside it, who holds "+e.Item+" since the event before", hint)
	}
	if e.From != "" || e.To != "" {
		holder[e.Item] = e.To
	}
}
