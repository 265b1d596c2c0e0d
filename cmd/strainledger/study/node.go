package study

import (
	"slices"
	"strconv"
)

// A shape is what a value is, as it was written.
type shape uint8

const (
	isText shape = iota + 1
	isNumber
	isWhole
	isTruth
	isDate
	isList
	isTable
)

// A node is one value of a study with the place of its key. A study file and the
// flags of the command line both become a tree of nodes, so that one set of checks
// stands between either and the options.
type node struct {
	name   string // the key, "" in a list
	place  place
	shape  shape
	text   string // of a text, and of a date or number as it was written
	number float64
	truth  bool
	keys   []*node // of a table, in the order given
	items  []*node // of a list; of [[...]] one table for each header

	headed bool     // a table or list that a header opened
	faulty bool     // refused by a check: read by nobody, and not missing either
	meant  []string // of a table: keys that its unknown ones were most likely meant to be
}

// child returns the entry of that name, faulty or not, or nil.
func (n *node) child(name string) *node {
	if n == nil {
		return nil
	}
	for _, key := range n.keys {
		if key.name == name {
			return key
		}
	}
	return nil
}

// has reports whether a table states a key, soundly or not: what was meant to be it
// is not missing.
func (n *node) has(name string) bool {
	return n.child(name) != nil || n != nil && slices.Contains(n.meant, name)
}

// get follows the names from table to table and returns the entry, or nil where one
// is missing or faulty.
func (n *node) get(names ...string) *node {
	for _, name := range names {
		n = n.child(name)
		if n == nil || n.faulty {
			return nil
		}
	}
	return n
}

// textOf returns the text of an entry, "" where there is none.
func (n *node) textOf(names ...string) string {
	if found := n.get(names...); found != nil && found.shape == isText {
		return found.text
	}
	return ""
}

// numberOf returns the number of an entry, or the given one where there is none.
func (n *node) numberOf(otherwise float64, names ...string) float64 {
	if found := n.get(names...); found != nil && (found.shape == isNumber || found.shape == isWhole) {
		return found.number
	}
	return otherwise
}

// itemsOf returns the items of a list, none where there is no such list.
func (n *node) itemsOf(names ...string) []*node {
	found := n.get(names...)
	if found == nil {
		return nil
	}
	sound := make([]*node, 0, len(found.items))
	for _, item := range found.items {
		if !item.faulty {
			sound = append(sound, item)
		}
	}
	return sound
}

// put sets an entry of a table; one of the same name is replaced.
func (n *node) put(entry *node) {
	for i, key := range n.keys {
		if key.name == entry.name {
			n.keys[i] = entry
			return
		}
	}
	n.keys = append(n.keys, entry)
}

// String describes a value for messages: what it is and how it was written.
func (n *node) String() string {
	switch n.shape {
	case isText:
		return "the text " + quote(n.text)
	case isNumber, isWhole:
		return "the number " + n.text
	case isTruth:
		return strconv.FormatBool(n.truth)
	case isDate:
		return "the date or time " + n.text
	case isList:
		if n.headed {
			return "a table with two brackets"
		}
		return "a list"
	}
	return "a table"
}
