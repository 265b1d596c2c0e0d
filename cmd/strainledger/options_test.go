package main

import (
	"bytes"
	"strings"
	"testing"
	"time"
)

func TestUseColour(t *testing.T) {
	for _, c := range []struct {
		choice, environment string
		terminal, want      bool
	}{
		{"auto", "", true, true},
		{"auto", "", false, false},
		{"always", "", false, true},
		{"never", "", true, false},
		{"always", "NO_COLOR=1", false, true},
		{"never", "FORCE_COLOR=1", true, false},
		{"auto", "NO_COLOR=1", true, false},
		{"auto", "NO_COLOR=", true, true},
		{"auto", "NO_COLOR=1 FORCE_COLOR=1", true, false},
		{"auto", "FORCE_COLOR=1", false, true},
		{"auto", "FORCE_COLOR=", false, false},
		{"auto", "FORCE_COLOR=1 TERM=dumb", false, true},
		{"auto", "TERM=dumb", true, false},
		{"auto", "TERM=xterm", true, true},
	} {
		environment := map[string]string{}
		for _, word := range strings.Fields(c.environment) {
			name, value, _ := strings.Cut(word, "=")
			environment[name] = value
		}
		if got := useColour(c.choice, func(name string) string { return environment[name] }, c.terminal); got != c.want {
			t.Errorf("%+v: %v", c, got)
		}
	}
}

func TestProgressLine(t *testing.T) {
	for _, c := range []struct {
		done, total int64
		want        string
	}{
		{0, 0, "[==============================] 100 % of 0 cells"},
		{0, 9, "[                              ]   0 % of 9 cells"},
		{3, 9, "[==========                    ]  33 % of 9 cells"},
		{12, 9, "[==============================] 100 % of 9 cells"},
		{1, 9e18, "[                              ]   0 % of 9000000000000000000 cells"},
	} {
		got := progressLine(c.done, c.total)
		if strings.TrimRight(got, " ") != c.want || len(got) != progressWidth {
			t.Errorf("%d of %d: %q, want %q in %d columns", c.done, c.total, got, c.want, progressWidth)
		}
	}
}

// A bar appears after its delay, follows the count, and is erased at the end.
func TestProgress(t *testing.T) {
	var quick bytes.Buffer
	bar := startProgress(&quick, 4, time.Hour, time.Millisecond)
	bar.done.Store(4)
	bar.end()
	if quick.Len() > 0 {
		t.Errorf("quick work wrote %q", quick.String())
	}
	var slow bytes.Buffer
	bar = startProgress(&slow, 4, 0, time.Millisecond)
	bar.done.Store(2)
	time.Sleep(50 * time.Millisecond)
	bar.end()
	if !strings.Contains(slow.String(), "\r"+progressLine(2, 4)) {
		t.Errorf("no half in %q", slow.String())
	}
	if erased := "\r" + strings.Repeat(" ", progressWidth) + "\r"; !strings.HasSuffix(slow.String(), erased) || strings.Contains(slow.String(), "\n") {
		t.Errorf("not erased: %q", slow.String())
	}
}
