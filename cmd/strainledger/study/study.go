// Package study reads what is to be done: a study file, the flags of the command
// line, or both, into the options of the account.
//
// A study file is TOML. Its form is the table of keys in keys.go. Whatever is wrong
// with it is reported at once, each fault with its line and column: keys that are not
// known (with the nearest that is), values of the wrong kind, numbers that cannot be,
// names that nothing has, keys that need each other, and keys that are not built yet.
// Nothing that a study says is ever ignored.
package study

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"

	"strainledger/energy"
)

// A Study says what is tallied and how.
type Study struct {
	Path    string // as the caller gave it; "" without a study file
	SHA256  string // of the study file, in hexadecimal; "" without one
	Options energy.Options
	Files   []string // result files in the order given, globs expanded
	Time    Time
}

// A Time names one of the states that result files hold.
type Time struct {
	First bool
	Value *float64 // the state of that time; nil: the first or the last one
}

// maxStudyBytes is the size up to which a file is taken for a study. A region takes
// about a hundred bytes.
const maxStudyBytes = 1 << 20

// Read reads a study: from the file of that path, from the flags over it, or from the
// flags alone where the path is empty. Files, where there are any, are tallied in
// place of those that the study names. The error is of type Faults.
func Read(path string, flags Flags, files []string) (*Study, error) {
	var data []byte
	if path != "" {
		var err error
		if data, err = readFile(path); err != nil {
			return nil, Faults{{Path: path, Message: err.Error()}}
		}
	}
	to := &faults{path: path}
	study, root := parseStudy(path, data, flags, to)
	if root == nil {
		return nil, to.err()
	}
	named := root.itemsOf("input", "files")
	if len(files) > 0 {
		named = nil
		for _, file := range files {
			named = append(named, &node{shape: isText, text: file})
		}
	}
	study.Files = expand(filepath.Dir(path), named, to)
	if err := to.err(); err != nil {
		return nil, err
	}
	return study, nil
}

// readFile reads a study file of bounded size.
func readFile(path string) ([]byte, error) {
	var data []byte
	file, err := os.Open(path)
	if err == nil {
		defer file.Close()
		data, err = io.ReadAll(io.LimitReader(file, maxStudyBytes+1))
	}
	if cause := new(os.PathError); errors.As(err, &cause) {
		err = cause.Err // the path stands before the message already
	}
	switch {
	case err != nil:
		return nil, fmt.Errorf("cannot read the study file: %w; give the path of a file that exists and can be read", err)
	case len(data) > maxStudyBytes:
		return nil, fmt.Errorf("larger than 1 MiB, so no study file; give a text of a few hundred lines")
	}
	return data, nil
}

// parseStudy reads everything of a study but its files. The tree is nil where the
// text is no TOML.
func parseStudy(path string, data []byte, flags Flags, to *faults) (*Study, *node) {
	root := parse(data, to)
	if root == nil {
		return nil, nil
	}
	flags.add(root, to)
	check(root, to)
	study := &Study{Path: path, Options: options(root, filepath.Dir(path), to), Time: timeOf(root)}
	if path != "" {
		sum := sha256.Sum256(data)
		study.SHA256 = hex.EncodeToString(sum[:])
	}
	return study, root
}

// timeOf returns the state that the study names, the last one by default.
func timeOf(root *node) Time {
	stated := root.get("input", "time")
	switch {
	case stated == nil:
		return Time{}
	case stated.shape == isText:
		return Time{First: stated.text == "first"}
	}
	return Time{Value: &stated.number}
}
