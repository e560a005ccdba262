package variation

import (
	"math"

	"strandwise/channels/align"
)

// meter measures pairs of views, in memory of its own.
type meter struct {
	*form
	columns *columns
	aligner *align.Aligner
	a, b    []float64 // matched frames of both, each channel's mean removed
	points  [2][]float64
	energy  [2][]float64
}

func newMeter(f *form, c *columns, o align.Options) *meter {
	return &meter{form: f, columns: c, aligner: align.NewAligner(o)}
}

// Shares of a take, from the recipe's figures for 64 frames: the window over
// which the slope of a timing map is taken, and the least there must be.
const slopeWindow = 1.0 / 8

// clipSlope bounds a log slope, so that a map that stands counts as much as
// one that jumps and no more.
const clipSlope = 1.5

// gainWindows is the number of windows over a take whose amplitudes are
// compared.
const gainWindows = 4

// measure fills the row of the pair. What a pair does not tell is NaN. Limbs
// by themselves are measured if asked.
func (m *meter) measure(row []float64, a, b *view, limbs bool) {
	for i := range row {
		row[i] = math.NaN()
	}
	c := m.columns
	al := m.aligner.Align(a.data, b.data, m.width)
	row[c.timing], row[c.timing+1] = m.slopes(al)
	n := float64(m.frames)
	row[c.trim] = float64(al.Begin*al.Begin+al.End*al.End) / 2 / (n * n)
	if a.duration > 0 && b.duration > 0 {
		row[c.duration] = square(math.Log(b.duration / a.duration))
	}
	if limbs && len(m.limbs) > 1 {
		for l, list := range m.limbs {
			one := m.aligner.Align(a.limbs[l], b.limbs[l], len(list))
			row[c.limbTiming+2*l], row[c.limbTiming+2*l+1] = m.slopes(one)
		}
	}
	m.match(al, a, b)
	m.groups(row)
	m.offsets(row[c.offset:][:len(m.layout.Groups)+1], a.means, b.means)
}

// slopes returns the mean squared log slope of a timing map over windows of an
// eighth of the take, and the mean squared distance of the map from the
// straight line between its ends, as a fraction of the take.
func (m *meter) slopes(al align.Alignment) (slope, bend float64) {
	h := max(2, int(math.Round(slopeWindow*float64(m.frames))))
	n := 0
	for i := al.First; i+h <= al.Last; i++ {
		s := math.Log((al.At[i+h] - al.At[i]) / float64(h))
		slope += square(min(max(s, -clipSlope), clipSlope))
		n++
	}
	span := al.Last - al.First
	rate := (al.At[al.Last] - al.At[al.First]) / float64(span)
	for i := al.First; i <= al.Last; i++ {
		bend += square(al.At[i] - al.At[al.First] - rate*float64(i-al.First))
	}
	return slope / float64(n), bend / square(float64(m.frames)) / float64(span) // NaN where the match is too short
}

// match reads b where it matches a, and removes each channel's mean from both.
func (m *meter) match(al align.Alignment, a, b *view) {
	w := m.width
	n := al.Last - al.First + 1
	m.a = append(m.a[:0], a.data[al.First*w:(al.Last+1)*w]...)
	m.b = append(m.b[:0], m.a...)
	for i := range n {
		read(m.b[i*w:][:w], b.data, w, al.At[al.First+i])
	}
	for c := range w {
		centre(m.a, w, c)
		centre(m.b, w, c)
	}
}

// offsets writes the mean squared difference of means per group.
func (m *meter) offsets(dst, a, b []float64) {
	for g, group := range m.layout.Groups {
		sum := 0.0
		for _, c := range group.Channels {
			sum += square(b[c] - a[c])
		}
		dst[g] = sum / float64(len(group.Channels))
	}
	together(dst)
}

// centre removes the mean of one channel and returns it.
func centre(data []float64, width, c int) float64 {
	mean := 0.0
	for i := c; i < len(data); i += width {
		mean += data[i]
	}
	mean /= float64(len(data) / width)
	for i := c; i < len(data); i += width {
		data[i] -= mean
	}
	return mean
}

// groups measures orientation, amplitude and what is left, on the matched
// frames.
func (m *meter) groups(row []float64) {
	c := m.columns
	for g := range m.layout.Groups {
		if len(m.groupVectors) > g && len(m.groupVectors[g]) > 0 {
			row[c.turn+g] = square(m.turn(m.groupVectors[g], false))
		}
	}
	if len(m.vectors) > 0 {
		row[c.orientation] = square(m.turn(m.vectors, true))
	}
	for g, group := range m.layout.Groups {
		m.sizes(group.Channels)
		a, b := sum(m.energy[0]), sum(m.energy[1])
		if a > 0 && b > 0 {
			row[c.amplitude+g] = square(math.Log(b/a) / 2)
			row[c.gain+g] = m.gains(math.Log(b/a) / 2)
			row[c.shape+g], row[c.increment+g] = m.rest(group.Channels, math.Sqrt(a/b))
		}
	}
	for _, first := range []int{c.amplitude, c.gain, c.shape, c.increment} {
		together(row[first : first+len(m.layout.Groups)+1])
	}
}

// together writes the mean of the numbers of all groups behind them, leaving
// out groups of which there is none.
func together(values []float64) {
	total, n := 0.0, 0
	last := len(values) - 1
	for _, v := range values[:last] {
		if !math.IsNaN(v) {
			total, n = total+v, n+1
		}
	}
	values[last] = total / float64(n)
}

// sizes sums the squares of the channels over each window of the take.
func (m *meter) sizes(list []int) {
	for k, data := range [2][]float64{m.a, m.b} {
		m.energy[k] = m.energy[k][:0]
		n := len(data) / m.width
		for w := range gainWindows {
			e := 0.0
			for i := w * n / gainWindows; i < (w+1)*n/gainWindows; i++ {
				for _, c := range list {
					e += square(data[i*m.width+c])
				}
			}
			m.energy[k] = append(m.energy[k], e)
		}
	}
}

// gains returns the mean squared difference of the log ratios of windows from
// that of the take, windows weighing as much as they move.
func (m *meter) gains(whole float64) float64 {
	total, weight := 0.0, 0.0
	for k, a := range m.energy[0] {
		b := m.energy[1][k]
		if w := math.Sqrt(a * b); w > 0 {
			total += w * square(min(max(math.Log(b/a)/2-whole, -clipSlope), clipSlope))
			weight += w
		}
	}
	return total / weight
}

// incrementShare is the part of a take over which increments of the shape are
// taken.
const incrementShare = 1.0 / 16

// rest returns the mean squared difference that is left when b is brought to
// the size of a by the factor, relative to the movement of both; and half the
// mean squared increment of that difference over a sixteenth of the take.
func (m *meter) rest(list []int, factor float64) (shape, increment float64) {
	// √factor on both sides treats the two takes alike.
	up, down := math.Sqrt(factor), 1/math.Sqrt(factor)
	h := max(1, int(math.Round(incrementShare*float64(m.frames)))) * m.width
	size := 0.0
	for _, c := range list {
		for i := c; i < len(m.a); i += m.width {
			d := m.b[i]*up - m.a[i]*down
			size += (square(m.a[i]*down) + square(m.b[i]*up)) / 2
			shape += d * d
			if i >= h {
				increment += square(d-m.b[i-h]*up+m.a[i-h]*down) / 2
			}
		}
	}
	n := float64(len(m.a))
	return shape / size, increment / size * n / (n - float64(h))
}

func square(x float64) float64 { return x * x }

func sum(values []float64) float64 {
	s := 0.0
	for _, v := range values {
		s += v
	}
	return s
}
