package main

import (
	"os"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"
)

// bar shows the progress of one stage after another on a terminal: how much is
// done, at what rate, and the time left. Away from a terminal it shows
// nothing. It uses no colour.
type bar struct {
	streams Streams
	current *progressbar.ProgressBar
}

// newBar returns a bar for the streams of a command.
func newBar(s Streams) *bar { return &bar{streams: s} }

// Begin starts a stage of total steps, −1 when their number is unknown.
func (b *bar) Begin(stage string, total int64, unit string) {
	b.End()
	f, ok := b.streams.Err.(*os.File)
	if !ok || !term.IsTerminal(int(f.Fd())) {
		return
	}
	options := []progressbar.Option{
		progressbar.OptionSetWriter(f),
		progressbar.OptionSetDescription(stage),
		progressbar.OptionSetWidth(24),
		progressbar.OptionThrottle(100e6),
		progressbar.OptionClearOnFinish(),
		progressbar.OptionSetPredictTime(true),
		progressbar.OptionShowCount(),
	}
	if unit == "bytes" {
		options = append(options, progressbar.OptionShowBytes(true))
	} else {
		options = append(options, progressbar.OptionShowIts(), progressbar.OptionSetItsString(unit))
	}
	b.current = progressbar.NewOptions64(total, options...)
}

// Step counts n more steps done.
func (b *bar) Step(n int64) {
	if b.current != nil {
		_ = b.current.Add64(n) // a bar that cannot be drawn must not stop the work
	}
}

// End ends the stage and clears its line.
func (b *bar) End() {
	if b.current != nil {
		_ = b.current.Finish()
		b.current = nil
	}
}
