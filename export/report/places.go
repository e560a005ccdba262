package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/mat"

	"strandwise/channels"
)

// tracked is a point of which the layout holds the position.
type tracked struct {
	name  string
	unit  string
	axes  []int    // channels of its two or three coordinates
	names []string // of the axes
}

// trackedPoints lists the points whose positions are channels.
func trackedPoints(l *channels.Layout) []tracked {
	var out []tracked
	for _, g := range pointGroups(l) {
		byPoint, order := map[string]*tracked{}, []string{}
		for _, c := range g.Channels {
			ch := l.Channels[c]
			if ch.Quantity != channels.Position {
				continue
			}
			if byPoint[ch.TrackedPoint] == nil {
				byPoint[ch.TrackedPoint] = &tracked{name: ch.TrackedPoint, unit: ch.Unit}
				order = append(order, ch.TrackedPoint)
			}
			p := byPoint[ch.TrackedPoint]
			p.axes, p.names = append(p.axes, c), append(p.names, axisName(ch, len(p.axes)))
		}
		for _, point := range order {
			p := byPoint[point]
			if p.name == "" {
				p.name = g.Name
			}
			if n := len(p.axes); n == 2 || n == 3 {
				out = append(out, *p)
			}
		}
	}
	return out
}

// pointGroups returns the layout's groups, or all channels as one.
func pointGroups(l *channels.Layout) []channels.Group {
	if len(l.Groups) > 0 {
		return l.Groups
	}
	all := channels.Group{Name: "all channels"}
	for c := range l.Channels {
		all.Channels = append(all.Channels, c)
	}
	return []channels.Group{all}
}

// axisName returns what an axis is called, where its channel does not say by
// its number.
func axisName(c channels.Channel, place int) string {
	if c.Component != "" {
		return isolated(c.Component, 6, "axis")
	}
	return fmt.Sprint("axis ", place)
}

// plane is the plane that a path is shown in: its point is the origin, and its
// directions are unit vectors, as many coordinates long as the point has.
type plane struct {
	origin []float64
	across []float64
	up     []float64
	share  float64 // of the variance of the recorded positions that lies in the plane
}

// bestPlane returns the plane that holds most of the movement of points: the
// first two principal directions of the positions. In the plane it is the
// coordinates themselves.
func bestPlane(points [][]float64, axes int) plane {
	pl := plane{origin: make([]float64, axes), across: make([]float64, axes), up: make([]float64, axes), share: 1}
	for _, p := range points {
		for k, v := range p {
			pl.origin[k] += v / float64(len(points))
		}
	}
	pl.across[0], pl.up[1] = 1, 1
	if axes == 2 {
		pl.origin = make([]float64, axes)
		return pl
	}
	c := mat.NewSymDense(axes, nil)
	for _, p := range points {
		for i := range axes {
			for j := i; j < axes; j++ {
				c.SetSym(i, j, c.At(i, j)+(p[i]-pl.origin[i])*(p[j]-pl.origin[j]))
			}
		}
	}
	var e mat.EigenSym
	total := mat.Trace(c)
	if !(total > 0) || math.IsInf(total, 0) || !e.Factorize(c, true) {
		return pl
	}
	var v mat.Dense
	e.VectorsTo(&v)
	mat.Col(pl.across, axes-1, &v)
	mat.Col(pl.up, axes-2, &v)
	forward(pl.across)
	forward(pl.up)
	pl.share = (e.Values(nil)[axes-1] + e.Values(nil)[axes-2]) / total
	return pl
}

// forward turns a direction so that its largest coordinate is positive.
func forward(v []float64) {
	largest := slices.MaxFunc(v, func(a, b float64) int { return cmp.Compare(math.Abs(a), math.Abs(b)) })
	if largest < 0 {
		for k := range v {
			v[k] = -v[k]
		}
	}
}

// at returns where a point stands in the plane.
func (pl plane) at(p []float64) (x, y float64) {
	for k, v := range p {
		x += (v - pl.origin[k]) * pl.across[k]
		y += (v - pl.origin[k]) * pl.up[k]
	}
	return x, y
}

// direction writes a direction in terms of the axes: "0.93 x − 0.35 z".
func direction(v []float64, names []string) string {
	var b strings.Builder
	for k, n := range names {
		if math.Abs(v[k]) < 0.05 {
			continue
		}
		switch {
		case b.Len() == 0 && v[k] < 0:
			b.WriteString("−")
		case b.Len() > 0 && v[k] < 0:
			b.WriteString(" − ")
		case b.Len() > 0:
			b.WriteString(" + ")
		}
		if a := math.Abs(v[k]); a > 0.995 {
			b.WriteString(n)
		} else {
			fmt.Fprintf(&b, "%.2f %s", a, n)
		}
	}
	return b.String()
}

// positions returns the positions of a point in a take that are finite.
func (p tracked) positions(t *channels.Take) [][]float64 {
	var out [][]float64
	for i := range t.Frames() {
		f, at := t.Frame(i), make([]float64, len(p.axes))
		sound := true
		for k, c := range p.axes {
			at[k] = f[c]
			sound = sound && finite(at[k])
		}
		if sound {
			out = append(out, at)
		}
	}
	return out
}
