package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strings"
	"syscall"

	"strainledger/cmd/strainledger/study"
)

// A program is one call: its streams, and the worst that has happened in it.
type program struct {
	in   io.Reader
	out  io.Writer
	err  io.Writer
	code int
}

// run does what the arguments say and returns the exit code. Data goes to stdout,
// everything else to stderr.
func run(args []string, stdin io.Reader, stdout, stderr io.Writer) int {
	signal.Ignore(syscall.SIGPIPE) // a closed pipe is an error of the write, which print takes care of
	ctx, stop := untilInterrupted(context.Background())
	defer stop()
	p := &program{in: stdin, out: stdout, err: stderr}
	root := newRoot(p)
	root.SetArgs(args)
	if err := root.ExecuteContext(ctx); err != nil {
		p.fail(err)
	}
	if cause := new(interruption); errors.As(context.Cause(ctx), &cause) {
		p.fail(cause)
	}
	return p.code
}

// An interruption is the end of a run by a signal.
type interruption struct{ signal os.Signal }

func (i *interruption) Error() string { return "interrupted; nothing half-written is left" }

// untilInterrupted returns a context that SIGINT or SIGTERM cancels, with an
// *interruption as its cause. A second signal ends the program as the system does.
func untilInterrupted(parent context.Context) (ctx context.Context, stop func()) {
	ctx, cancel := context.WithCancelCause(parent)
	signals := make(chan os.Signal, 1)
	signal.Notify(signals, os.Interrupt, syscall.SIGTERM)
	go func() {
		select {
		case received := <-signals:
			signal.Stop(signals)
			cancel(&interruption{received})
		case <-ctx.Done():
		}
	}()
	return ctx, func() {
		signal.Stop(signals)
		cancel(nil)
	}
}

// fail notes an error's exit code and prints one line for it, or one for each fault
// of a study. What only follows from an interruption is not printed.
func (p *program) fail(err error) {
	p.note(exitCode(err))
	if errors.Is(err, context.Canceled) {
		return
	}
	if faults := (study.Faults{}); errors.As(err, &faults) {
		for _, fault := range faults {
			p.message("%v", fault)
		}
		return
	}
	p.message("%v", err)
}

// note keeps the worst exit code.
func (p *program) note(code int) { p.code = max(p.code, code) }

// message writes one line to stderr.
func (p *program) message(format string, values ...any) {
	text := fmt.Sprintf(format, values...)
	fmt.Fprintln(p.err, "strainledger: "+strings.ReplaceAll(strings.TrimSpace(text), "\n", "; "))
}

// print writes data to stdout. A pipe that its reader has closed ends the output
// quietly.
func (p *program) print(write func(io.Writer) error) error {
	err := write(p.out)
	if errors.Is(err, syscall.EPIPE) || err == nil {
		return nil
	}
	return &reportError{fmt.Errorf("standard output: %w", err)}
}
