package variation

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/augment/smooth"
)

// slowness is the correlation length of slow changes of amplitude and shape,
// as a fraction of the take; that of the recipe.
const slowness = 0.2

// Bounds on draws of the model, those of the recipe: the log rate, and the
// trims in standard deviations.
const (
	clipRate = 2.3
	clipTrim = 2.5
)

// model draws takes from views in memory of its own.
type model struct {
	*form
	slow, rate, rest *smooth.Process
	places           []float64
	curve            []float64
	varied           []float64
}

// newModel prepares draws whose timing and shape have these correlation lengths.
func newModel(f *form, timing, shape float64) *model {
	m := &model{form: f, places: make([]float64, f.frames), curve: make([]float64, f.frames)}
	for i := range m.places {
		m.places[i] = float64(i) / float64(f.frames-1)
	}
	m.slow = smooth.NewProcess(m.places, slowness)
	m.rate = smooth.NewProcess(m.places, timing)
	m.rest = smooth.NewProcess(m.places, shape)
	return m
}

// draw writes a take varied from src into dst. Draws come from the generator
// in the same order and number whatever the sizes are.
func (m *model) draw(dst, src *view, s sizes, r *rand.Rand) {
	m.varied = append(m.varied[:0], src.data...)
	m.drawTurn(s.turn, r)
	for g, group := range m.layout.Groups {
		m.drawGroup(group.Channels, s.amplitude[g], s.gain[g], s.offset[g], s.shape[g], r)
	}
	at := m.drawTiming(s, r)
	if len(dst.data) != len(src.data) {
		dst.data = make([]float64, len(src.data))
	}
	for i, p := range at {
		read(dst.data[i*m.width:][:m.width], m.varied, m.width, p)
	}
	for i := range dst.data {
		dst.data[i] += s.noise[i%m.width] * r.NormFloat64()
	}
	dst.duration = src.duration
	m.settle(dst)
}

// drawTurn turns all vectors of the take by one rotation, each about its mean.
func (m *model) drawTurn(size float64, r *rand.Rand) {
	axis := r3.Unit(r3.Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()})
	angle := size * r.NormFloat64()
	if m.axes == 0 {
		return
	}
	means := make([]float64, m.width)
	for _, v := range m.vectors {
		for _, c := range v {
			means[c] = centre(m.varied, m.width, c)
		}
	}
	if m.axes == 2 {
		turnPlane(m.varied, m.width, m.vectors, angle)
	} else {
		sin, cos := math.Sincos(angle / 2)
		turnSpace(m.varied, m.width, m.vectors, quat.Number{Real: cos, Imag: sin * axis.X, Jmag: sin * axis.Y, Kmag: sin * axis.Z})
	}
	for i := range m.varied {
		m.varied[i] += means[i%m.width]
	}
}

// drawGroup varies the amplitude, the mean and the shape of one group.
func (m *model) drawGroup(list []int, amplitude, gain, offset, rest float64, r *rand.Rand) {
	factor := amplitude * r.NormFloat64()
	slow := m.slow.Draw(make([]float64, m.frames), r)
	centre(slow, 1, 0)
	means, size := make([]float64, len(list)), 0.0
	for k, c := range list {
		means[k] = centre(m.varied, m.width, c)
		for i := c; i < len(m.varied); i += m.width {
			size += square(m.varied[i])
		}
	}
	rms := math.Sqrt(size / float64(m.frames*len(list)))
	for k, c := range list {
		mean := means[k] + offset*r.NormFloat64()
		drift := m.rest.Draw(m.curve, r)
		centre(drift, 1, 0)
		for i := range m.frames {
			v := &m.varied[i*m.width+c]
			*v = mean + *v*math.Exp(factor+gain*slow[i]) + rest*rms*drift[i]
		}
	}
}

// drawTiming returns the frame of the source shown at each frame.
func (m *model) drawTiming(s sizes, r *rand.Rand) []float64 {
	begin := s.trim * min(max(r.NormFloat64(), -clipTrim), clipTrim)
	end := s.trim * min(max(r.NormFloat64(), -clipTrim), clipTrim)
	at := m.rate.Draw(m.curve, r)
	timing := s.timing / within(s.timingLength)
	total, last := 0.0, float64(m.frames-1)
	before := math.Exp(min(max(timing*at[0], -clipRate), clipRate))
	for i := range at {
		now := math.Exp(min(max(timing*at[i], -clipRate), clipRate))
		if i > 0 {
			total += (before + now) / 2
		}
		before, at[i] = now, total
	}
	for i, t := range at {
		at[i] = (begin + t/total*(1+end-begin)) * last
	}
	return at
}
