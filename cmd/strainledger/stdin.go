package main

import (
	"context"
	"errors"
	"io"
	"os"
	"path/filepath"
	"slices"

	"strainledger/cmd/strainledger/study"
	"strainledger/mesh"
	"strainledger/readers"
)

// A results opens result files. What comes through the standard input is kept in a
// temporary file, since reading needs any part of it at any time.
type results struct {
	in           io.Reader
	allowOutside bool
	kept         string        // the temporary file, "" until it is needed
	models       []*mesh.Model // to be closed
}

// open reads the headers of the files, which are blocks of one model.
func (r *results) open(ctx context.Context, files []string, options readers.Options) (*mesh.Model, error) {
	paths := slices.Clone(files)
	for i, path := range paths {
		if path != study.Stdin {
			continue
		}
		if err := r.keep(ctx); err != nil {
			return nil, err
		}
		paths[i] = r.kept
	}
	options.AllowOutside = r.allowOutside
	model, err := readers.Open(ctx, paths, options)
	if place := new(readers.Error); errors.As(err, &place) && place.Path == r.kept {
		place.Path = study.Stdin
	}
	if err != nil {
		return nil, err
	}
	r.models = append(r.models, model)
	for i := range model.Sources {
		if model.Sources[i].Path == r.kept {
			model.Sources[i].Path = study.Stdin
		}
	}
	for i := range model.Blocks {
		if model.Blocks[i] == filepath.Base(r.kept) {
			model.Blocks[i] = study.Stdin
		}
	}
	return model, nil
}

// keep copies the standard input into a temporary file, once. It does not wait for
// input that nobody wants any more.
func (r *results) keep(ctx context.Context) error {
	if r.kept != "" {
		return nil
	}
	file, err := os.CreateTemp("", "strainledger-*")
	if err != nil {
		return &readers.Error{Path: study.Stdin, Err: err}
	}
	r.kept = file.Name()
	copied := make(chan error, 1)
	go func() {
		_, err := io.Copy(file, r.in)
		copied <- errors.Join(err, file.Close())
	}()
	select {
	case err = <-copied:
	case <-ctx.Done():
		return ctx.Err()
	}
	if err != nil {
		return &readers.Error{Path: study.Stdin, Err: err}
	}
	return nil
}

// disk returns the file that holds the bytes of a source.
func (r *results) disk(path string) string {
	if path == study.Stdin && r.kept != "" {
		return r.kept
	}
	return path
}

// close lets go of the models' temporary files and of the kept input.
func (r *results) close() {
	for _, model := range r.models {
		if model.Close != nil {
			model.Close() // what is left is the system's to clean
		}
	}
	if r.kept != "" {
		os.Remove(r.kept)
	}
}
