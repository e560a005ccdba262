package delimited

import (
	"bytes"
	"fmt"

	"strandwise/ingest/raw"
)

// identify starts a new take where the take column changes, and holds the
// other identities to one value per take.
func (d *reader) identify(line int) error {
	changed := d.take == nil
	var now [keys][]byte
	for k, i := range d.table.keys {
		if i >= 0 {
			now[k] = bytes.TrimSpace(d.split.fields[i].text)
		}
		changed = changed || string(now[k]) != d.key[k]
	}
	if !changed {
		return nil
	}
	for k, text := range now {
		if what := unclean(string(text)); what != "" {
			return d.fault(line, "", fmt.Sprintf("%s %s %s", keyNames[k], quote(text), what), "save the file as UTF-8 text, and repair the name")
		}
		if d.take != nil && string(now[takeKey]) == d.key[takeKey] && string(text) != d.key[k] {
			return d.twoIdentities(k, text, line)
		}
	}
	if d.table.keys[takeKey] >= 0 && len(now[takeKey]) == 0 {
		return d.fault(line, "", "the take column is empty", "name the take that each row belongs to")
	}
	if err := d.finish(); err != nil {
		return err
	}
	for k, text := range now {
		d.key[k] = string(text)
	}
	d.begin(line)
	return nil
}

// begin starts a take of the identity d.key.
func (d *reader) begin(line int) {
	d.take = &raw.Take{
		Identity: raw.Identity{
			Take: d.key[takeKey], Label: d.key[labelKey], Subject: d.key[subjectKey],
			Session: d.key[sessionKey], Split: d.key[splitKey],
		},
		Line:   line,
		Layout: d.table.layout,
		Time:   make([]float64, 0, d.frames),
		Data:   make([]float64, 0, d.frames*len(d.table.layout.Columns)),
	}
	if d.table.clock.frames {
		d.take.Clock = raw.Frames
	}
	d.due = line
}

func (d *reader) twoIdentities(k int, now []byte, line int) error {
	remedy := "give every row of a take the same " + keyNames[k]
	if d.table.keys[takeKey] < 0 {
		remedy = "add a take column that says where each take begins"
	}
	e := d.fault(line, "", fmt.Sprintf("has the %s %s, but line %d, where the take begins, has %s", keyNames[k], quote(now), d.take.Line, quote([]byte(d.key[k]))), remedy)
	e.Take = d.take.Take
	return e
}

// finish hands the take on, if there is one, with its times in seconds.
func (d *reader) finish() error {
	if d.take == nil {
		return nil
	}
	t := d.take
	d.take, d.frames = nil, len(t.Time)
	if err := d.setClock(t); err != nil {
		return err
	}
	if !d.yield(t, nil) {
		return errStopped
	}
	return nil
}

// setClock turns the times of a take into seconds. The first take of the file
// settles their unit if nothing has.
func (d *reader) setClock(t *raw.Take) error {
	c := &d.table.clock
	if c.frames {
		return nil
	}
	if c.unit == "" && len(t.Time) < 2 {
		c.unit = "s" // such a take is refused later, for what is wrong with it
	}
	if c.unit == "" {
		evidence, err := c.infer(t.Time)
		if err != nil {
			return d.fault(t.Line, c.name, err.Error(), "state the unit of time with --time-unit, or name the column frame if it counts frames")
		}
		d.in.Notice(fmt.Sprintf("time column %q states no unit and is read as %s", c.name, c.unit), evidence)
	}
	origin, fromEpoch := c.seconds(t.Time)
	if t.Origin = origin; fromEpoch {
		d.in.Notice(fmt.Sprintf("time column %q counts from a distant epoch, so each take's clock is set to begin at 0", c.name), "")
	}
	return nil
}
