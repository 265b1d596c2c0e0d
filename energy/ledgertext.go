package energy

import (
	"bufio"
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"reflect"
	"strings"
)

// ReadLedgers reads ledgers back from JSON: one, or a list of them. What it returns is
// what was written, apart from Ledger.AllPastLimit, which JSON does not hold. A number
// whose key is missing does not exist; keys that a ledger of this schema does not have
// are left aside, since later versions may add some.
//
// Errors of type *InputError: text that is no JSON, another schema, keys of the wrong
// kind, and keys that every ledger has and that are missing or null.
func ReadLedgers(r io.Reader) ([]*Ledger, error) {
	buffer := bufio.NewReader(r)
	first, err := firstByte(buffer)
	if err != nil {
		return nil, err
	}
	if first != '{' && first != '[' {
		return nil, inputError("no ledger: it starts with %q where JSON starts with {; give a ledger.json that tally has written, or a study file", first)
	}
	data, err := io.ReadAll(buffer)
	if err != nil {
		return nil, err
	}
	texts := []json.RawMessage{data}
	if first == '[' {
		if err := json.Unmarshal(data, &texts); err != nil {
			return nil, unreadable(data, err)
		}
	}
	ledgers := make([]*Ledger, len(texts))
	for i, text := range texts {
		if ledgers[i], err = readLedger(text); err != nil && first == '[' {
			return nil, inputError("ledger %d of %d: %w", i+1, len(texts), err)
		} else if err != nil {
			return nil, err
		}
	}
	if len(ledgers) == 0 {
		return nil, inputError("no ledger: the list is empty")
	}
	return ledgers, nil
}

// firstByte returns the first byte that is no blank, and leaves it to be read.
func firstByte(r *bufio.Reader) (byte, error) {
	for {
		b, err := r.ReadByte()
		switch {
		case err == io.EOF:
			return 0, inputError("no ledger: it is empty")
		case err != nil:
			return 0, err
		}
		if !bytes.ContainsRune([]byte(" \t\r\n"), rune(b)) {
			return b, r.UnreadByte()
		}
	}
}

// readLedger reads one ledger.
func readLedger(text []byte) (*Ledger, error) {
	var form struct {
		Schema any `json:"schema"`
	}
	if err := json.Unmarshal(text, &form); err != nil {
		return nil, unreadable(text, err)
	}
	if form.Schema != LedgerSchema {
		found := "no schema"
		if form.Schema != nil {
			found = fmt.Sprintf("the schema %#v", form.Schema)
		}
		return nil, inputError("no ledger: it has %s, want %q; give a ledger.json that tally has written", found, LedgerSchema)
	}
	ledger := &Ledger{}
	if err := json.Unmarshal(text, ledger); err != nil {
		return nil, unreadable(text, err)
	}
	var tree any
	if err := json.Unmarshal(text, &tree); err != nil {
		return nil, unreadable(text, err)
	}
	if err := complete(reflect.ValueOf(ledger).Elem(), tree, ""); err != nil {
		return nil, err
	}
	if len(ledger.Regions) == 0 {
		return nil, inputError("the ledger has no regions")
	}
	if thickness, isNumber := ledger.Model.Thickness.(float64); isNumber {
		ledger.Model.Thickness = Number(thickness)
	}
	return ledger, nil
}

// unreadable says where JSON cannot be read, and why.
func unreadable(text []byte, err error) error {
	if syntax := new(json.SyntaxError); errors.As(err, &syntax) {
		return inputError("line %d: not whole JSON: %w", lineOf(text, syntax.Offset), err)
	}
	if kind := new(json.UnmarshalTypeError); errors.As(err, &kind) {
		return inputError("the key %q is a %s, want a %s", kind.Field, kind.Value, kindName(kind.Type))
	}
	return inputError("not read as a ledger: %w", err)
}

// lineOf returns the line of an offset, from 1.
func lineOf(text []byte, offset int64) int {
	return 1 + bytes.Count(text[:min(max(offset, 0), int64(len(text)))], []byte("\n"))
}

// kindName returns JSON's word for what a type is written as.
func kindName(t reflect.Type) string {
	switch t.Kind() {
	case reflect.String:
		return "string"
	case reflect.Bool:
		return "boolean"
	case reflect.Slice, reflect.Array:
		return "list"
	case reflect.Struct, reflect.Pointer:
		return "object"
	}
	return "number"
}

// complete holds what was decoded against the JSON that it was decoded from. Numbers
// whose key is missing become None, where the decoder leaves 0. A key that is missing or
// null is an error where there has to be a value: an object, a list, a plain text, a
// count, and each of a vector's coordinates.
func complete(value reflect.Value, tree any, path string) error {
	switch value.Kind() {
	case reflect.Pointer:
		if value.IsNil() {
			return nil
		}
		return complete(value.Elem(), tree, path)
	case reflect.Struct:
		object, isObject := tree.(map[string]any)
		if !isObject {
			return inputError("the key %q is null, want an object", path)
		}
		return completeKeys(value, object, path)
	case reflect.Slice:
		items, isList := tree.([]any)
		if !isList {
			return inputError("the key %q is null, want a list", path)
		}
		for i := range items {
			if err := complete(value.Index(i), items[i], fmt.Sprintf("%s[%d]", path, i)); err != nil {
				return err
			}
		}
		return nil
	case reflect.Array:
		items, isList := tree.([]any)
		if !isList || len(items) != value.Len() {
			return inputError("the key %q has %d numbers, want %d", path, len(items), value.Len())
		}
		for i := range items {
			if err := complete(value.Index(i), items[i], fmt.Sprintf("%s[%d]", path, i)); err != nil {
				return err
			}
		}
		return nil
	}
	if tree == nil && !mayLack(value.Type()) {
		return inputError("the key %q is null, want a %s", path, kindName(value.Type()))
	}
	return nil
}

// completeKeys is complete for the fields of a struct.
func completeKeys(value reflect.Value, object map[string]any, path string) error {
	for i := range value.NumField() {
		field := value.Type().Field(i)
		if field.Anonymous {
			if err := completeKeys(value.Field(i), object, path); err != nil {
				return err
			}
			continue
		}
		key, options, _ := strings.Cut(field.Tag.Get("json"), ",")
		if key == "-" {
			continue
		}
		place := strings.TrimPrefix(path+"."+key, ".")
		tree, isThere := object[key]
		switch {
		case isThere:
			if err := complete(value.Field(i), tree, place); err != nil {
				return err
			}
		case field.Type == reflect.TypeFor[Number]():
			value.Field(i).Set(reflect.ValueOf(None))
		case !mayLack(field.Type) && options == "":
			return inputError("the key %q is missing: it is no whole ledger", place)
		}
	}
	return nil
}

// mayLack reports whether null stands for a value of the type that does not exist.
func mayLack(t reflect.Type) bool {
	switch t {
	case reflect.TypeFor[Number](), reflect.TypeFor[Text]():
		return true
	}
	return t.Kind() == reflect.Pointer || t.Kind() == reflect.Interface
}
