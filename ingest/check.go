package ingest

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"strandwise/channels"
	"strandwise/ingest/clock"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
	"strandwise/ingest/signal"
)

// Check reads all recordings and reports what they hold and what is wrong with
// them. Faults of the recordings are findings and not errors: reading goes on
// with the next take, or with the next file where the rest of one cannot be
// made out. The error is a *UsageError.
//
// Step is called after each take looked at.
//
// Memory holds about 200 bytes for each take, and one take.
func (r *Recordings) Check(step func()) (*Report, error) {
	p := r.newPass(func(*channels.Take, error) bool { return true })
	p.check = newChecker()
	p.check.step = step
	if err := p.run(); err != nil {
		return nil, err
	}
	r.settle(p)
	return p.check.report(r), nil
}

// checker collects what a pass sees. It is nil in a pass that stops at the
// first fault.
type checker struct {
	step     func() // after each take
	files    []FileReport
	cells    map[cell]*tally
	findings map[string]*Finding
	order    []string // of findings, by key
	faults   int

	ids        []string // of takes, by what signal.Duplicates calls them
	splits     []channels.Split
	duplicates *signal.Duplicates
	clipping   *signal.Clipping
	gravity    map[string]signal.Verdicts // by group
}

type cell struct{ label, subject string }

type tally struct {
	takes   int
	seconds float64
}

func newChecker() *checker {
	return &checker{cells: map[cell]*tally{}, findings: map[string]*Finding{}, gravity: map[string]signal.Verdicts{}}
}

// tolerate notes a fault and tells that reading goes on. Without a checker, or
// for any other error, it does not.
func (c *checker) tolerate(err error) bool {
	var f *fault.Error
	if c == nil || !errors.As(err, &f) {
		return false
	}
	c.faults++
	if n := len(c.files); n > 0 {
		c.files[n-1].Faults++
	}
	c.add(Finding{Kind: Refused, File: f.File, Line: f.Line, Take: f.Take, Channel: f.Channel, Takes: 1, Count: 1, Text: err.Error()}, err.Error())
	return true
}

// add notes a finding, together with those before it of the same key.
func (c *checker) add(f Finding, key string) {
	key = f.Kind + "\x00" + key
	known, ok := c.findings[key]
	if !ok {
		c.findings[key] = &f
		c.order = append(c.order, key)
		return
	}
	known.Takes += f.Takes
	known.Count += f.Count
}

// open begins the report of a file.
func (c *checker) open(name string) {
	if c != nil {
		c.files = append(c.files, FileReport{File: name})
	}
}

// take looks at one raw take, in seconds and in the units of the run.
func (c *checker) take(t *raw.Take, id raw.Identity, name string, f *frame) {
	if c == nil || len(t.Time) == 0 {
		return
	}
	file := &c.files[len(c.files)-1]
	l := look{checker: c, take: t, name: name, file: file.File, frame: f}
	l.sensors = sensors(t, len(f.layout.Channels))
	fastest := l.sensors[0].times
	for _, s := range l.sensors {
		l.clock(s)
		if s.times.Step > 0 && s.times.Step < fastest.Step {
			fastest = s.times
		}
	}
	l.drift()
	file.take(fastest)
	l.signals(fastest.Step)
	c.twice(t, id, name, file.File, f)
	c.step()
}

// count counts one take of a label and subject: a raw one that was refused, or
// what a sound one became.
func (c *checker) count(t *raw.Take) {
	if c == nil || len(t.Time) == 0 {
		return
	}
	key := cell{t.Label, t.Subject}
	if c.cells[key] == nil {
		c.cells[key] = &tally{}
	}
	c.cells[key].takes++
	c.cells[key].seconds += t.Time[len(t.Time)-1] - t.Time[0]
}

// twice looks for a take like this one among those before.
func (c *checker) twice(t *raw.Take, id raw.Identity, name, file string, f *frame) {
	if c.duplicates == nil {
		c.duplicates = &signal.Duplicates{Decimal: f.decimals()}
	}
	split, _ := channels.ParseSplit(id.Split)
	earlier, found := c.duplicates.Add(uint64(len(c.ids)), t.Data, len(f.layout.Channels))
	c.ids, c.splits = append(c.ids, name), append(c.splits, split)
	if !found {
		return
	}
	text := fmt.Sprintf("is the same recording as take %s", c.ids[earlier])
	if (c.splits[earlier] == channels.Test) != (split == channels.Test) {
		text += "; one trains and one is tested, so a score would be flattered"
	}
	c.add(Finding{Kind: Twice, File: file, Line: t.Line, Take: name, Takes: 1, Count: 1, Text: text}, name)
}

// look is a look at one take.
type look struct {
	*checker
	take    *raw.Take
	name    string
	file    string
	frame   *frame
	sensors []sensor
}

// sensor is the channels of a take that were sampled together, on a clock of
// their own. In a take of one sensor, rows are frames.
type sensor struct {
	channel int // its first one; −1 for all
	rows    []int
	times   clock.Report
}

// row returns the frame of the take a row of the sensor stands in.
func (s sensor) row(i int) int {
	if s.rows == nil {
		return i
	}
	return s.rows[i]
}

// sensors returns the sensors of a take, at least one. Channels that were
// sampled apart but at no steady rate are no sensors: values of theirs are
// missing.
func sensors(t *raw.Take, width int) []sensor {
	whole := []sensor{{channel: -1, times: clock.Inspect(t.Time)}}
	if !slices.ContainsFunc(t.Data, math.IsNaN) {
		return whole
	}
	var out []sensor
	for _, s := range clock.Sensors(t.Time, t.Data, width) {
		one := sensor{s.Columns[0], s.Rows, clock.Inspect(clock.At(t.Time, s.Rows))}
		if !one.times.Steady() {
			return whole
		}
		out = append(out, one)
	}
	if len(out) < 2 {
		return whole
	}
	return out
}

// note adds a finding about this take; findings of one kind, file and channel
// are counted together.
func (l *look) note(kind string, channel, frame, count int, text string) {
	f := Finding{Kind: kind, File: l.file, Line: l.take.LineOf(max(frame, 0)), Take: l.name, Takes: 1, Count: count, Text: text}
	if channel >= 0 {
		f.Channel = l.frame.layout.Channels[channel].Name
	}
	l.add(f, l.file+"\x00"+f.Channel)
}

// clock notes what is wrong with the times of a sensor.
func (l *look) clock(s sensor) {
	r := s.times
	if n := len(r.Duplicates); n > 0 {
		l.note(Duplicated, s.channel, s.row(r.Duplicates[0]), n, "frames have the time of another frame")
	}
	if n := len(r.Reversals); n > 0 {
		l.note(Reversed, s.channel, s.row(r.Reversals[0]), n, "frames come before the frame above")
	}
	if n := r.Missing(); n > 0 {
		l.note(Gaps, s.channel, s.row(r.Gaps[0].Row), n, fmt.Sprintf("frames are missing, the first %.3g s", r.Gaps[0].Length))
	}
	if r.Step > 0 && r.Jitter99 > jitterPart*r.Step {
		l.note(Jitter, s.channel, s.row(0), r.Frames, fmt.Sprintf("steps stray from %.4g ms by %.3g ms in the median, %.3g ms at the 99th percentile", 1e3*r.Step, 1e3*r.Jitter, 1e3*r.Jitter99))
	}
}

// jitterPart is the part of a step that steps must stray by to be noted
// (common practice).
const jitterPart = 0.05

// drift notes sensors of one take whose clocks differ.
func (l *look) drift() {
	first := l.sensors[0]
	for _, s := range l.sensors[1:] {
		d := clock.Between(first.times, s.times)
		if d.Ratio > 0 && (d.Up != d.Down || d.Parts != 0) {
			l.note(Drift, s.channel, s.row(0), s.times.Frames, fmt.Sprintf("frames are sampled at %.4g Hz where those of %s are at %.4g Hz; they begin %.3g s and end %.3g s after those",
				1/s.times.Step, l.frame.layout.Channels[first.channel].Name, 1/first.times.Step, d.Start, d.End))
		}
	}
}

// signals notes what is wrong with the values of the take.
func (l *look) signals(step float64) {
	data, width, groups := l.take.Data, len(l.frame.layout.Channels), l.frame.groups()
	for _, f := range signal.Missing(data, width) {
		if len(l.sensors) > 1 { // rows of the other sensors
			break
		}
		l.note(Missing, f.Channel, f.First, f.Count, fmt.Sprintf("values are missing, up to %d in a row", f.Longest))
	}
	for _, f := range signal.Stuck(data, width, groups) {
		l.note(Stuck, f.Channel, f.First, f.Count, fmt.Sprintf("frames stand at %.6g while the other channels of its group move", f.Value))
	}
	for _, f := range signal.Spikes(data, width) {
		l.note(Spikes, f.Channel, f.First, f.Count, "single value(s) far from the neighbours")
	}
	if l.clipping == nil {
		l.checker.clipping = signal.NewClipping(width, groups)
	}
	l.clipping.Add(data)
	if step <= 0 {
		return
	}
	window := max(2, int(restWindow/step))
	for _, g := range l.frame.layout.Groups {
		axes, ok := l.frame.accelerometer(g)
		if !ok {
			continue
		}
		if l.gravity[g.Name] == nil {
			l.gravity[g.Name] = signal.Verdicts{}
		}
		verdict := signal.Verdict{}
		if rest, ok := signal.AtRest(data, width, axes, window); ok {
			verdict = signal.Judge(rest, l.frame.units[axes[0]])
		}
		l.gravity[g.Name][verdict]++
	}
}

// restWindow is how long a stretch of rest is looked for, in seconds.
const restWindow = 0.5
