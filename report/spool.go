package report

import (
	"fmt"
	"os"
)

// A spool is a temporary file. Where the system can, its name goes at once, so that
// nothing is left behind however the program ends.
type spool struct {
	target    string // the file that it is needed for, for messages
	file      *os.File
	isRemoved bool
	size      int64 // bytes appended
}

// newSpool creates a spool in a folder.
func newSpool(folder, target string) (*spool, error) {
	file, err := os.CreateTemp(folder, ".annotated-*")
	if err != nil {
		return nil, fmt.Errorf("%s: %w", target, withoutPath(err))
	}
	return &spool{target: target, file: file, isRemoved: os.Remove(file.Name()) == nil}, nil
}

// WriteAt writes at a place; several may do so at once.
func (s *spool) WriteAt(data []byte, at int64) (int, error) {
	n, err := s.file.WriteAt(data, at)
	if err != nil {
		err = fmt.Errorf("%s: %w", s.target, withoutPath(err))
	}
	return n, err
}

// append writes behind all that was appended.
func (s *spool) append(data []byte) error {
	n, err := s.WriteAt(data, s.size)
	s.size += int64(n)
	return err
}

// ReadAt reads from a place; several may do so at once.
func (s *spool) ReadAt(to []byte, at int64) (int, error) {
	n, err := s.file.ReadAt(to, at)
	if err != nil {
		err = fmt.Errorf("%s: %w", s.target, withoutPath(err))
	}
	return n, err
}

// close lets go of the file.
func (s *spool) close() {
	s.file.Close()
	if !s.isRemoved {
		os.Remove(s.file.Name())
	}
}
