package study

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// Flags holds what the command line says in place of a study file, or over it, each
// text as it was given.
type Flags struct {
	Units        string   // "mm MPa": of length, stress and mass, in any order
	Materials    []string // "name=S355 youngs_modulus=210000": keys of [[material]]
	Idealisation string
	Thickness    string   // a number, or the name of a cell array
	Requirements []string // "energy of web <= 120"
}

// add puts what the flags say into the tree. They win over the study file; a
// material takes the place of the one with its name.
func (f *Flags) add(root *node, to *faults) {
	f.addUnits(root, to)
	f.addModel(root)
	for _, text := range f.Materials {
		at := place{flag: "--material " + quote(text)}
		material, err := parseMaterial(text, at)
		if err != nil {
			to.add(at, "%v", err)
			continue
		}
		addMaterial(root, material)
	}
	for _, text := range f.Requirements {
		at := place{flag: "--require " + quote(text)}
		requirement, err := parseRequirement(text, at)
		if err != nil {
			to.add(at, "%v", err)
			continue
		}
		list := listIn(root, "require", at)
		list.items = append(list.items, requirement)
	}
}

func (f *Flags) addUnits(root *node, to *faults) {
	at := place{flag: "--units " + quote(f.Units)}
	seen := map[string]bool{}
	for _, word := range strings.Fields(f.Units) {
		key := ""
		switch {
		case slices.Contains(lengths, word):
			key = "length"
		case slices.Contains(stresses, word):
			key = "stress"
		case slices.Contains(masses, word):
			key = "mass"
		default:
			to.add(at, "%s is no unit of length, stress or mass; the nearest is %q", quote(word), nearest(word, slices.Concat(lengths, stresses, masses)))
			continue
		}
		if seen[key] {
			to.add(at, "names two units of %s; keep one", key)
		}
		seen[key] = true
		tableIn(root, "units", at).put(&node{name: key, place: at, shape: isText, text: word})
	}
}

func (f *Flags) addModel(root *node) {
	if f.Idealisation != "" {
		at := place{flag: "--idealisation " + quote(f.Idealisation)}
		tableIn(root, "model", at).put(&node{name: "idealisation", place: at, shape: isText, text: f.Idealisation})
	}
	if f.Thickness != "" {
		at := place{flag: "--thickness " + quote(f.Thickness)}
		tableIn(root, "model", at).put(valueFrom(f.Thickness, aName|aNumber, "thickness", at))
	}
}

// addMaterial adds a material to the tree's list, in place of one with its name.
func addMaterial(root, material *node) {
	list := listIn(root, "material", material.place)
	if name := material.child("name"); name != nil {
		for i, item := range list.items {
			if stated := item.child("name"); stated != nil && stated.text == name.text && stated.place.flag == "" {
				list.items[i] = material
				return
			}
		}
	}
	list.items = append(list.items, material)
}

// tableIn returns a table of the root, which is added where it is missing. What a
// study file calls so without being a table stays and is refused by the checks.
func tableIn(root *node, name string, at place) *node {
	return entryIn(root, &node{name: name, place: at, shape: isTable})
}

// listIn returns a list of tables of the root in the same way.
func listIn(root *node, name string, at place) *node {
	return entryIn(root, &node{name: name, place: at, shape: isList, headed: true})
}

func entryIn(root, fresh *node) *node {
	found := root.child(fresh.name)
	switch {
	case found == nil:
		root.put(fresh)
		return fresh
	case found.shape != fresh.shape:
		return fresh
	}
	return found
}

// parseMaterial reads "name=S355 youngs_modulus=210000 source='EN 10025-2'": the keys
// of [[material]], values in quotes where they hold blanks.
func parseMaterial(text string, at place) (*node, error) {
	material := &node{place: at, shape: isTable}
	rest := strings.TrimSpace(text)
	if rest == "" {
		return nil, fmt.Errorf(`nothing in it; write "name=S355 youngs_modulus=210000"`)
	}
	for rest != "" {
		name, value, found := strings.Cut(rest, "=")
		if name = strings.TrimSpace(name); !found || name == "" || strings.ContainsAny(name, " \t") {
			return nil, fmt.Errorf(`%s is not KEY=VALUE; write "name=S355 youngs_modulus=210000", a value with blanks in quotes`, quote(rest))
		}
		word, after, err := cutValue(strings.TrimLeft(value, " \t"))
		if err != nil {
			return nil, fmt.Errorf("%s: %w", name, err)
		}
		if material.child(name) != nil {
			return nil, fmt.Errorf("gives %s twice; keep one", quote(name))
		}
		wanted := aName
		if known := findKey("material." + name); known != nil {
			wanted = known.form
		}
		material.put(valueFrom(word, wanted, name, at))
		rest = strings.TrimSpace(after)
	}
	return material, nil
}

// cutValue takes one value from the start of a text: up to a blank, or in quotes.
func cutValue(text string) (value, after string, err error) {
	if text == "" {
		return "", "", fmt.Errorf("no value; write KEY=VALUE")
	}
	if quotes := text[:1]; quotes == `"` || quotes == "'" {
		value, after, closed := strings.Cut(text[1:], quotes)
		if !closed {
			return "", "", fmt.Errorf("the quotes are not closed; add %s", quotes)
		}
		if after != "" && !strings.ContainsAny(after[:1], " \t") {
			return "", "", fmt.Errorf("no blank after the closing quotes; add one")
		}
		return value, after, nil
	}
	if end := strings.IndexAny(text, " \t"); end >= 0 {
		return text[:end], text[end:], nil
	}
	return text, "", nil
}

// valueFrom turns a word of the command line into the value that a key wants: a
// number where it may be one and reads as one, else a text.
func valueFrom(word string, wanted form, name string, at place) *node {
	value := &node{name: name, place: at, shape: isText, text: word}
	if wanted&(aNumber|aWhole) != 0 {
		if parsed, err := strconv.ParseFloat(word, 64); err == nil {
			value.shape, value.number = isNumber, parsed
		}
	}
	return value
}
