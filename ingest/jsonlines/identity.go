package jsonlines

import (
	"fmt"

	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// over returns an identity with what another states in place of its own.
func over(id, stated raw.Identity) raw.Identity {
	for _, key := range table.Keys() {
		if text := *stated.Field(key); text != "" {
			*id.Field(key) = text
		}
	}
	return id
}

// header takes in an object that holds no frame. One that names a take begins
// it; one that does not speaks for the rest of the file.
func (d *reader) header(p *parts, line int) error {
	for _, f := range p.values {
		if !d.leftOut(f.name) {
			d.in.Notice(fmt.Sprintf("field %q stands in an object without frames and is left out", f.name), "it begins with "+shorten(d.parser.object[f.from:f.to]))
		}
	}
	switch {
	case p.stated == (raw.Identity{}):
		return nil
	case p.stated.Take != "":
		if err := d.finish(); err != nil {
			return err
		}
		d.who, d.named = over(d.file, p.stated), false
		return nil
	}
	if err := d.agree(p.stated, line); err != nil {
		return err
	}
	d.file = over(d.file, p.stated)
	d.who = over(d.who, p.stated)
	return nil
}

// identify holds a frame against the take being read: it belongs to it, or it
// begins the next.
func (d *reader) identify(stated raw.Identity, line int) error {
	switch {
	case stated.Take == "" && d.named:
		return d.fault(line, "", "names no take, but the frames before it do", "name the take that each frame belongs to")
	case stated.Take != "" && (d.take == nil || stated.Take != d.who.Take || !d.named):
		if d.take != nil && d.who.Take == "" {
			return d.fault(line, "", fmt.Sprintf("names the take %q, but the frames before it name none", stated.Take), "name the take that each frame belongs to")
		}
		if err := d.finish(); err != nil {
			return err
		}
		base := d.file
		if stated.Take == d.who.Take { // named by a header right before
			base = d.who
		}
		d.who, d.named = over(base, stated), true
		return nil
	}
	if err := d.agree(stated, line); err != nil {
		return err
	}
	d.who = over(d.who, stated)
	return nil
}

// agree refuses an identity that is not the one of the take being read. All
// but the take may still be stated before the first frame.
func (d *reader) agree(stated raw.Identity, line int) error {
	if d.take == nil {
		return nil
	}
	for _, key := range table.Keys() {
		now, was := *stated.Field(key), *d.who.Field(key)
		if now == "" || now == was {
			continue
		}
		remedy := "give every frame of a take the same " + key
		if d.who.Take == "" {
			remedy = "add a field take that says where each take begins"
		}
		has := fmt.Sprintf("has %q", was)
		if was == "" {
			has = "states none"
		}
		return d.fault(line, "", fmt.Sprintf("has the %s %q, but line %d, where the take begins, %s", key, now, d.take.lines[0], has), remedy)
	}
	return nil
}
