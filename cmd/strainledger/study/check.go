package study

import (
	"math"
	"slices"
	"strconv"
	"strings"
)

// check holds every entry of a tree against the table of keys. What it refuses it
// marks as faulty.
func check(root *node, to *faults) {
	checkTable(root, "", to)
}

// checkTable holds the entries of one table against the keys below a path.
func checkTable(table *node, path string, to *faults) {
	for _, entry := range table.keys {
		entryPath := join(path, entry.name)
		known := findKey(entryPath)
		if known == nil || strings.Contains(entry.name, ".") {
			entry.faulty = true
			near := nearestKey(path, entry.name)
			table.meant = append(table.meant, near)
			to.add(entry.place, "unknown key %s%s; the nearest known key is %q", quote(entry.name), inTable(path), near)
			continue
		}
		if !checkEntry(entry, known, to) {
			entry.faulty = true
		}
	}
	for i := range keys {
		parent, name, _ := cutLast(keys[i].path)
		if keys[i].needed && parent == path && !table.has(name) {
			to.add(table.place, "%s without %s; add %s", describeTable(path), name, example(&keys[i]))
		}
	}
}

// nearestKey returns the known key that an unknown one was most likely meant to be:
// one of its own table that is a slip of the finger away, else the same name in
// another table, else the nearest in its own.
func nearestKey(path, name string) string {
	near := nearest(name, keysBelow(path))
	if distance(name, near) <= 2 {
		return near
	}
	for i := range keys {
		if _, last, nested := cutLast(keys[i].path); nested && last == name {
			return keys[i].path
		}
	}
	return near
}

// checkEntry reports whether an entry is what its key wants. Faults inside a table
// are the entries', not the table's.
func checkEntry(entry *node, known *key, to *faults) bool {
	if known.later {
		to.add(entry.place, "%s is not built yet; remove it", known.path)
		return false
	}
	switch {
	case entry.shape == isTable && known.form&aTable != 0:
		checkTable(entry, known.path, to)
		return true
	case entry.shape == isList && known.form&tables != 0 && isListOfTables(entry):
		for _, item := range entry.items {
			checkTable(item, known.path, to)
		}
		return true
	case !hasForm(entry, known.form):
		to.add(entry.place, "%s is %s; write %s", known.path, entry, describeForm(known))
		return false
	case entry.shape == isText:
		return checkText(entry, known, to)
	case entry.shape == isNumber || entry.shape == isWhole:
		return checkNumber(entry, known, to)
	case entry.shape == isList:
		return checkList(entry, known, to)
	}
	return true
}

func checkText(entry *node, known *key, to *faults) bool {
	switch {
	case slices.Contains(known.after, entry.text):
		to.add(entry.place, "%s = %q is not built yet; %s", known.path, entry.text, choices(known))
		return false
	case known.values != nil && !slices.Contains(known.values, entry.text):
		to.add(entry.place, "%s is %s; %s", known.path, quote(entry.text), choicesNear(known, entry.text))
		return false
	case entry.text == "" && known.form&aText == 0:
		to.add(entry.place, "%s is empty; write %s or remove it", known.path, describeForm(known))
		return false
	}
	return true
}

func checkNumber(entry *node, known *key, to *faults) bool {
	within := known.bound
	if within == nil || math.IsInf(entry.number, 0) || math.IsNaN(entry.number) {
		within = anyNumber
	}
	if !within.holds(entry.number) {
		to.add(entry.place, "%s is %s; it %s", known.path, entry.text, within.words)
		return false
	}
	return true
}

// checkList looks at each value of a list of names or numbers.
func checkList(list *node, known *key, to *faults) bool {
	if len(list.items) == 0 {
		to.add(list.place, "%s is an empty list; write %s", known.path, describeForm(known))
		return false
	}
	each := map[form]form{names: aName, numbers: aNumber, corners: numbers, matrix: numbers}[known.form]
	sound := true
	for _, item := range list.items {
		one := key{path: known.path, form: each, bound: known.bound}
		if !checkEntry(item, &one, to) {
			item.faulty, sound = true, false
		}
	}
	return sound
}

// hasForm reports whether a value has one of the forms, its inside left aside.
func hasForm(value *node, wanted form) bool {
	switch value.shape {
	case isText:
		return wanted&(aText|aName) != 0
	case isNumber:
		return wanted&aNumber != 0
	case isWhole:
		return wanted&(aNumber|aWhole) != 0
	case isTruth:
		return wanted&aSwitch != 0 || wanted&anOff != 0 && !value.truth
	case isList:
		return !value.headed && wanted&(names|numbers|corners|matrix) != 0
	}
	return false
}

// isListOfTables reports whether a list was written as [[key]] or as a list of
// inline tables.
func isListOfTables(list *node) bool {
	for _, item := range list.items {
		if item.shape != isTable {
			return false
		}
	}
	return true
}

// describeForm says what a key wants.
func describeForm(known *key) string {
	text := "a text in quotes"
	if known.values != nil {
		text = either(available(known))
	}
	var parts []string
	for _, part := range []struct {
		form  form
		words string
	}{
		{anOff, "false"},
		{aText | aName, text},
		{aNumber, "a number"},
		{aWhole, "a whole number"},
		{aSwitch, "true or false"},
		{names, `a list of texts such as ["a", "b"]`},
		{numbers, "a list of numbers such as [1, 2]"},
		{corners, "two corners [[x, y, z], [x, y, z]]"},
		{aTable, "a table [" + known.path + "]"},
		{tables, "[[" + known.path + "]] above its keys"},
	} {
		if known.form&part.form != 0 {
			parts = append(parts, part.words)
		}
	}
	return anyOf(parts)
}

// available returns the texts of a key that are built.
func available(known *key) []string {
	var built []string
	for _, value := range known.values {
		if !slices.Contains(known.after, value) {
			built = append(built, value)
		}
	}
	return built
}

// choices lists the texts that a key may be.
func choices(known *key) string {
	return "write " + either(available(known))
}

// choicesNear lists the texts that a key may be, or names the nearest of many.
func choicesNear(known *key, text string) string {
	built := available(known)
	if len(built) > 8 {
		return "the nearest known one is " + strconv.Quote(nearest(text, built))
	}
	return choices(known)
}

// either joins quoted texts: "a", "b" or "c".
func either(texts []string) string {
	quoted := make([]string, len(texts))
	for i, text := range texts {
		quoted[i] = strconv.Quote(text)
	}
	return anyOf(quoted)
}

// anyOf joins words: a, b or c.
func anyOf(words []string) string {
	if len(words) == 1 {
		return words[0]
	}
	last := len(words) - 1
	return strings.Join(words[:last], ", ") + " or " + words[last]
}

// example shows how a missing key is written.
func example(known *key) string {
	switch {
	case known.path == "region.select":
		return "select = { rest = true } or another choice of cells"
	case known.form&aName != 0:
		_, name, _ := cutLast(known.path)
		return name + ` = "..."`
	}
	_, name, _ := cutLast(known.path)
	return name
}

// describeTable names a table as its header is written.
func describeTable(path string) string {
	if known := findKey(path); known != nil && known.form&tables != 0 {
		return "[[" + path + "]]"
	}
	return "[" + path + "]"
}

// inTable names the table of an unknown key, nothing for the study itself.
func inTable(path string) string {
	if path == "" {
		return ""
	}
	return " in " + describeTable(path)
}

func join(path, name string) string {
	if path == "" {
		return name
	}
	return path + "." + name
}

// cutLast splits a path before its last name.
func cutLast(path string) (parent, name string, found bool) {
	if point := strings.LastIndexByte(path, '.'); point >= 0 {
		return path[:point], path[point+1:], true
	}
	return "", path, false
}
