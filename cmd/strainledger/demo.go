package main

import (
	"bytes"
	"context"
	"embed"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"strainledger/cmd/strainledger/study"
)

// demoFiles holds three studies of the mooring bracket of a small floating pontoon,
// which differ in the radius of one fillet, with their results. How the results were
// made stands in testdata/demo/make_demo.py.
//
//go:embed demo/*.toml demo/*.vtu
var demoFiles embed.FS

// demoStudies are the built-in studies in the order of their radius.
var demoStudies = []string{"bracket-r2", "bracket-r5", "bracket-r9"}

// newDemo returns the command demo.
func newDemo(p *program) *cobra.Command {
	options := &tallyOptions{}
	command := &cobra.Command{
		Use:   "demo [DIR] [FLAG...]",
		Short: "tally three built-in studies: a mooring bracket with three fillet radii",
		Example: `  strainledger demo
  strainledger demo bracket-demo`,
		Long: `Writes the built-in studies and their result files to DIR and tallies each, with its
reports beside them. Without DIR nothing is left on the disk. The studies are a place
to start from for one of your own.`,
		Args: atMostOne("folder"),
		RunE: func(command *cobra.Command, args []string) error {
			if err := options.commonOptions.check(command); err != nil {
				return err
			}
			if len(args) == 0 {
				return p.demoInPassing(command.Context(), options)
			}
			return p.demo(command.Context(), args[0], false, options)
		},
	}
	options.commonOptions.declare(command.Flags())
	return command
}

// demoInPassing tallies the built-in studies in a folder that it removes.
func (p *program) demoInPassing(ctx context.Context, options *tallyOptions) error {
	folder, err := os.MkdirTemp("", "strainledger-demo-*")
	if err != nil {
		return &reportError{err}
	}
	defer os.RemoveAll(folder)
	return p.demo(ctx, folder, true, options)
}

// demo writes the built-in studies to a folder and tallies them, with reports there
// unless the folder is temporary.
func (p *program) demo(ctx context.Context, folder string, temporary bool, options *tallyOptions) error {
	if err := writeDemo(folder); err != nil {
		return &reportError{err}
	}
	var accounts []*account
	for _, name := range demoStudies {
		read, err := study.Read(filepath.Join(folder, name+".toml"), study.Flags{}, nil)
		if err != nil {
			return err
		}
		a := &account{study: read, brief: temporary, text: true, label: name + ": "}
		if !temporary {
			a.out = filepath.Join(folder, name)
		}
		accounts = append(accounts, a)
	}
	return p.tallyAll(ctx, accounts, options)
}

// writeDemo writes the built-in files to a folder, which it creates. A file that is
// there already stays; one that is not the demo's is an error.
func writeDemo(folder string) error {
	if err := os.MkdirAll(folder, 0o777); err != nil {
		return err
	}
	files, err := fs.ReadDir(demoFiles, "demo")
	if err != nil {
		return err
	}
	for _, file := range files {
		data, err := demoFiles.ReadFile("demo/" + file.Name())
		if err != nil {
			return err
		}
		if err := writeOnce(filepath.Join(folder, file.Name()), data); err != nil {
			return err
		}
	}
	return nil
}

// writeOnce writes a file under a temporary name and gives it its own when it is
// whole. One of the same content may be there already.
func writeOnce(path string, data []byte) error {
	switch there, err := os.ReadFile(path); {
	case err == nil && bytes.Equal(there, data):
		return nil
	case err == nil:
		return fmt.Errorf("%s is there already and is not the demo's; name an empty folder", path)
	case !errors.Is(err, fs.ErrNotExist):
		return err
	}
	file, err := os.CreateTemp(filepath.Dir(path), "."+filepath.Base(path)+"-*")
	if err != nil {
		return err
	}
	defer os.Remove(file.Name()) // fails where it has its own name
	_, err = file.Write(data)
	if err := errors.Join(err, file.Chmod(0o666), file.Close()); err != nil {
		return err
	}
	return os.Rename(file.Name(), path)
}
