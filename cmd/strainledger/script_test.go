package main

import (
	"errors"
	"os"
	"os/exec"
	"strconv"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"strainledger": main})
}

// Whole runs of the program as its users start it. The command exits CODE PROGRAM...
// demands an exit code.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{
		Dir:                 "testdata/script",
		RequireExplicitExec: true,
		RequireUniqueNames:  true,
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"exits": exits,
		},
		Setup: func(environment *testscript.Env) error {
			environment.Setenv("TMPDIR", environment.WorkDir+"/tmp")
			return os.Mkdir(environment.WorkDir+"/tmp", 0o777)
		},
	})
}

func exits(script *testscript.TestScript, negated bool, args []string) {
	if negated || len(args) < 2 {
		script.Fatalf("usage: exits CODE PROGRAM [ARGUMENT...]")
	}
	want, err := strconv.Atoi(args[0])
	if err != nil {
		script.Fatalf("%s is no exit code", args[0])
	}
	got := 0
	if err := script.Exec(args[1], args[2:]...); err != nil {
		failed := new(exec.ExitError)
		if !errors.As(err, &failed) {
			script.Fatalf("%v", err)
		}
		got = failed.ExitCode()
	}
	if got != want {
		script.Fatalf("exit code %d, want %d", got, want)
	}
}
