package template

import (
	"fmt"
	"math"

	"strandwise/channels"
)

// series is a take made ready for one metric.
type series struct {
	frames int       // per channel
	data   []float64 // frame-major for one path, channel-major for one per channel
}

// preparer makes takes ready for one metric. It holds scratch and serves one
// goroutine.
type preparer struct {
	metric Metric
	layout *channels.Layout
	groups [][]int
	values []float64 // the take normalised, frames × channels
	laid   []float64 // and at the common length
	from   []float64 // a point of a path
	to     []float64 // and the next
}

// newPreparer returns a preparer for takes of the given layout. Channels that
// no group holds count as one group together.
func newPreparer(m Metric, layout *channels.Layout) *preparer {
	return &preparer{metric: m, layout: layout, groups: groupsOf(layout)}
}

func groupsOf(l *channels.Layout) [][]int {
	if len(l.Groups) == 0 {
		all := make([]int, len(l.Channels))
		for c := range all {
			all[c] = c
		}
		return [][]int{all}
	}
	groups := make([][]int, len(l.Groups))
	for i, g := range l.Groups {
		groups[i] = g.Channels
	}
	return groups
}

// prepare makes t ready, reusing the memory of s.
func (p *preparer) prepare(s *series, t *channels.Take) error {
	if err := p.check(t); err != nil {
		if t.Where != "" {
			return fmt.Errorf("%s: %w", t.Where, err)
		}
		return err
	}
	width := t.Width()
	p.values = append(p.values[:0], t.Data...)
	if p.metric.Normalise == ZScore {
		zScore(p.values, width)
	}
	s.frames, s.data = t.Frames(), s.data[:0]
	switch p.metric.Distance {
	case EuclideanDependent:
		s.frames = p.metric.Length
		s.data = p.atLength(s.data, t)
	case EuclideanIndependent:
		s.frames = p.metric.Length
		p.laid = p.atLength(p.laid[:0], t)
		s.data = byChannel(s.data, p.laid, width)
	case DTWDependent:
		s.data = append(s.data, p.values...)
	case DTWIndependent:
		s.data = byChannel(s.data, p.values, width)
	case DirectionCosine:
		s.frames = steps
		s.data = p.directions(s.data, p.values, width)
	}
	return nil
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

// zScore normalises each channel of frame-major data in place to mean 0 and
// population standard deviation 1. A channel that never changes becomes zeros.
func zScore(data []float64, width int) {
	n := float64(len(data) / width)
	for c := range width {
		sum, changes := 0.0, false
		for i := c; i < len(data); i += width {
			sum += data[i]
			changes = changes || data[i] != data[c]
		}
		mean, squares := sum/n, 0.0
		for i := c; i < len(data); i += width {
			data[i] -= mean
			squares += data[i] * data[i]
		}
		sd := math.Sqrt(squares / n)
		for i := c; i < len(data); i += width {
			if changes && sd > 0 {
				data[i] /= sd
			} else {
				data[i] = 0
			}
		}
	}
}

// byChannel appends frame-major data one channel after the other.
func byChannel(dst, data []float64, width int) []float64 {
	for c := range width {
		for i := c; i < len(data); i += width {
			dst = append(dst, data[i])
		}
	}
	return dst
}
