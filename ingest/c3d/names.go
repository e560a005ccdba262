package c3d

import (
	"cmp"
	"fmt"
	"math"
	"strings"
)

// readNames reads the labels and units of points and channels.
func (d *decoder) readNames() error {
	ps, f, s := d.file.Parameters, d.file, &d.shape
	f.Points.Labels = d.labels(ps.texts("POINT", "LABELS"), "point", s.points)
	f.Points.Unit = ps.firstText("POINT", "UNITS")
	f.Analog.Labels = d.labels(ps.texts("ANALOG", "LABELS"), "channel", s.channels)
	f.Analog.Units = make([]string, s.channels)
	copy(f.Analog.Units, ps.texts("ANALOG", "UNITS"))
	return d.readFormat()
}

// readFormat reads how the analog converter counted.
func (d *decoder) readFormat() error {
	if d.shape.channels == 0 {
		return nil
	}
	bits, _, _, err := d.countOf("ANALOG", "BITS")
	if err != nil {
		return err
	}
	a := &d.file.Analog
	a.Bits = int(bits)
	p := d.file.Parameters.Find("ANALOG", "FORMAT")
	if p == nil {
		if bits == 16 && !d.SkipAnalog && !d.file.Float {
			d.Notice("has analog channels of 16 bits and does not say whether they have a sign; they are taken as signed", "")
		}
		return nil
	}
	switch format := strings.ToUpper(d.file.Parameters.firstText("ANALOG", "FORMAT")); format {
	case "UNSIGNED":
		a.Unsigned = true
	case "SIGNED", "":
	default:
		return d.fault(p.Offset, fmt.Sprintf("states the analog format %q; there are SIGNED and UNSIGNED", format), "export it again")
	}
	return nil
}

// labels returns n unique labels. What has none is named by its place, and
// what shares a label with another gets a number after it.
func (d *decoder) labels(stated []string, kind string, n int) []string {
	out := make([]string, n)
	copy(out, stated)
	u := unique{taken: map[string]bool{"": true}, next: map[string]int{}}
	for _, label := range out {
		u.taken[label] = true
	}
	var unnamed, shared string
	seen := map[string]bool{}
	for i, label := range out {
		switch {
		case label == "":
			out[i] = u.name(fmt.Sprintf("%s%d", kind, i+1))
			unnamed = cmp.Or(unnamed, out[i])
		case seen[label]:
			out[i] = u.name(label)
			shared = cmp.Or(shared, out[i])
		}
		seen[label] = true
	}
	if unnamed != "" {
		d.Notice(fmt.Sprintf("has %ss without a label, named by their place", kind), unnamed)
	}
	if shared != "" {
		d.Notice(fmt.Sprintf("has %ss that share a label, told apart by a number", kind), shared)
	}
	return out
}

// unique makes names that are not taken.
type unique struct {
	taken map[string]bool
	next  map[string]int // number to try next after a name
}

// name returns the name, or the first numbered form of it that is not taken,
// and takes it.
func (u *unique) name(name string) string {
	out := name
	for u.taken[out] {
		u.next[name] = max(u.next[name], 1) + 1
		out = fmt.Sprintf("%s_%d", name, u.next[name])
	}
	u.taken[out] = true
	return out
}

// readGauges reads how stored analog numbers become values.
func (d *decoder) readGauges() ([]gauge, error) {
	out := make([]gauge, d.shape.channels)
	if len(out) == 0 {
		return out, nil
	}
	general, offset, ok, err := d.number("ANALOG", "GEN_SCALE")
	if err != nil {
		return nil, err
	}
	if !ok {
		general = 1
	}
	if math.IsNaN(general) || math.IsInf(general, 0) {
		return nil, d.fault(offset, fmt.Sprintf("states the analog scale %v", general), "export it again")
	}
	if err := d.perChannel("SCALE", 1, func(c int, v float64) { out[c].scale = v * general }); err != nil {
		return nil, err
	}
	return out, d.perChannel("OFFSET", 0, func(c int, v float64) { out[c].offset = v })
}

// perChannel gives each analog channel its number of a parameter, or the
// default when there is no such parameter.
func (d *decoder) perChannel(name string, missing float64, set func(c int, v float64)) error {
	run := d.file.Parameters.run("ANALOG", name)
	if len(run) == 0 {
		d.Notice(fmt.Sprintf("states no ANALOG:%s; %v is taken", name, missing), "")
		for c := range d.shape.channels {
			set(c, missing)
		}
		return nil
	}
	c := 0
	for _, p := range run {
		for _, v := range p.numbers(!d.file.Analog.Unsigned) {
			if c == d.shape.channels {
				return nil
			}
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return d.fault(p.Offset, fmt.Sprintf("states %v in ANALOG:%s", v, name), "export it again")
			}
			set(c, v)
			c++
		}
	}
	if c < d.shape.channels {
		return d.contradiction(run[0].Offset, fmt.Sprintf("states ANALOG:%s for %d of %d channels", name, c, d.shape.channels))
	}
	return nil
}
