package columnar

import (
	"fmt"
	"io"
	"math"
	"strings"

	"strandwise/channels/body"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// reader turns the rows of a table into takes.
type reader struct {
	*plan
	src   source
	in    raw.Input
	yield func(*raw.Take, error) bool
	hive  raw.Identity

	skeletons map[string]*body.Skeleton // by take; nil for none

	columns []vector // the rows at hand
	row     int      // number in the file, from 1, of the first row at hand

	// Of the long form.
	take   *raw.Take // being read, nil before the first row
	key    []string  // its identity as the columns state it, by plan.keys
	first  int       // row it begins in
	frames int       // of the take before, the first guess at the size of the next
}

// blockRows is how many frames are taken up at a time: few enough that their
// values stay in a processor's cache.
const blockRows = 1024

// read reads the whole table.
func (d *reader) read() error {
	skip, err := d.prepare()
	if skip || err != nil {
		return err
	}
	size, take := blockRows, d.readFrames
	if d.byTake {
		size, take = 1, d.readTake
	}
	for d.row = 1; ; {
		rows, columns, err := d.src.next(size)
		if isEOF(err) {
			break
		}
		if err != nil {
			return err
		}
		d.columns = columns
		if err := take(rows); err != nil {
			return err
		}
		d.row += rows
	}
	if d.row == 1 {
		return d.fault("", "has columns but no rows", "leave it out or record it again")
	}
	return d.finish()
}

// prepare makes the plan and tells the source which columns it needs.
func (d *reader) prepare() (skip bool, err error) {
	leaves := d.src.leaves()
	if text := d.src.metadata(layoutKey); text != "" {
		l, err := parseLayout(text, d.in)
		if err != nil {
			return false, err
		}
		if l.repeats(d.in) {
			d.in.Notice("is of the table frames, which repeats the table takes, and is left out", "")
			return true, nil
		}
		d.plan, err = l.plan(leaves, d.in)
		if err != nil {
			return false, err
		}
	} else if d.plan, err = makePlan(leaves, d.in); err != nil {
		return false, err
	}
	if d.skeletons, err = parseSkeletons(d.src.metadata(skeletonsKey), d.in); err != nil {
		return false, err
	}
	d.use(leaves)
	d.key = make([]string, len(d.keys))
	return false, nil
}

func (d *reader) use(leaves []leaf) {
	for _, k := range d.keys {
		d.src.use(k.leaf, texts)
	}
	for _, i := range d.channels {
		d.src.use(i, floats)
	}
	if d.start != none {
		d.src.use(d.start, floats)
	}
	if d.origin != none {
		d.src.use(d.origin, texts)
	}
	if d.clock == none {
		return
	}
	as := map[kind]want{number: floats, integer: whole, instant: whole, text: texts}
	d.src.use(d.clock, as[leaves[d.clock].kind])
}

func isEOF(err error) bool { return err == io.EOF }

func (d *reader) fault(channel, problem, remedy string) *fault.Error {
	e := &fault.Error{File: d.in.Name, Channel: channel, Problem: problem, Remedy: remedy}
	if d.take != nil {
		e.Take = d.take.Take
	}
	return e
}

const fillGap = "fill the gap, or leave the take out"

// identity makes the identity of a take of the values of its identity columns
// and of its folders.
func (d *reader) identity(key []string, row int) (raw.Identity, error) {
	id := d.hive
	for k, c := range d.keys {
		text := strings.TrimSpace(key[k])
		own := id.Field(c.name)
		switch what := table.Unclean(text); {
		case what != "":
			return id, d.fault("", fmt.Sprintf("row %d: %s %q %s", row, c.name, text, what), "repair the name")
		case c.name == "take" && text == "":
			return id, d.fault("", fmt.Sprintf("row %d: the take column is empty", row), "name the take that each row belongs to")
		case text != "" && *own != "" && *own != text:
			return id, d.fault("", fmt.Sprintf("row %d: has the %s %q, but its folder says %q", row, c.name, text, *own), "correct one of them")
		case text != "":
			*own = strings.Clone(text) // not the page or batch it stands in
		}
	}
	return id, nil
}

// appendTimes takes up the times of elements from one to another of the clock's
// values. Frame i of them is for messages in row row(i). Whether they increase
// is for the stages behind to judge.
func (d *reader) appendTimes(t *raw.Take, from, to int, row func(i int) string) error {
	v := &d.columns[d.clock]
	for i := from; i < to; i++ {
		first := len(t.Time) == 0
		var now float64
		var ok bool
		switch {
		case v.floats != nil:
			x := v.floats[i]
			now, ok = d.time.Number(x, first), x-x == 0
		case v.whole != nil:
			now, ok = d.time.Whole(v.whole[i], first), v.whole[i] != noInstant
		default:
			var seconds int64
			var fraction float64
			seconds, fraction, ok = table.Stamp(strings.TrimSpace(v.texts[i]))
			now = d.time.At(seconds, fraction, first)
		}
		switch {
		case !ok:
			return d.fault(d.time.Name, row(i-from)+"holds no time", fillGap)
		case d.time.Frames && now != math.Trunc(now):
			return d.fault(d.time.Name, row(i-from)+fmt.Sprintf("%g is no whole number", now), "name the column time if it holds time")
		}
		t.Time = append(t.Time, now)
	}
	return nil
}

// countTimes numbers n frames where no column states their time.
func countTimes(t *raw.Take, n int) {
	for range n {
		t.Time = append(t.Time, float64(len(t.Time)))
	}
}

// spread copies the values of a channel into frame-major data of this width,
// and tells whether all are finite.
func spread(dst []float64, width int, src []float64) (finite bool) {
	finite = true
	for i, v := range src {
		dst[i*width] = v
		finite = finite && v-v == 0
	}
	return finite
}

// refuseInfinity refuses infinities among the values of frames from one on. NaN
// are missing values.
func (d *reader) refuseInfinity(t *raw.Take, frame int, row func(i int) string) error {
	width := len(d.channels)
	for i := frame * width; i < len(t.Data); i++ {
		if v := t.Data[i]; math.IsInf(v, 0) {
			return d.fault(d.layout.Columns[i%width].Channel.Name, row(i/width-frame)+fmt.Sprintf("%g is no finite number", v), fillGap)
		}
	}
	return nil
}

// deliver hands on a whole take. The steps of its times settle the unit.
func (d *reader) deliver(t *raw.Take) error {
	if err := d.time.Finish(t, t.Time, d.in); err != nil {
		return err
	}
	if !d.yield(t, nil) {
		return errStopped
	}
	return nil
}
