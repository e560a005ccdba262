package template

import (
	"fmt"
	"math"

	"strandwise/channels"
)

// series is a take made ready for one metric.
type series struct {
	frames   int       // of each part
	data     []float64 // part after part, frame-major; directions group after group
	sketches []sketch  // per part, of takes that are warped; else none
	rings    []ring    // around the sketches, as they were asked for
}

// part returns the values of a part.
func (s *series) part(p *part) []float64 {
	return s.data[p.before*s.frames:][:p.width*s.frames]
}

// preparer makes takes ready for one metric. It holds scratch and serves one
// goroutine.
type preparer struct {
	metric Metric
	layout *channels.Layout
	parts  []part
	scaled [][]int   // sets of channels that share a scale
	values []float64 // the take normalised, frames × channels
	laid   []float64 // and at the common length
	from   []float64 // a point of a path
	to     []float64 // and the next
}

// newPreparer returns a preparer for takes of the given layout.
func newPreparer(m Metric, layout *channels.Layout, parts []part) *preparer {
	return &preparer{metric: m, layout: layout, parts: parts, scaled: m.Normalise.scaled(layout)}
}

// prepare makes t ready, but for sketches, reusing the memory of s.
func (p *preparer) prepare(s *series, t *channels.Take) error {
	if err := p.check(t); err != nil {
		if t.Where != "" {
			return fmt.Errorf("%s: %w", t.Where, err)
		}
		return err
	}
	width := t.Width()
	p.values = append(p.values[:0], t.Data...)
	for _, c := range p.scaled {
		scale(c, p.values, width)
	}
	s.frames, s.data = t.Frames(), s.data[:0]
	values := p.values
	switch p.metric.Distance {
	case EuclideanDependent, EuclideanIndependent:
		s.frames = p.metric.Length
		p.laid = p.atLength(p.laid[:0], t)
		values = p.laid
	case DirectionCosine:
		s.frames = steps
		for _, part := range p.parts {
			s.data = p.directions(s.data, part.groups, values, width)
		}
		return nil
	}
	for _, part := range p.parts {
		s.data = pick(s.data, values, part.groups[0], width)
	}
	return nil
}

// pick appends some channels of frame-major data.
func pick(dst, data []float64, channels []int, width int) []float64 {
	if len(channels) == width {
		return append(dst, data...)
	}
	for i := 0; i < len(data); i += width {
		frame := data[i : i+width]
		for _, c := range channels {
			dst = append(dst, frame[c])
		}
	}
	return dst
}

// largest is the largest value compared: squares of it still add up to finite
// sums, and nothing measured comes near it.
const largest = 1e100

// check reports a take that cannot be compared with the others.
func (p *preparer) check(t *channels.Take) error {
	if t.Layout == nil {
		return fmt.Errorf("take %s has no layout", t.ID)
	}
	if got, want := t.Width(), len(p.layout.Channels); got != want {
		return fmt.Errorf("take %s has %d channels where the others have %d; every take of a score needs the same channels", t.ID, got, want)
	}
	if err := t.Validate(); err != nil {
		return err
	}
	for i, v := range t.Data {
		if math.Abs(v) > largest {
			return fmt.Errorf("take %s: frame %d: channel %s is %g, too large to be compared; check the unit", t.ID, i/t.Width(), t.Layout.Channels[i%t.Width()].Name, v)
		}
	}
	return nil
}

// atLength appends the normalised take at the metric's length: as it is when
// it has that length, else read linearly at equal intervals of its clock.
func (p *preparer) atLength(dst []float64, t *channels.Take) []float64 {
	n, width := p.metric.Length, t.Width()
	if t.Frames() == n {
		return append(dst, p.values...)
	}
	first, last := t.Time[0], t.Time[len(t.Time)-1]
	for k, i := 0, 0; k < n; k++ {
		at := first + (last-first)*float64(k)/float64(n-1)
		for i < len(t.Time)-2 && t.Time[i+1] < at {
			i++
		}
		u := min(1, (at-t.Time[i])/(t.Time[i+1]-t.Time[i]))
		a, b := p.values[i*width:(i+1)*width], p.values[(i+1)*width:(i+2)*width]
		for c, v := range a {
			dst = append(dst, (1-u)*v+u*b[c])
		}
	}
	return dst
}
