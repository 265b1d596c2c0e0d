package main

import (
	"encoding/json"
	"fmt"
	"io"
	"runtime"
	"runtime/debug"

	"github.com/spf13/cobra"
)

// A version says which program this is.
type version struct {
	Version  string `json:"version"` // of the module; (devel) where it was not built from a tag
	Commit   string `json:"commit"`  // "" where the build did not record it
	Modified bool   `json:"modified"`
	Go       string `json:"go"`
	Platform string `json:"platform"`
}

// readVersion returns what the build recorded of itself.
func readVersion() version {
	found := version{Version: "(devel)", Go: runtime.Version(), Platform: runtime.GOOS + "/" + runtime.GOARCH}
	information, ok := debug.ReadBuildInfo()
	if !ok {
		return found
	}
	if information.Main.Version != "" {
		found.Version = information.Main.Version
	}
	for _, setting := range information.Settings {
		switch setting.Key {
		case "vcs.revision":
			found.Commit = setting.Value
		case "vcs.modified":
			found.Modified = setting.Value == "true"
		}
	}
	return found
}

// newVersion returns the command version.
func newVersion(p *program) *cobra.Command {
	var asJSON bool
	command := &cobra.Command{
		Use:     "version [--json]",
		Short:   "print version, commit, Go version and platform",
		Example: "  strainledger version --json",
		Args: func(command *cobra.Command, args []string) error {
			if len(args) > 0 {
				return wrongCall(command, "found the argument %q, want none", args[0])
			}
			return nil
		},
		RunE: func(*cobra.Command, []string) error {
			return p.print(func(w io.Writer) error { return writeVersion(w, readVersion(), asJSON) })
		},
	}
	command.Flags().BoolVar(&asJSON, "json", false, "print it as JSON")
	return command
}

func writeVersion(w io.Writer, v version, asJSON bool) error {
	if asJSON {
		encoder := json.NewEncoder(w)
		encoder.SetIndent("", "  ")
		return encoder.Encode(v)
	}
	commit := v.Commit
	if commit == "" {
		commit = "not recorded"
	}
	if v.Modified {
		commit += ", modified"
	}
	_, err := fmt.Fprintf(w, "strainledger %s\ncommit %s\n%s %s\n", v.Version, commit, v.Go, v.Platform)
	return err
}
