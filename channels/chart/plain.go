package chart

import (
	"slices"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
)

// plain is the sheet of channels that are coordinates as they are, in an order
// that has the axes of every vector as x, y, z.
type plain struct {
	from   []int     // channel of each coordinate
	bounds []*bounds // of each coordinate, nil for none
	list   []Part
	zero   []bool // parts whose vectors turn about zero
}

// newPlain takes all channels that no other sheet holds.
func newPlain(d *draft, l limits) *plain {
	p := &plain{}
	slot := make([]int, len(d.held)) // coordinate at which each channel would keep its order
	for i, held := range d.held {
		slot[i] = len(p.from)
		if !held {
			p.from = append(p.from, i)
		}
	}
	for g, group := range d.layout.Groups {
		left := slices.DeleteFunc(slices.Clone(group.Channels), func(i int) bool { return d.held[i] })
		for _, b := range bundles(d.layout, left) {
			part := Part{Name: group.Name, Limb: group.Limb, Kind: b.kind, Mix: true, Group: g, Scaled: true, Axes: b.axes, Follows: -1}
			for _, i := range b.list {
				part.Coordinates = append(part.Coordinates, slot[i])
			}
			slices.Sort(part.Coordinates)
			for k, at := range part.Coordinates {
				p.from[at] = b.list[k]
			}
			p.list, p.zero = append(p.list, part), append(p.zero, b.field || b.kind != Free)
		}
	}
	p.bound(l)
	return p
}

// bound gives the limits to the coordinates that go through a map of their own,
// and takes them off the list.
func (p *plain) bound(l limits) {
	p.bounds = make([]*bounds, len(p.from))
	for _, part := range p.list {
		if part.Kind != Free || part.Axes > 0 {
			continue
		}
		for _, k := range part.Coordinates {
			if limit, ok := l[p.from[k]]; ok {
				p.bounds[k] = newBounds(limit)
				delete(l, p.from[k])
			}
		}
	}
}

// identical tells whether the coordinates are all the channels in order,
// unchanged.
func (p *plain) identical(width int) bool {
	for k, i := range p.from {
		if i != k || p.bounds[k] != nil {
			return false
		}
	}
	return len(p.from) == width
}

func (p *plain) width() int          { return len(p.from) }
func (p *plain) parts(memory) []Part { return p.list }

func (p *plain) plot(dst rows, t *channels.Take, _ memory) memory {
	for f := range t.Time {
		row, frame := dst.frame(f), t.Frame(f)
		for k, i := range p.from {
			row[k] = p.bounds[k].flat(frame[i])
		}
	}
	return nil
}

func (p *plain) take(data []float64, values rows, time []float64, _ memory) {
	w := len(data) / len(time)
	for f := range time {
		for k, v := range values.frame(f) {
			data[f*w+p.from[k]] = p.bounds[k].inside(v)
		}
	}
}

func (p *plain) rotate(values rows, by quat.Number, _ memory) {
	for i, part := range p.list {
		for c := part.Coordinates; part.Axes > 0 && len(c) > 0; c = c[part.Axes:] {
			rotateVectors(values, c[:part.Axes], by, !p.zero[i])
		}
	}
}

// rotateVectors turns the vectors in two or three columns in place, about their
// mean or about zero. Two columns are a plane, which turns about its normal by
// the angle the rotation has about z.
func rotateVectors(values rows, columns []int, by quat.Number, aboutMean bool) {
	if len(columns) == 2 {
		by = body.Unit(quat.Number{Real: by.Real, Kmag: by.Kmag})
	}
	var centre r3.Vec
	if aboutMean {
		centre = meanVector(values, columns)
	}
	rotateAbout(values, columns, by, centre)
}

// rotateAbout turns the vectors in two or three columns in place about a point.
func rotateAbout(values rows, columns []int, by quat.Number, centre r3.Vec) {
	for f := range values.frames() {
		row := values.frame(f)
		setVector(row, columns, r3.Add(centre, body.Rotate(by, r3.Sub(vector(row, columns), centre))))
	}
}

func meanVector(values rows, columns []int) r3.Vec {
	var sum r3.Vec
	for f := range values.frames() {
		sum = r3.Add(sum, vector(values.frame(f), columns))
	}
	return r3.Scale(1/float64(values.frames()), sum)
}

// vector reads two or three columns of a frame; the third is zero where there
// are two.
func vector(row []float64, columns []int) r3.Vec {
	v := r3.Vec{X: row[columns[0]], Y: row[columns[1]]}
	if len(columns) == 3 {
		v.Z = row[columns[2]]
	}
	return v
}

func setVector(row []float64, columns []int, v r3.Vec) {
	row[columns[0]], row[columns[1]] = v.X, v.Y
	if len(columns) == 3 {
		row[columns[2]] = v.Z
	}
}
