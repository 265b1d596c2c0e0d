package readers

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// follow finds the file that another one names. Paths are relative to the file that
// names them. One that is absolute, or that leaves the folder of the file which the
// call names, is looked for by its base name beside the referring file; it is followed
// as it stands only if that is allowed.
func (o *opener) follow(from *file, reference string) (*file, error) {
	if reference == "" {
		return nil, malformed("found no name of a file")
	}
	path := reference
	if !filepath.IsAbs(path) {
		path = filepath.Join(filepath.Dir(from.path), filepath.FromSlash(reference))
	}
	f, err := o.find(path)
	if err != nil && strings.Contains(reference, `\`) {
		if g, slashErr := o.follow(from, strings.ReplaceAll(reference, `\`, "/")); slashErr == nil {
			return g, nil
		}
	}
	if !o.isOutside(reference, path) {
		return f, err
	}
	if o.options.AllowOutside && err == nil {
		o.remark("outside-path", fmt.Sprintf("%s names %q, which lies outside its folder", from.path, reference))
		return f, nil
	}
	beside := filepath.Join(filepath.Dir(from.path), filepath.Base(path))
	if f, err := o.find(beside); err == nil {
		o.remark("outside-path", fmt.Sprintf("%s names %q, which lies outside its folder; read %s in its place", from.path, reference, beside))
		return f, nil
	}
	return nil, &reason{ErrReference, fmt.Sprintf("found a reference to %q outside the folder and no %q beside the file; copy it there or allow paths outside",
		reference, filepath.Base(path))}
}

// isOutside reports whether a path leaves the folder of the file that the call names.
func (o *opener) isOutside(reference, path string) bool {
	if filepath.IsAbs(reference) || filepath.VolumeName(reference) != "" {
		return true
	}
	inside, err := filepath.Rel(o.root, path)
	return err != nil || inside == ".." || strings.HasPrefix(inside, ".."+string(filepath.Separator))
}

// find looks at a file that another one names.
func (o *opener) find(path string) (*file, error) {
	info, err := os.Stat(path)
	switch {
	case err != nil:
		return nil, &reason{ErrReference, fmt.Sprintf("found a reference to %q: %v", path, pathReason(err))}
	case !info.Mode().IsRegular():
		return nil, &reason{ErrReference, fmt.Sprintf("found a reference to %q, which is no regular file", path)}
	}
	return &file{path: path, disk: path, size: info.Size(), bytes: info.Size()}, nil
}

func cleanPath(f *file) string { return filepath.Clean(f.path) }

// pathReason takes the path off a system's error, which messages put before it.
func pathReason(err error) error {
	if path := new(fs.PathError); errors.As(err, &path) {
		return path.Err
	}
	return err
}
