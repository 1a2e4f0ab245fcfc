package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"sync"
	"time"

	"github.com/vbauerster/mpb/v8"
	"github.com/vbauerster/mpb/v8/decor"
	"golang.org/x/term"

	"kindwell/cmd/kindwell/internal/study"
)

// newProgress chooses how a run tells where it is: bars with the time left on
// a terminal, a plain line now and then elsewhere, nothing when quiet. The
// returned function ends the display.
func newProgress(ctx context.Context, stderr io.Writer, quiet bool) (study.Progress, func()) {
	if quiet {
		return study.Silent{}, func() {}
	}
	if f, ok := stderr.(*os.File); ok && term.IsTerminal(int(f.Fd())) {
		container := mpb.NewWithContext(ctx, mpb.WithOutput(stderr), mpb.WithWidth(40))
		return &barProgress{container: container}, container.Shutdown
	}
	return &lineProgress{out: stderr, every: 10 * time.Second}, func() {}
}

// barProgress shows one bar a stage.
type barProgress struct{ container *mpb.Progress }

func (p *barProgress) Stage(name string, steps int) study.Stage {
	bar := p.container.AddBar(int64(steps),
		mpb.PrependDecorators(decor.Name(name, decor.WCSyncSpaceR)),
		mpb.AppendDecorators(
			decor.CountersNoUnit("%d of %d", decor.WCSyncSpace),
			decor.OnComplete(decor.AverageETA(decor.ET_STYLE_MMSS, decor.WCSyncSpace), " done"),
		))
	return barStage{bar}
}

type barStage struct{ bar *mpb.Bar }

func (s barStage) Step(n int) { s.bar.IncrBy(n) }

// Done fills the bar to its end, or takes it off when work was cut short.
func (s barStage) Done() {
	if !s.bar.Completed() {
		s.bar.Abort(false)
	}
	s.bar.Wait()
}

// lineProgress prints a line when a stage starts and every so often after.
type lineProgress struct {
	out   io.Writer
	every time.Duration
	mu    sync.Mutex
}

func (p *lineProgress) Stage(name string, steps int) study.Stage {
	now := time.Now()
	return &lineStage{parent: p, name: name, steps: steps, started: now, last: now}
}

type lineStage struct {
	parent        *lineProgress
	name          string
	steps, done   int
	started, last time.Time
}

func (s *lineStage) Step(n int) {
	s.parent.mu.Lock()
	defer s.parent.mu.Unlock()
	s.done += n
	now := time.Now()
	if now.Sub(s.last) < s.parent.every || s.done == 0 {
		return
	}
	s.last = now
	spent := now.Sub(s.started)
	left := time.Duration(float64(spent) * float64(s.steps-s.done) / float64(s.done))
	fmt.Fprintf(s.parent.out, "%s: %d of %d, about %s left\n", s.name, s.done, s.steps, left.Round(time.Second))
}

func (s *lineStage) Done() {}
