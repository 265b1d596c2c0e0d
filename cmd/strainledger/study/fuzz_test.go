package study

import (
	"reflect"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/pelletier/go-toml/v2"

	"strainledger/energy"
)

// FuzzParse promises: no text makes the reading panic; every fault has its place in
// the text, and places rise; a study that is accepted keeps the promises that the
// account relies on, and says the same when it is written in another way.
func FuzzParse(f *testing.F) {
	f.Add([]byte(whole))
	for _, marked := range []string{
		"a.b.c = 1\n[a]\n[a.b]\n[[a]]\n[[a.b]]", "x = [[[1]], {a = {b = 1}}]", "fields.strain = { a = [] }", "= \"", "\xff", "\ufeffx",
		"[[region]]\nname = 'a'\nselect = { box = [[0,0,0],[1,1,1]] }", "input.time = nan", "[[require]]\nquantity='energy'\nat_most=1e999",
		"model = { idealisation = \"axisymmetric\", axis = \"y\" }\nfields.stress = {order = \"tt rr\"}",
	} {
		f.Add([]byte(marked))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		to := &faults{path: "fuzz.toml"}
		study, root := parseStudy("fuzz.toml", data, Flags{}, to)
		if err := to.err(); err != nil {
			wantPlaces(t, data, to.found)
			return
		}
		wantSound(t, &study.Options)
		again := &faults{path: "again.toml"}
		text, err := toml.Marshal(plain(root))
		if err != nil {
			t.Fatal(err)
		}
		repeated, _ := parseStudy("again.toml", text, Flags{}, again)
		if err := again.err(); err != nil {
			t.Fatalf("accepted once, refused when written again: %v\n%s", err, text)
		}
		if difference := cmp.Diff(study.Options, repeated.Options, sameNumbers); difference != "" {
			t.Fatalf("first -, again +\n%s", difference)
		}
	})
}

// wantPlaces demands that faults stand within the text, in its order.
func wantPlaces(t *testing.T, data []byte, found Faults) {
	lines := strings.Split(strings.TrimPrefix(string(data), byteOrderMark), "\n")
	line := 1
	for _, fault := range found {
		if fault.Line < line || fault.Line > len(lines) || fault.Column < 1 || fault.Column > len([]rune(lines[fault.Line-1]))+1 {
			t.Fatalf("no such place in %d lines, or out of order: %v", len(lines), fault)
		}
		if fault.Message == "" || strings.ContainsAny(fault.Message, "\n\r") {
			t.Fatalf("not one line: %q", fault.Message)
		}
		line = fault.Line
	}
}

// wantSound demands what is promised of options: names that exist and occur once,
// numbers within their bounds.
func wantSound(t *testing.T, o *energy.Options) {
	var materials, regions []string
	for _, material := range o.Materials {
		if material.Name == "" || slices.Contains(materials, material.Name) {
			t.Fatalf("material name %q", material.Name)
		}
		materials = append(materials, material.Name)
		if material.YoungsModulus <= 0 || material.ProportionalLimit <= 0 || material.Density <= 0 ||
			material.PoissonsRatio <= -1 || material.PoissonsRatio >= 0.5 {
			t.Fatalf("material %+v", material)
		}
	}
	for _, region := range o.Regions {
		if region.Name == "" || slices.Contains(regions, region.Name) {
			t.Fatalf("region name %q", region.Name)
		}
		regions = append(regions, region.Name)
		ways := 0
		for _, has := range []bool{region.Array != "", region.Block != "", region.Box != nil, region.Rest} {
			if has {
				ways++
			}
		}
		if ways != 1 || (region.Array != "") != (len(region.Values) > 0) || region.Material != "" && !slices.Contains(materials, region.Material) {
			t.Fatalf("region %+v", region)
		}
	}
	for _, requirement := range o.Requirements {
		if requirement.Name == "" || energy.CheckQuantity(requirement.Quantity) != nil ||
			!requirement.AtMost.Exists() && !requirement.AtLeast.Exists() ||
			len(regions) > 0 && requirement.Region != "" && !slices.Contains(regions, requirement.Region) {
			t.Fatalf("requirement %+v", requirement)
		}
	}
	for _, field := range []energy.Field{o.Fields.Stress, o.Fields.Strain, o.Fields.ThermalStrain, o.Fields.PlasticStrain} {
		if len(field.Arrays) > 1 && len(field.Order) != len(field.Arrays) || field.Off && !reflect.DeepEqual(field, energy.Field{Off: true}) {
			t.Fatalf("field %+v", field)
		}
	}
	if o.Thickness < 0 || o.Repeats < 0 || o.Limit.List < 0 || o.Hotspots.Count < 0 {
		t.Fatalf("options %+v", o)
	}
}

// plain turns a tree into the values that the encoder writes.
func plain(n *node) any {
	switch n.shape {
	case isText:
		return n.text
	case isNumber:
		return n.number
	case isWhole:
		return int64(n.number)
	case isTruth:
		return n.truth
	case isList:
		items := make([]any, len(n.items))
		for i, item := range n.items {
			items[i] = plain(item)
		}
		return items
	}
	entries := map[string]any{}
	for _, entry := range n.keys {
		entries[entry.name] = plain(entry)
	}
	return entries
}
