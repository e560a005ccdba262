package export

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"unicode/utf8"

	"strandwise/channels"
)

// maxFrames is the number of frames that fit the page of one list.
const maxFrames = 1 << 27

// check reports why a take cannot stand in the set.
func (b *Bucket) check(t *channels.Take) error {
	if err := b.checkLayout(t); err != nil {
		return fmt.Errorf("take %s: %w", t.ID, err)
	}
	for _, f := range []func(*channels.Take) error{checkTexts, checkMaking, checkClock, checkValues} {
		if err := f(t); err != nil {
			return fmt.Errorf("take %s: %w", t.ID, err)
		}
	}
	if at := BucketOf(sourceOf(t), b.set.options.Buckets); at != b.number {
		return fmt.Errorf("take %s: it belongs to bucket %d, not %d", t.ID, at, b.number)
	}
	return nil
}

func (b *Bucket) checkLayout(t *channels.Take) error {
	if t.Layout != b.accepts {
		if t.Layout == nil || !slices.Equal(t.Layout.Channels, b.set.layout.Channels) {
			return errors.New("its channels are not those of the set")
		}
		b.accepts = t.Layout
	}
	if n := t.Frames(); n == 0 || n > maxFrames || len(t.Data) != n*t.Width() {
		return fmt.Errorf("it has %d values for %d frames of %d channels; a take in a set has 1 to %d frames", len(t.Data), n, t.Width(), maxFrames)
	}
	if t.Split != channels.None && t.Split != channels.Train && t.Split != channels.Test {
		return fmt.Errorf("unknown split %q; legal splits are train and test", t.Split)
	}
	return nil
}

func checkTexts(t *channels.Take) error {
	if t.ID == "" {
		return errors.New("a take without an id")
	}
	texts := []string{t.ID, t.Label, t.Subject, t.Session}
	if t.Made != nil {
		texts = append(texts, t.Made.Source, t.Made.Method)
	}
	for _, s := range texts {
		if !utf8.ValidString(s) {
			return fmt.Errorf("text %q is not UTF-8", s)
		}
	}
	return nil
}

func checkMaking(t *channels.Take) error {
	m := t.Made
	switch {
	case m == nil:
		return nil
	case t.Split == channels.Test:
		return errors.New("a synthetic take cannot be in the split test")
	case m.Source == "":
		return errors.New("a synthetic take needs a source take")
	case !fitsInt32(m.Draw) || !fitsInt32(m.Rank):
		return fmt.Errorf("draw %d or rank %d is not a 32-bit number", m.Draw, m.Rank)
	}
	for name, v := range m.Parameters {
		if math.IsNaN(v) || math.IsInf(v, 0) || !utf8.ValidString(name) {
			return fmt.Errorf("parameter %q is %g, which JSON cannot hold", name, v)
		}
	}
	return nil
}

func fitsInt32(n int) bool { return n >= math.MinInt32 && n <= math.MaxInt32 }

func checkClock(t *channels.Take) error {
	for i, at := range t.Time {
		if math.IsNaN(at) || math.IsInf(at, 0) || (i > 0 && at <= t.Time[i-1]) {
			return fmt.Errorf("frame %d: time %g s does not come after the frame before", i, at)
		}
		if i > 0 && float32(at-t.Time[0]) <= float32(t.Time[i-1]-t.Time[0]) {
			return fmt.Errorf("frame %d comes %.3g s after the frame before, which 32-bit floats cannot tell %.4g s from the start of the take; cut it into shorter takes", i, at-t.Time[i-1], at-t.Time[0])
		}
	}
	return nil
}

// checkValues reports the first value that a 32-bit float cannot hold.
func checkValues(t *channels.Take) error {
	for i, v := range t.Data {
		if !(math.Abs(v) <= math.MaxFloat32) {
			c := t.Layout.Channels[i%t.Width()]
			return fmt.Errorf("frame %d: channel %s: %g is not a 32-bit float", i/t.Width(), c.Name, v)
		}
	}
	return nil
}

// checkNames reports channel names that cannot be columns.
func checkNames(l *channels.Layout) error {
	if len(l.Channels) == 0 {
		return errors.New("a set needs at least one channel")
	}
	seen := map[string]string{}
	for _, c := range l.Channels {
		if c.Name == "" || !utf8.ValidString(c.Name) {
			return fmt.Errorf("channel name %q is empty or not UTF-8", c.Name)
		}
		column := columnName(c.Name)
		if other, twice := seen[column]; twice {
			return fmt.Errorf("channels %s and %s would share the column %s; rename one", other, c.Name, column)
		}
		seen[column] = c.Name
	}
	return nil
}

// columnName returns the column of a channel: its name, or its name and
// "_channel" where a table has a column of that name already, or the split's
// folders would. The same column is used in every table.
func columnName(channel string) string {
	for _, c := range slices.Concat(fixedTakeColumns(), fixedFrameColumns(), fixedWindowColumns()) {
		if strings.EqualFold(c.Name, channel) {
			return channel + "_channel"
		}
	}
	if strings.EqualFold(channel, "split") {
		return channel + "_channel"
	}
	return channel
}
