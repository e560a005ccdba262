package delimited

import (
	"bytes"
	"fmt"

	"strandwise/ingest/raw"
	"strandwise/ingest/table"
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
		if what := table.Unclean(string(text)); what != "" {
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
	if err := d.table.clock.Finish(t, t.Time, d.in); err != nil {
		return err
	}
	if !d.yield(t, nil) {
		return errStopped
	}
	return nil
}
