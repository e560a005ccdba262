package columnar

import (
	"fmt"
	"slices"
	"strings"

	"strandwise/ingest/raw"
)

// readFrames takes up rows of the long form.
func (d *reader) readFrames(rows int) error {
	for from := 0; from < rows; {
		if d.take == nil || !d.sameKey(from) {
			if err := d.turn(from); err != nil {
				return err
			}
		}
		to := from + 1
		for to < rows && d.sameKey(to) {
			to++
		}
		if err := d.appendFrames(from, to); err != nil {
			return err
		}
		from = to
	}
	return nil
}

// sameKey tells whether a row states the identity of the take being read.
func (d *reader) sameKey(row int) bool {
	for k, c := range d.keys {
		if d.columns[c.leaf].texts[row] != d.key[k] {
			return false
		}
	}
	return true
}

// turn ends a take and begins the one a row belongs to. Within a take all else
// that identifies it must stay the same.
func (d *reader) turn(row int) error {
	now := make([]string, len(d.keys))
	again := d.take != nil
	for k, c := range d.keys {
		now[k] = strings.Clone(d.columns[c.leaf].texts[row])
		again = again && (c.name != "take" || now[k] == d.key[k])
	}
	if again {
		return d.twoIdentities(now, d.row+row)
	}
	if err := d.finish(); err != nil {
		return err
	}
	id, err := d.identity(now, d.row+row)
	if err != nil {
		return err
	}
	d.key, d.first = now, d.row+row
	d.take = &raw.Take{
		Identity: id, Layout: d.layout,
		Time: make([]float64, 0, d.frames),
		Data: make([]float64, 0, d.frames*len(d.channels)),
	}
	return nil
}

func (d *reader) twoIdentities(now []string, row int) error {
	remedy := "add a take column that says where each take begins"
	var differs int
	for k, c := range d.keys {
		if c.name == "take" {
			remedy = "give every row of a take the same identity"
		}
		if now[k] != d.key[k] {
			differs = k
		}
	}
	return d.fault("", fmt.Sprintf("row %d: has the %s %q, but row %d, where the take begins, has %q",
		row, d.keys[differs].name, now[differs], d.first, d.key[differs]), remedy)
}

// appendFrames takes up rows of one take.
func (d *reader) appendFrames(from, to int) error {
	t, width, n := d.take, len(d.channels), to-from
	row := func(i int) string { return fmt.Sprintf("row %d: ", d.row+from+i) }
	frame := len(t.Time)
	if d.clock == none {
		countTimes(t, n)
	} else if err := d.appendTimes(t, from, to, row); err != nil {
		return err
	}
	t.Data = slices.Grow(t.Data, n*width)[:(frame+n)*width]
	finite := true
	for c, leaf := range d.channels {
		all := spread(t.Data[frame*width+c:], width, d.columns[leaf].floats[from:to])
		finite = finite && all
	}
	if finite {
		return nil
	}
	return d.refuseInfinity(t, frame, row)
}

// finish hands on the take being read, if there is one.
func (d *reader) finish() error {
	if d.take == nil {
		return nil
	}
	t := d.take
	d.take, d.frames = nil, len(t.Time)
	return d.deliver(t)
}
