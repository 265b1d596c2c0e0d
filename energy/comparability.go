package energy

import (
	"fmt"
	"math"
	"reflect"
	"strings"
)

// Obstacles say what keeps the numbers of a run from being compared with those of the
// baseline; "" where nothing does.
type obstacles struct {
	everything string // units: no difference is given
	masses     string // unit of mass: no difference of masses is given

	model    string          // how the model was read
	load     string          // of numbers that are not normalised for the load
	whole    string          // of the whole model: its regions, or one of their materials
	regions  map[Text]string // of a region
	criteria map[Text]string // of a region's numbers by its criterion, "" standing for the whole
}

// ofUnits returns why not even a difference is given.
func (o *obstacles) ofUnits(q *comparedQuantity) string {
	if o.everything == "" && q.needsMass {
		return o.masses
	}
	return o.everything
}

// of returns why there is no relative difference of a quantity.
func (o *obstacles) of(q *comparedQuantity, region Text) string {
	place := o.regions[region]
	if region == "" {
		place = o.whole
	}
	load, criterion := "", ""
	if q.depends == onLimit {
		criterion = o.criteria[region]
	}
	if q.depends == onLimit || q.depends == onLoad {
		load = o.load
	}
	for _, reason := range []string{o.model, place, criterion, load} {
		if reason != "" {
			return reason
		}
	}
	return ""
}

// findObstacles compares a run with the baseline and reports what differs.
func (c *comparing) findObstacles(run int) {
	o := &c.obstacles[run-1]
	if o.everything != "" {
		c.find("units-differ", run, "%s; its numbers stand as they are, without differences", o.everything)
	} else if o.masses != "" {
		c.find("units-differ", run, "%s; its masses stand as they are, without differences", o.masses)
	}
	if run == c.to.Baseline {
		return
	}
	c.compareModels(run, o)
	c.compareLoads(run, o)
	o.regions, o.criteria = map[Text]string{}, map[Text]string{}
	c.compareRegions(run, o)
	c.compareMaterials(run, o)
}

// compareModels looks at how the models were read: energies of two ways differ by more
// than designs do.
func (c *comparing) compareModels(run int, o *obstacles) {
	fresh, old := readingOf(c.run(run)), readingOf(c.baseline())
	var parts []string
	for i := range fresh {
		if fresh[i].value != old[i].value {
			parts = append(parts, fmt.Sprintf("%s %s against %s", fresh[i].name, fresh[i].value, old[i].value))
		}
	}
	if len(parts) > 0 {
		o.model = "the models were not read alike: " + strings.Join(parts, ", ")
		c.find("models-differ", run, "%s; no percent is given", o.model)
	}
}

// namedText is a text with what it is.
type namedText struct{ name, value string }

// readingOf returns how a model was read.
func readingOf(ledger *Ledger) []namedText {
	repeats := 1
	if ledger.Repeated != nil {
		repeats = ledger.Repeated.Repeats
	}
	return []namedText{
		{"idealisation", ledger.Model.Idealisation},
		{"axis", statedText(string(ledger.Model.Axis))},
		{"points", ledger.Model.Points},
		{"energy from", ledger.Model.EnergyFrom},
		{"stress on", locationOf(ledger.Fields.Stress)},
		{"strain on", locationOf(ledger.Fields.Strain)},
		{"repeats", fmt.Sprint(repeats)},
	}
}

func statedText(text string) string {
	if text == "" {
		return "none"
	}
	return text
}

func locationOf(field *FieldUsed) string {
	if field == nil {
		return "none"
	}
	return field.On
}

// compareLoads looks at what the studies say of the load.
func (c *comparing) compareLoads(run int, o *obstacles) {
	fresh, old := c.run(run).Model.Loading, c.baseline().Model.Loading
	if fresh.Control != old.Control && fresh.Control != "" && old.Control != "" {
		o.model = fmt.Sprintf("the load is given by %s, in the baseline by %s", fresh.Control, old.Control)
		c.find("loads-differ", run, "%s; no percent is given", o.model)
	}
	if fresh.Scale != old.Scale {
		o.load = fmt.Sprintf("the load is %v times the reference, in the baseline %v times", fresh.Scale, old.Scale)
		c.find("loads-differ", run, "%s; energies and densities are divided by the square of that, other numbers stand as they are, without percent", o.load)
	}
}

// compareRegions looks for regions that one of the two alone has, and for criteria.
func (c *comparing) compareRegions(run int, o *obstacles) {
	fresh, old := c.run(run), c.baseline()
	var parts []string
	for i := range old.Regions {
		name := old.Regions[i].Name
		other := regionOf(fresh, name)
		switch {
		case other == nil:
			o.regions[Text(name)] = fmt.Sprintf("the run has no region %q", name)
			parts = append(parts, o.regions[Text(name)])
		case other.Criterion != old.Regions[i].Criterion:
			reason := fmt.Sprintf("the criterion of region %q is %s, in the baseline %s", name, other.Criterion, old.Regions[i].Criterion)
			o.criteria[Text(name)], o.criteria[""] = reason, reason
			c.find("criteria-differ", run, "%s; no percent is given of what depends on it", reason)
		}
	}
	for i := range fresh.Regions {
		if name := fresh.Regions[i].Name; regionOf(old, name) == nil {
			o.regions[Text(name)] = fmt.Sprintf("the baseline has no region %q", name)
			parts = append(parts, o.regions[Text(name)])
		}
	}
	if len(parts) > 0 {
		o.whole = "the regions are not the same: " + strings.Join(parts, ", ")
		c.find("regions-differ", run, "%s; no percent is given of them and of the whole model", strings.Join(parts, ", "))
	}
}

// compareMaterials looks at the materials of the regions that both have.
func (c *comparing) compareMaterials(run int, o *obstacles) {
	fresh, old := c.run(run), c.baseline()
	for i := range fresh.Regions {
		region := &fresh.Regions[i]
		before := regionOf(old, region.Name)
		if before == nil {
			continue
		}
		difference := materialDifference(materialOf(fresh, region.Material), materialOf(old, before.Material))
		if difference == "" {
			continue
		}
		reason := fmt.Sprintf("the materials of region %q differ: %s", region.Name, difference)
		o.regions[Text(region.Name)] = reason
		if o.whole == "" {
			o.whole = reason
		}
		c.find("materials-differ", run, "%s; no percent is given of it and of the whole model", reason)
	}
}

// materialOf returns a material by its name; nil where a region has none.
func materialOf(ledger *Ledger, name Text) *MaterialUsed {
	for i := range ledger.Materials {
		if ledger.Materials[i].Name == string(name) {
			return &ledger.Materials[i]
		}
	}
	return nil
}

// sameValue is how far numbers of two studies may lie apart and be held for one:
// factors between units are often written with seven digits.
const sameValue = 1e-6

// materialDifference says in what two materials differ, where their limit comes from
// left aside; "" where they do not.
func materialDifference(fresh, old *MaterialUsed) string {
	switch {
	case fresh == nil && old == nil:
		return ""
	case fresh == nil:
		return fmt.Sprintf("none against %s", old.Name)
	case old == nil:
		return fmt.Sprintf("%s against none", fresh.Name)
	}
	var parts []string
	one, other := reflect.ValueOf(*fresh), reflect.ValueOf(*old)
	for i := range one.NumField() {
		key, _, _ := strings.Cut(one.Type().Field(i).Tag.Get("json"), ",")
		if key != "source" && !isSame(one.Field(i), other.Field(i)) {
			parts = append(parts, fmt.Sprintf("%s %s against %s", key, valueText(one.Field(i)), valueText(other.Field(i))))
		}
	}
	return strings.Join(parts, ", ")
}

// isSame reports whether two values of a material are one.
func isSame(a, b reflect.Value) bool {
	switch a.Kind() {
	case reflect.Float64:
		one, other := a.Float(), b.Float()
		if math.IsNaN(one) || math.IsNaN(other) {
			return math.IsNaN(one) && math.IsNaN(other)
		}
		return math.Abs(one-other) <= sameValue*max(math.Abs(one), math.Abs(other))
	case reflect.Pointer:
		if a.IsNil() || b.IsNil() {
			return a.IsNil() && b.IsNil()
		}
		return isSame(a.Elem(), b.Elem())
	case reflect.Array:
		for i := range a.Len() {
			if !isSame(a.Index(i), b.Index(i)) {
				return false
			}
		}
		return true
	}
	if a.Kind() == reflect.Interface { // the material axes: rows or a name
		return valueText(a) == valueText(b)
	}
	return a.Equal(b)
}

// valueText returns a value of a material as messages have it.
func valueText(value reflect.Value) string {
	if value.Kind() == reflect.Pointer || value.Kind() == reflect.Interface {
		if value.IsNil() {
			return "null"
		}
		value = value.Elem()
	}
	if text, isText := value.Interface().(Text); isText && text == "" {
		return "null"
	}
	return fmt.Sprint(value.Interface())
}
