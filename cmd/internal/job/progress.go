package job

import "strandwise/channels"

// Progress is told how far the work is. It is called from one goroutine at a
// time.
type Progress interface {
	// Begin starts a stage of total steps of a unit, −1 when their number is
	// unknown. It ends the stage before.
	Begin(stage string, total int64, unit string)
	Step(n int64)
	End()
}

// counted steps the progress for each take of a stream.
func counted(takes channels.Stream, p Progress) channels.Stream {
	return func(yield func(*channels.Take, error) bool) {
		for t, err := range takes {
			if err == nil {
				p.Step(1)
			}
			if !yield(t, err) {
				return
			}
		}
	}
}
