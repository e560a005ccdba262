package channels

import (
	"fmt"
	"math"
	"slices"

	"strandwise/channels/body"
)

// Split names the part of a set a take belongs to.
type Split string

// The splits. None is a take whose recording states no split; it trains.
const (
	None  Split = ""
	Train Split = "train"
	Test  Split = "test"
)

// ParseSplit reads a split as recordings spell it; an empty text is None.
func ParseSplit(text string) (Split, error) {
	switch Split(text) {
	case None, Train, Test:
		return Split(text), nil
	}
	return None, fmt.Errorf("unknown split %q; legal splits are train and test", text)
}

// Origin tells recorded takes from made ones.
type Origin string

// The two origins of a take.
const (
	Recorded  Origin = "recorded"
	Synthetic Origin = "synthetic"
)

// Take is one performance of one gesture: frames × channels on one clock.
type Take struct {
	ID      string // unique among the recordings of one run
	Label   string // what was performed
	Subject string // by whom; may be empty
	Session string // on which occasion; may be empty
	Split   Split
	Where   string // file and line the take begins at, for messages; empty for synthetic takes

	Layout   *Layout        // shared and read-only
	Skeleton *body.Skeleton // whose joints the channels are, nil for none; shared and read-only

	Time []float64 // seconds, one per frame, strictly increasing
	Data []float64 // frames × channels, frame-major, in the layout's units

	Made *Making // how a synthetic take was made; nil for a recorded one
}

// Making tells how a synthetic take was made, well enough to make it again
// from the same recordings, plan and seed.
type Making struct {
	Source     string             // id of the take it was made from
	Draw       int                // which draw of that take, from 0
	Rank       int                // place in the order of choice among the draws of that take, from 0
	Method     string             // name of the method
	Parameters map[string]float64 // what was drawn, by name with its unit: "trim_start_s"
}

// Origin says whether the take was recorded or made.
func (t *Take) Origin() Origin {
	if t.Made != nil {
		return Synthetic
	}
	return Recorded
}

// Frames returns the number of frames.
func (t *Take) Frames() int { return len(t.Time) }

// Width returns the number of channels.
func (t *Take) Width() int { return len(t.Layout.Channels) }

// Frame returns the channel values of frame i, a view into Data.
func (t *Take) Frame(i int) []float64 {
	w := t.Width()
	return t.Data[i*w : (i+1)*w : (i+1)*w]
}

// Duration returns the time from the first frame to the last in seconds, 0
// for a take of fewer than two frames.
func (t *Take) Duration() float64 {
	if len(t.Time) < 2 {
		return 0
	}
	return t.Time[len(t.Time)-1] - t.Time[0]
}

// Rate returns the mean frame rate in Hz, 0 for a take without duration.
func (t *Take) Rate() float64 {
	if d := t.Duration(); d > 0 {
		return float64(len(t.Time)-1) / d
	}
	return 0
}

// Validate reports the first reason why no variation can be drawn from the
// take: too few frames, a clock that stands or runs back, a value that is not
// a finite number, or channels that never move. The text names the frame and
// channel; the caller adds the file and line.
func (t *Take) Validate() error {
	w := t.Width()
	if n := t.Frames(); n < 2 {
		return fmt.Errorf("take %s has %d frame; a take needs at least 2", t.ID, n)
	}
	if len(t.Data) != w*t.Frames() {
		return fmt.Errorf("take %s has %d values for %d frames of %d channels", t.ID, len(t.Data), t.Frames(), w)
	}
	moves := false
	for i := range t.Time {
		if math.IsNaN(t.Time[i]) || math.IsInf(t.Time[i], 0) {
			return fmt.Errorf("take %s: frame %d: time %g s is not a finite number", t.ID, i, t.Time[i])
		}
		if i > 0 && t.Time[i] <= t.Time[i-1] {
			return fmt.Errorf("take %s: frame %d: time %g s does not come after %g s", t.ID, i, t.Time[i], t.Time[i-1])
		}
		for c, v := range t.Frame(i) {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return fmt.Errorf("take %s: frame %d: channel %s is %g, not a finite number", t.ID, i, t.Layout.Channels[c].Name, v)
			}
			moves = moves || v != t.Data[c]
		}
	}
	if !moves {
		return fmt.Errorf("take %s is constant: no channel changes over its %d frames", t.ID, t.Frames())
	}
	return nil
}

// Clone returns a copy of the take with samples of its own.
func (t *Take) Clone() *Take {
	c := *t
	c.Time, c.Data = slices.Clone(t.Time), slices.Clone(t.Data)
	return &c
}
