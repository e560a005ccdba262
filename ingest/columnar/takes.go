package columnar

import (
	"fmt"
	"math"
	"strconv"

	"strandwise/channels"
	"strandwise/ingest/raw"
)

// readTake takes up one row that is a take.
func (d *reader) readTake(int) error {
	for k, c := range d.keys {
		d.key[k] = d.columns[c.leaf].texts[0]
	}
	id, err := d.identity(d.key, d.row)
	if err != nil {
		return err
	}
	if id.Take == "" {
		id.Take = strconv.Itoa(d.row)
		if d.row == 1 {
			d.in.Notice("has no take column, so the takes are named by their rows", "")
		}
	}
	t := &raw.Take{Identity: id, Layout: d.layout, Skeleton: d.skeletons[id.Take]}
	d.take = t // for the faults
	frames, err := d.lengths()
	if err != nil {
		return err
	}
	if err := d.readClockOf(t, frames); err != nil {
		return err
	}
	if err := d.readChannels(t, frames); err != nil {
		return err
	}
	t.Synthetic = d.origin != none && d.columns[d.origin].texts[0] == string(channels.Synthetic)
	d.take = nil
	return d.deliver(t)
}

// lengths returns how many frames the row holds. All its lists must be of this
// length, but for those of channels that are missing.
func (d *reader) lengths() (frames int, err error) {
	first := none
	for _, i := range append([]int{d.clock}, d.channels...) {
		if i == none || d.columns[i].null[0] {
			continue
		}
		from, to := d.columns[i].span(0)
		if first == none {
			first, frames = i, to-from
		}
		if to-from != frames {
			return 0, d.fault("", fmt.Sprintf("row %d: %s holds %d values, but %s holds %d",
				d.row, d.src.leaves()[i].name, to-from, d.src.leaves()[first].name, frames), "write lists of one length in each row")
		}
	}
	return frames, nil
}

func (d *reader) readClockOf(t *raw.Take, frames int) error {
	if d.clock == none {
		countTimes(t, frames)
		return nil
	}
	row := func(i int) string { return fmt.Sprintf("row %d, value %d: ", d.row, i+1) }
	v := &d.columns[d.clock]
	from, to := v.span(0)
	if to-from != frames {
		return d.fault(d.time.Name, fmt.Sprintf("row %d: holds no times", d.row), fillGap)
	}
	t.Time = make([]float64, 0, frames)
	if err := d.appendTimes(t, from, to, row); err != nil {
		return err
	}
	if d.start == none {
		return nil
	}
	start := d.columns[d.start].floats[0]
	if start-start != 0 {
		return d.fault("", fmt.Sprintf("row %d: start_s holds no time", d.row), fillGap)
	}
	for i := range t.Time {
		t.Time[i] += start
	}
	return nil
}

func (d *reader) readChannels(t *raw.Take, frames int) error {
	width := len(d.channels)
	t.Data = make([]float64, frames*width)
	finite := true
	for c, leaf := range d.channels {
		v := &d.columns[leaf]
		if v.null[0] {
			for i := range frames {
				t.Data[i*width+c] = math.NaN()
			}
			continue
		}
		from, to := v.span(0)
		if frames > 0 {
			all := spread(t.Data[c:], width, v.floats[from:to])
			finite = finite && all
		}
	}
	if finite {
		return nil
	}
	return d.refuseInfinity(t, 0, func(i int) string { return fmt.Sprintf("row %d, value %d: ", d.row, i+1) })
}
