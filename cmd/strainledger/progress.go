package main

import (
	"fmt"
	"io"
	"strings"
	"sync"
	"sync/atomic"
	"time"
)

// When a progress bar appears, and how often it changes.
const (
	progressDelay    = time.Second
	progressInterval = time.Second / 5
)

// A progress shows on a terminal how many of the cells are done. It appears when the
// work takes longer than its delay and is gone when it has ended.
type progress struct {
	to     io.Writer
	total  int64
	done   atomic.Int64
	stop   chan struct{}
	closed sync.WaitGroup
}

// startProgress shows the progress of the work on total cells, which counts them in
// done. Nothing is written before the delay is over.
func startProgress(to io.Writer, total int64, delay, interval time.Duration) *progress {
	p := &progress{to: to, total: total, stop: make(chan struct{})}
	p.closed.Go(func() { p.show(delay, interval) })
	return p
}

func (p *progress) show(delay, interval time.Duration) {
	select {
	case <-time.After(delay):
	case <-p.stop:
		return
	}
	ticks := time.NewTicker(interval)
	defer ticks.Stop()
	for {
		fmt.Fprint(p.to, "\r"+progressLine(p.done.Load(), p.total))
		select {
		case <-ticks.C:
		case <-p.stop:
			fmt.Fprint(p.to, "\r"+strings.Repeat(" ", progressWidth)+"\r")
			return
		}
	}
}

// end erases the bar.
func (p *progress) end() {
	close(p.stop)
	p.closed.Wait()
}

// The columns of the bar alone and of the whole line.
const (
	barWidth      = 30
	progressWidth = barWidth + 37
)

// progressLine returns the bar, always of the same width.
func progressLine(done, total int64) string {
	share := 1.0
	if total > 0 {
		share = min(float64(done)/float64(total), 1)
	}
	filled := int(share * barWidth)
	bar := strings.Repeat("=", filled) + strings.Repeat(" ", barWidth-filled)
	line := fmt.Sprintf("[%s] %3.0f %% of %d cells", bar, 100*share, total)
	return fmt.Sprintf("%-*.*s", progressWidth, progressWidth, line)
}
