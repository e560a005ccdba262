package chart

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/num/quat"

	"strandwise/channels"
	"strandwise/channels/body"
)

// Options say how a chart is laid out. The zero value is ready for use.
type Options struct {
	FreeFeet bool                  // feet that stand still need not stay so
	Limits   map[string][2]float64 // channel name → the least and the greatest value it can have
	Bones    []Bone                // between tracked points whose distance is constant
}

// Bone joins two tracked points whose distance is constant. Together the bones
// of a chart make one or several trees.
type Bone struct {
	Point, Parent string // names of tracked points with channels POS x, y, z
}

// Chart lays out the takes of one layout. It is read-only and safe for use by
// several goroutines.
type Chart struct {
	layout *channels.Layout
	sheets []sheet
	at     []int // first coordinate of each sheet
	width  int
	plain  bool    // coordinates are channels
	clamps []clamp // channels that are cut off at their limits
}

// sheet lays out some of the channels. Coordinates are counted from its first.
type sheet interface {
	// width is the number of its coordinates.
	width() int
	// parts lists them, as they are in the take that m was kept of, or in takes
	// in general when m is nil.
	parts(m memory) []Part
	// plot writes the coordinates of a take and returns what is to be known of
	// it later; like is what was kept of the take it shall be comparable to, or
	// nil.
	plot(dst rows, t *channels.Take, like memory) memory
	// rotate turns coordinates in place.
	rotate(values rows, by quat.Number, m memory)
	// take writes the channels, frame-major, that the coordinates stand for at
	// these instants.
	take(data []float64, values rows, time []float64, m memory)
}

// memory is what a sheet keeps of a take.
type memory any

// rows is a view of some adjacent columns of a frame-major table.
type rows struct {
	values    []float64
	stride    int
	from, end int
}

func (r rows) frames() int { return len(r.values) / r.stride }

// frame returns the columns of frame i.
func (r rows) frame(i int) []float64 {
	return r.values[i*r.stride+r.from : i*r.stride+r.end : i*r.stride+r.end]
}

// within returns a view of adjacent columns, which are counted from the view's
// first.
func (r rows) within(columns []int) rows {
	return rows{r.values, r.stride, r.from + columns[0], r.from + columns[len(columns)-1] + 1}
}

// New lays out a chart for takes of a layout, whose channels may be the joints
// of a skeleton (nil for none). Limits or bones that fit no channel are errors.
func New(layout *channels.Layout, skeleton *body.Skeleton, o Options) (*Chart, error) {
	limits, err := newLimits(layout, o.Limits)
	if err != nil {
		return nil, fmt.Errorf("limits: %w", err)
	}
	c, d := &Chart{layout: layout}, newDraft(layout)
	bones := o.Bones
	if skeleton != nil {
		if k := newSkeleton(d, skeleton, o.FreeFeet); k != nil {
			c.add(k)
		}
		bones = append(d.bonesOf(skeleton), d.without(skeleton, bones)...)
	}
	if len(bones) > 0 {
		p, err := newPoints(d, bones, o.FreeFeet)
		if err != nil {
			return nil, fmt.Errorf("bones: %w", err)
		}
		c.add(p)
	}
	c.add(newInertial(d)...)
	c.add(newTurns(d)...)
	if err := limits.fit(d); err != nil {
		return nil, fmt.Errorf("limits: %w", err)
	}
	if p := newPlain(d, limits); p.width() > 0 {
		c.add(p)
		c.plain = len(c.sheets) == 1 && p.identical(len(layout.Channels))
	}
	c.clamps = limits.clamps()
	return c, nil
}

func (c *Chart) add(sheets ...sheet) {
	for _, s := range sheets {
		c.sheets, c.at = append(c.sheets, s), append(c.at, c.width)
		c.width += s.width()
	}
}

// Width returns the number of coordinates.
func (c *Chart) Width() int { return c.width }

// Parts lists the parts of the chart. What stands still in one take need not
// in another: see [Plot.Parts] for those of one take, which differ in nothing
// but their kind.
func (c *Chart) Parts() []Part { return c.partsOf(nil) }

func (c *Chart) partsOf(kept []memory) []Part {
	var out []Part
	for i, s := range c.sheets {
		var m memory
		if kept != nil {
			m = kept[i]
		}
		first := len(out)
		for _, p := range s.parts(m) {
			p.Coordinates = slices.Clone(p.Coordinates)
			for k := range p.Coordinates {
				p.Coordinates[k] += c.at[i]
			}
			if p.Follows >= 0 {
				p.Follows += first
			}
			out = append(out, p)
		}
	}
	return out
}

// Plot is a take in the coordinates of a chart.
type Plot struct {
	// Values are the coordinates, frames × [Chart.Width], frame-major. They may
	// be those of the take itself and must not be changed.
	Values []float64

	chart *Chart
	kept  []memory // of each sheet
}

// Parts lists the parts of the chart as they are for this take.
func (p *Plot) Parts() []Part { return p.chart.partsOf(p.kept) }

// Plot lays out a valid take. It refers to the take, which must not change as
// long as the plot is in use.
func (c *Chart) Plot(t *channels.Take) *Plot { return c.PlotLike(t, nil) }

// PlotLike lays out a take in the frame of another, about the same mean
// rotations, so that coordinates of the two can be compared and mixed. Varied
// values are brought back with the plot of the take they were begun from.
func (c *Chart) PlotLike(t *channels.Take, like *Plot) *Plot {
	if t.Width() != len(c.layout.Channels) {
		panic("chart: take has another number of channels")
	}
	p := &Plot{chart: c, kept: make([]memory, len(c.sheets))}
	if c.plain {
		p.Values = t.Data
		return p
	}
	p.Values = make([]float64, t.Frames()*c.width)
	for i, s := range c.sheets {
		var m memory
		if like != nil {
			m = like.kept[i]
		}
		p.kept[i] = s.plot(c.rows(p.Values, i), t, m)
	}
	return p
}

func (c *Chart) rows(values []float64, sheet int) rows {
	return rows{values, c.width, c.at[sheet], c.at[sheet] + c.sheets[sheet].width()}
}

// Rotate turns values, frames × [Chart.Width], by one rotation in place: see
// the package documentation for how each part turns. p is the plot of the take
// the values were begun from. A rotation by no angle leaves every bit as it
// is.
func (c *Chart) Rotate(values []float64, by quat.Number, p *Plot) {
	if by = body.Unit(by); math.Abs(by.Real) == 1 {
		return
	}
	for i, s := range c.sheets {
		s.rotate(c.rows(values, i), by, p.kept[i])
	}
}

// Take brings values, frames × [Chart.Width], back into channels: it returns
// frames × channels, frame-major. time holds the instant of each frame in
// seconds, and p is the plot of the take the values were begun from. The values
// belong to the result afterwards.
func (c *Chart) Take(p *Plot, time, values []float64) []float64 {
	if len(values) != len(time)*c.width {
		panic("chart: values do not fit the clock")
	}
	data := values
	if len(time) == 0 {
		return data
	}
	if !c.plain {
		data = make([]float64, len(time)*len(c.layout.Channels))
		for i, s := range c.sheets {
			s.take(data, c.rows(values, i), time, p.kept[i])
		}
	}
	for _, limit := range c.clamps {
		limit.apply(data, len(c.layout.Channels))
	}
	return data
}
