package mzml

import (
	"slices"
	"strings"

	"assaywrit/evidence/trace"
)

// A header gathers what the file states about the sample, the instrument, the software and the run.
type header struct {
	samples     []sample
	instruments []instrument
	tools       []string
	toolVersion string

	startTime                string
	runSample, runInstrument string // ids that the run refers to
}

type sample struct{ id, name string }

type instrument struct{ id, model, serial string }

func (h *header) start(s *scanner, name string) {
	switch name {
	case "sample":
		h.samples = append(h.samples, sample{s.attr("id"), s.attr("name")})
	case "software":
		h.toolVersion = s.attr("version")
	case "instrumentConfiguration":
		h.instruments = append(h.instruments, instrument{id: s.attr("id")})
	case "run":
		h.startTime, h.runSample, h.runInstrument = s.attr("startTimeStamp"), s.attr("sampleRef"), s.attr("defaultInstrumentConfigurationRef")
	}
}

// term takes a term of the software or instrument configuration begun last.
func (h *header) term(t term, holder string) {
	if holder == "software" {
		tool := strings.TrimSpace(t.said() + " " + h.toolVersion)
		if t.said() != "" && !slices.Contains(h.tools, tool) {
			h.tools = append(h.tools, tool)
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
	f.Software = strings.Join(h.tools, "; ")
	for _, x := range h.samples {
		if x.id != h.runSample && (h.runSample != "" || len(h.samples) > 1) {
			continue
		}
		if f.SampleCode = x.name; x.name == "" {
			f.SampleCode = x.id
		}
	}
	var all []string
	for _, x := range h.instruments {
		if text := x.String(); x.id == h.runInstrument {
			f.Instrument = text
			return
		} else if text != "" && !slices.Contains(all, text) {
			all = append(all, text)
		}
	}
	f.Instrument = strings.Join(all, "; ")
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
