package readers

import (
	"math"
	"slices"
	"strconv"
	"strings"
)

// readCollection reads one state of a collection of files, each at a time. Files of one
// time are parts that belong together.
func (o *opener) readCollection(x *xmlFile, at branch) error {
	times, err := collectionTimes(x)
	if err != nil {
		return err
	}
	if len(times) == 0 {
		return placedAt(x.file, x.data, malformed("found no DataSet in the collection"))
	}
	o.model.Times = append(o.model.Times, times...)
	chosen, err := o.options.Time.pick(times)
	if err != nil {
		return placedAt(x.file, x.data, err)
	}
	o.model.Sources = append(o.model.Sources, x.file.source(x.format(), math.NaN()))
	at.time = times[chosen]
	var entries []*element
	for _, e := range x.data.children {
		if time, _ := timeOf(e); e.name == "DataSet" && time == times[chosen] {
			entries = append(entries, e)
		}
	}
	for _, e := range entries {
		f, err := o.follow(x.file, e.attribute("file"))
		if err != nil {
			return placedAt(x.file, e, err)
		}
		if o.isRepeated(f, at) {
			continue
		}
		inside := at
		if len(entries) > 1 || e.attribute("name") != "" {
			inside = o.part(e, at)
		}
		if err := o.read(f, inside); err != nil {
			return err
		}
	}
	return nil
}

// part returns the branch of one of several parts.
func (o *opener) part(e *element, at branch) branch {
	if len(at.stack) == 1 {
		at.name = ""
	}
	name := e.attribute("name")
	if name == "" {
		name = e.attribute("part")
	}
	if name == "" {
		name = "0"
	}
	if group := e.attribute("group"); group != "" {
		at = at.below(group)
	}
	inside := at.below(name)
	if o.blockNames[inside.name] {
		inside = at.below(name + "-" + strconv.Itoa(len(o.model.Blocks)))
	}
	return inside
}

// collectionTimes returns the times of a collection, rising, each once.
func collectionTimes(x *xmlFile) ([]float64, error) {
	var times []float64
	for _, e := range x.data.children {
		if e.name != "DataSet" {
			continue
		}
		time, err := timeOf(e)
		if err != nil {
			return nil, placedAt(x.file, e, err)
		}
		times = append(times, time)
	}
	slices.Sort(times)
	return slices.Compact(times), nil
}

// timeOf returns the time of an entry; one without any stands at 0.
func timeOf(e *element) (float64, error) {
	text, ok := e.get("timestep")
	if !ok || strings.TrimSpace(text) == "" {
		return 0, nil
	}
	time, err := parseFloat(strings.TrimSpace(text))
	if err != nil || math.IsNaN(time) {
		return 0, attributeError(e, "timestep", text, "a number")
	}
	return time, nil
}
