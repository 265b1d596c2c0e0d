package study

import (
	"fmt"
	"reflect"
	"strconv"
	"strings"

	"strainledger/energy"
)

// requirement reads one entry of [[require]]. One without a name is called by what
// it demands.
func (r *reading) requirement(stated *node) energy.Requirement {
	none := float64(energy.None)
	requirement := energy.Requirement{
		Name:     stated.textOf("name"),
		Quantity: stated.textOf("quantity"),
		Region:   stated.textOf("region"),
		AtMost:   energy.Number(stated.numberOf(none, "at_most")),
		AtLeast:  energy.Number(stated.numberOf(none, "at_least")),
	}
	if requirement.Name == "" {
		requirement.Name = describe(&requirement)
	}
	if quantity := stated.get("quantity"); quantity != nil {
		r.refuseQuantity(quantity)
	}
	if region := stated.get("region"); region != nil && strings.HasPrefix(requirement.Quantity, "balance.") {
		r.faults.add(region.place, "require.region is %s, but the balance is that of the whole model; remove region", quote(region.text))
	} else if len(r.root.itemsOf("region")) > 0 {
		r.refuseUnknown(stated.get("region"), "require.region", "region")
	}
	switch most, least := stated.child("at_most"), stated.child("at_least"); {
	case !stated.has("at_most") && !stated.has("at_least"):
		r.faults.add(stated.place, "[[require]] without a bound; add at_most or at_least")
	case requirement.AtLeast > requirement.AtMost:
		r.faults.add(least.place, "require.at_least is %s and at_most is %s, which nothing can meet; exchange them", least.text, most.text)
	}
	return requirement
}

// refuseQuantity reports a quantity that no ledger has, or no comparison.
func (r *reading) refuseQuantity(stated *node) {
	check, known := energy.CheckQuantity, accountNumbers()
	if r.isComparison {
		check, known = energy.CheckComparedQuantity, append(known, energy.ComparedQuantities()...)
	}
	changed, isChange := strings.CutPrefix(stated.text, "change.")
	switch err := check(stated.text); {
	case err == nil:
	case isChange && !r.isComparison:
		r.faults.add(stated.place, "require.quantity %s is a number of a comparison; write it into the study that compare --study names", quote(stated.text))
	case isChange:
		r.faults.add(stated.place, "require.quantity is %s, which runs are not compared by; the nearest is %q", quote(stated.text),
			"change."+nearest(changed, energy.ComparedQuantities()))
	case strings.HasPrefix(stated.text, "balance."):
		r.faults.add(stated.place, "require.quantity is %s, which is no number of the balance; write balance.gap", quote(stated.text))
	case strings.HasPrefix(stated.text, "hotspot."):
		r.faults.add(stated.place, "require.quantity is %s, which is no number of a hotspot; write hotspot.RANK.KEY, such as \"hotspot.1.density\"", quote(stated.text))
	default:
		r.faults.add(stated.place, "require.quantity is %s, which is no number of an account; the nearest is %q", quote(stated.text),
			nearest(stated.text, known))
	}
}

// accountNumbers returns the keys of an account that hold a number, in its order, for
// the one that was most likely meant.
func accountNumbers() []string {
	var known []string
	account := reflect.TypeFor[energy.Account]()
	for i := range account.NumField() {
		if field := account.Field(i); field.Type == reflect.TypeFor[energy.Number]() || field.Type.Kind() == reflect.Int64 {
			known = append(known, field.Tag.Get("json"))
		}
	}
	return known
}

// describe says what a requirement demands: energy of web <= 120.
func describe(r *energy.Requirement) string {
	text := r.Quantity
	if r.Region != "" {
		text += " of " + r.Region
	}
	var bounds []string
	if r.AtLeast.Exists() {
		bounds = append(bounds, ">= "+strconv.FormatFloat(float64(r.AtLeast), 'g', -1, 64))
	}
	if r.AtMost.Exists() {
		bounds = append(bounds, "<= "+strconv.FormatFloat(float64(r.AtMost), 'g', -1, 64))
	}
	return text + " " + strings.Join(bounds, " and ")
}

// parseRequirement reads a requirement of the command line: QUANTITY, of REGION
// where one region alone is meant, <= or >= and a number. The last sign counts, so
// that a region's name may hold one.
func parseRequirement(text string, at place) (*node, error) {
	most, least := strings.LastIndex(text, "<="), strings.LastIndex(text, ">=")
	sign := max(most, least)
	if sign < 0 {
		return nil, fmt.Errorf(`no <= or >= in it; write "energy of web <= 120"`)
	}
	bound, key := strings.TrimSpace(text[sign+2:]), "at_most"
	if least > most {
		key = "at_least"
	}
	value, err := strconv.ParseFloat(bound, 64)
	if err != nil {
		return nil, fmt.Errorf(`%s is no number; write "energy of web <= 120"`, quote(bound))
	}
	subject := strings.TrimSpace(text[:sign])
	quantity, region, hasRegion := strings.Cut(subject, " of ")
	requirement := &node{place: at, shape: isTable}
	requirement.put(&node{name: "quantity", place: at, shape: isText, text: strings.TrimSpace(quantity)})
	if hasRegion {
		requirement.put(&node{name: "region", place: at, shape: isText, text: strings.TrimSpace(region)})
	}
	requirement.put(&node{name: key, place: at, shape: isNumber, number: value, text: bound})
	return requirement, nil
}
