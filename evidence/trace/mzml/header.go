package mzml

import (
	"fmt"
	"strings"

	"assaywrit/evidence/trace"
)

// A header gathers what the file states about the sample, the instrument, the software and the run.
type header struct {
	samples     []sample
	instruments []instrument
	tools       once
	settings    once // ids of scanSettings
	toolVersion string

	ids                      map[string]bool // of samples and instruments
	startTime                string
	runSample, runInstrument string // ids that the run refers to
}

type sample struct{ id, name string }

type instrument struct{ id, model, serial string }

// once lists texts in the order in which they first come.
type once struct {
	list []string
	seen map[string]bool
}

func (o *once) add(text string) {
	if text == "" || o.seen[text] {
		return
	}
	if o.seen == nil {
		o.seen = map[string]bool{}
	}
	o.seen[text], o.list = true, append(o.list, text)
}

func (o *once) String() string { return strings.Join(o.list, "; ") }

func (h *header) start(s *scanner, name string, at int) error {
	switch name {
	case "software":
		h.toolVersion = s.attr("version")
		return nil
	case "scanSettings":
		h.settings.add(s.attr("id"))
		return nil
	case "run":
		h.startTime, h.runSample, h.runInstrument = s.attr("startTimeStamp"), s.attr("sampleRef"), s.attr("defaultInstrumentConfigurationRef")
		return nil
	}
	id := s.attr("id")
	if id == "" || h.ids[name+" "+id] {
		return s.fail(at, fmt.Sprintf("the %s id %q", name, id), "an id that no other has", "")
	}
	if h.ids == nil {
		h.ids = map[string]bool{}
	}
	h.ids[name+" "+id] = true
	if name == "sample" {
		h.samples = append(h.samples, sample{id, s.attr("name")})
	} else {
		h.instruments = append(h.instruments, instrument{id: id})
	}
	return nil
}

// term takes a term of the software or instrument configuration begun last.
func (h *header) term(t term, holder string) {
	if holder == "software" {
		if t.said() != "" {
			h.tools.add(strings.TrimSpace(t.said() + " " + h.toolVersion))
		}
		return
	}
	switch i := &h.instruments[len(h.instruments)-1]; {
	case t.accession == accSerial:
		i.serial = t.value
	case i.model == "": // the schema wants the model first
		i.model = t.said()
	}
}

// fill states it. The sample is that of the run, or the only one; its name, or its id where it has none. The instrument is that
// of the run, or every one that is listed.
func (h *header) fill(f *trace.File) {
	f.StartTime = h.startTime
	f.Software = h.tools.String()
	f.Method = h.settings.String()
	for _, x := range h.samples {
		if x.id != h.runSample && (h.runSample != "" || len(h.samples) > 1) {
			continue
		}
		f.SampleCode = x.name // never its id, which converters make up
	}
	var all once
	for _, x := range h.instruments {
		if x.id == h.runInstrument {
			f.Instrument = x.String()
			return
		}
		all.add(x.String())
	}
	f.Instrument = all.String()
}

func (i instrument) String() string {
	switch {
	case i.serial == "":
		return i.model
	case i.model == "":
		return "serial number " + i.serial
	}
	return i.model + ", serial number " + i.serial
}
