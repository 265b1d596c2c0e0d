package study

import (
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
)

// Stdin is the name that stands for the standard input on the command line.
const Stdin = "-"

// expand resolves names of files against a folder, "" being the current one. A glob
// becomes the files it matches in natural order; a name of an existing file is never
// taken for a glob. Refused: a glob that matches nothing, a folder, and a file named
// twice, also by two names for one file. Whether the others exist is for their
// reader to say.
func expand(folder string, named []*node, to *faults) []string {
	var files []string
	first := map[string]*node{}
	for _, name := range named {
		for _, file := range match(folder, name, to) {
			identity := file
			if resolved, err := filepath.EvalSymlinks(file); err == nil {
				identity = resolved
			}
			if identity, err := filepath.Abs(identity); err == nil && first[identity] != nil {
				to.add(name.place, "the file %s is named twice; name it once", quote(file))
				continue
			} else {
				first[identity] = name
			}
			files = append(files, file)
		}
	}
	return files
}

// match returns the file of a name, or the files of a glob.
func match(folder string, name *node, to *faults) []string {
	path := name.text
	if name.place.line > 0 && !filepath.IsAbs(path) {
		path = filepath.Join(folder, path)
	}
	if information, err := os.Stat(path); err == nil {
		if information.IsDir() {
			to.add(name.place, "%s is a folder; name the files in it, such as %s", quote(name.text), quote(filepath.Join(name.text, "*.vtu")))
			return nil
		}
		return []string{path}
	}
	if !strings.ContainsAny(name.text, "*?[") {
		return []string{path}
	}
	pattern := name.text
	if path != name.text {
		pattern = filepath.Join(literally(folder), pattern)
	}
	matches, err := filepath.Glob(pattern)
	if err != nil {
		to.add(name.place, "%s is no pattern for file names: %v; close its brackets", quote(name.text), err)
		return nil
	}
	matches = slices.DeleteFunc(matches, func(path string) bool {
		information, err := os.Stat(path)
		return err == nil && information.IsDir()
	})
	if len(matches) == 0 {
		to.add(name.place, "no file matches %s; mend the pattern or export the files first", quote(name.text))
	}
	slices.SortFunc(matches, naturally)
	return matches
}

// literally returns a folder's name as a pattern that matches nothing else. Windows
// has no way to say so, and no file names with these characters but the bracket.
func literally(folder string) string {
	if runtime.GOOS == "windows" {
		return folder
	}
	return strings.NewReplacer(`\`, `\\`, "*", `\*`, "?", `\?`, "[", `\[`).Replace(folder)
}

// naturally compares names so that runs of digits go by their number: step 2 comes
// before step 10. Names that differ in leading zeros alone go by their text.
func naturally(a, b string) int {
	left, right := a, b
	for left != "" && right != "" {
		if isDigit(left[0]) && isDigit(right[0]) {
			var x, y string
			x, left = cutDigits(left)
			y, right = cutDigits(right)
			if len(x) != len(y) {
				return len(x) - len(y)
			}
			if x != y {
				return strings.Compare(x, y)
			}
			continue
		}
		if left[0] != right[0] {
			return int(left[0]) - int(right[0])
		}
		left, right = left[1:], right[1:]
	}
	if len(left) != len(right) {
		return len(left) - len(right)
	}
	return strings.Compare(a, b)
}

func isDigit(b byte) bool { return b >= '0' && b <= '9' }

// cutDigits takes the digits from the start of a text, leading zeros dropped.
func cutDigits(text string) (digits, rest string) {
	end := 0
	for end < len(text) && isDigit(text[end]) {
		end++
	}
	return strings.TrimLeft(text[:end], "0"), text[end:]
}
