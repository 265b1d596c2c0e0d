package report

import (
	"bufio"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
)

// Drafts are files under names of their own, which take their true names together.
type drafts struct {
	files []draft
	made  []string // folders that were missing
}

type draft struct{ path, target string }

// create makes a draft of a file, and its folder where it is missing, and lets content
// fill it. Errors of the file itself name the file.
func (d *drafts) create(target string, content func(*os.File) error) error {
	folder := filepath.Dir(target)
	if os.Mkdir(folder, 0o777) == nil {
		d.made = append(d.made, folder)
	}
	path := filepath.Join(folder, fmt.Sprintf(".%s.%08x", filepath.Base(target), rand.Uint32()))
	out, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return fmt.Errorf("%s: %w", target, withoutPath(err))
	}
	d.files = append(d.files, draft{path, target})
	if err := content(out); err != nil {
		out.Close()
		return err
	}
	if err := out.Close(); err != nil {
		return fmt.Errorf("%s: %w", target, withoutPath(err))
	}
	return nil
}

// write makes a draft front to back. All errors name the file.
func (d *drafts) write(target string, content func(io.Writer) error) error {
	return d.create(target, func(out *os.File) error {
		buffer := bufio.NewWriter(out)
		err := content(buffer)
		if full := buffer.Flush(); full != nil { // which is why the content has failed too
			err = withoutPath(full)
		}
		if err != nil {
			return fmt.Errorf("%s: %w", target, err)
		}
		return nil
	})
}

// commit gives the drafts their names.
func (d *drafts) commit() error {
	for _, file := range d.files {
		if err := os.Rename(file.path, file.target); err != nil {
			return fmt.Errorf("%s: %w", file.target, withoutPath(err))
		}
	}
	return nil
}

// discard removes drafts that have not become files, and folders that were made for them.
func (d *drafts) discard() {
	for _, file := range d.files {
		os.Remove(file.path) // fails where the draft has become the file
	}
	for _, folder := range d.made {
		os.Remove(folder) // fails where files are in it
	}
}
