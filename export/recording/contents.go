package recording

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"unicode/utf8"

	"strandwise/channels"
	"strandwise/export"
)

// Writer writes takes into one file. Each of them must have been noted in the
// contents the writer was made with. Add copies what it needs of a take and
// reports one that cannot stand in the file, of which nothing is written. Close
// ends the file but does not close what is under it. After a failed write the
// file is not whole, and every further call returns that failure.
type Writer interface {
	Add(t *channels.Take) error
	Close() error
}

// Contents is what must be known of all takes before the first is written. The
// zero value knows of none.
type Contents struct {
	// Single holds takes to what 32-bit floats can hold, as Parquet and Arrow
	// need it. Those refuse a take that does not fit in any case; with Single
	// that is known before anything is written.
	Single bool

	Layout *channels.Layout // that all of them share; nil before the first
	Takes  int
	Frames int
	Splits bool // some take states a split

	facts export.TakeFacts
}

// Note takes up a take. The error tells of one that no file can hold: it has no
// frames, no id, another layout than the first, a time that is no finite number
// or a skeleton that is none; or of one that does not fit, if Single.
func (c *Contents) Note(t *channels.Take) error {
	if c.Layout == nil {
		c.Layout = t.Layout
	}
	if err := c.check(t, c.Single); err != nil {
		return err
	}
	if err := c.facts.Note(t); err != nil {
		return err
	}
	c.Takes++
	c.Frames += t.Frames()
	c.Splits = c.Splits || t.Split != channels.None
	return nil
}

// check reports why a take cannot stand in a file, of 32-bit floats if single.
func (c *Contents) check(t *channels.Take, single bool) error {
	err := c.checkShape(t)
	if err == nil {
		err = checkClock(t)
	}
	if err == nil && single {
		err = checkSingle(t)
	}
	if err != nil {
		return fmt.Errorf("take %s %w", t.ID, err)
	}
	return nil
}

func (c *Contents) checkShape(t *channels.Take) error {
	if t.ID == "" {
		return errors.New("has no id")
	}
	for _, text := range []string{t.ID, t.Label, t.Subject, t.Session, string(t.Split)} {
		if !utf8.ValidString(text) {
			return fmt.Errorf("has the text %q, which is not UTF-8", text)
		}
	}
	switch {
	case t.Layout != c.Layout && (t.Layout == nil || !slices.Equal(t.Layout.Channels, c.Layout.Channels)):
		return errors.New("has other channels than the takes before")
	case t.Frames() == 0:
		return errors.New("has no frames")
	case len(t.Data) != t.Frames()*t.Width():
		return fmt.Errorf("has %d values for %d frames of %d channels", len(t.Data), t.Frames(), t.Width())
	}
	return nil
}

func checkClock(t *channels.Take) error {
	for i, at := range t.Time {
		if math.IsNaN(at) || math.IsInf(at, 0) {
			return fmt.Errorf("has a time of %g s in frame %d, not a finite number", at, i)
		}
	}
	return nil
}

// checkSingle reports why a take cannot be held in 32-bit floats: a value
// beyond their range, or frames whose times become one.
func checkSingle(t *channels.Take) error {
	for i, v := range t.Data {
		if math.Abs(v) > math.MaxFloat32 {
			return fmt.Errorf("has %g in frame %d of channel %s, which is beyond 32-bit floats; write CSV, which holds 64-bit ones",
				v, i/t.Width(), t.Layout.Channels[i%t.Width()].Name)
		}
	}
	since := func(i int) float32 { return float32(t.Time[i] - t.Time[0]) }
	for i := 1; i < len(t.Time); i++ {
		if step := t.Time[i] - t.Time[i-1]; step != 0 && since(i) == since(i-1) {
			return fmt.Errorf("has frame %d coming %g s after the one before, which 32-bit floats cannot tell %g s from its start; cut it into shorter takes, or write CSV",
				i, step, since(i))
		}
	}
	return nil
}
