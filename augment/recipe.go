package augment

import (
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/augment/path"
	"strandwise/augment/smooth"
	"strandwise/augment/variation"
	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
)

// recipeSource draws takes by the recipe. All of it happens in the coordinates
// of a chart, in which positions, rotations and accelerations may be treated
// alike. A gesture is mixed with another take of its label, turned, changed in
// size, and played at another rate; of an ongoing motion another stretch is put
// together from the take's own.
type recipeSource struct {
	maker    *Maker
	take     *channels.Take
	chart    *chart.Chart
	plot     *chart.Plot
	parts    []chart.Part // of the plot
	planar   bool         // no part has more than two axes
	partners []*partner
	extents  []extent                    // of each part
	rotation float64                     // deviation of the angle, rad
	sizes    *smooth.Process             // of factors that change smoothly during the take, at its frames
	drifts   map[float64]*smooth.Process // of what is added, by correlation length
	timing   *timing
	texture  *texture // of ongoing motion, else nil
	noise    noise
}

// extent holds the sizes by which a part varies: its movement by a factor that
// is constant, one that changes smoothly, and one of each coordinate; and what
// is added to a coordinate, constant or smooth, in sizes of the part. straighten
// is the strength of displacement normalisation.
type extent struct{ amplitude, gain, single, offset, shape, shapeLength, straighten float64 }

func (m *Maker) extent(label, group string) extent {
	size := func(p variation.Part) float64 { return m.size(p, label, group) }
	return extent{
		size(variation.Amplitude), size(variation.Gain), size(variation.ChannelGain),
		size(variation.Offset), size(variation.Shape), m.plainSize(variation.ShapeLength, label, group), min(size(variation.Straighten), 1),
	}
}

// mostPartners bounds the takes that one source is mixed with, which are drawn
// from those of its label: each has to be aligned to it.
const mostPartners = 8

// sizeLength is the correlation length of smooth changes of size, as a fraction
// of the take.
const sizeLength = 0.2

func newRecipeSource(m *Maker, t *channels.Take) (*recipeSource, error) {
	o := m.training.Chart
	o.FreeFeet = m.variation.FreeFeet
	c, err := chart.New(t.Layout, t.Skeleton, o)
	if err != nil {
		return nil, err
	}
	s := &recipeSource{maker: m, take: t, chart: c, plot: c.Plot(t)}
	s.parts = s.plot.Parts()
	s.planar = planar(s.parts)
	s.drifts = make(map[float64]*smooth.Process)
	for k, part := range s.parts {
		s.extents = append(s.extents, m.extent(t.Label, t.Layout.Groups[part.Group].Name))
		if length := s.extents[k].shapeLength; s.drifts[length] == nil {
			s.drifts[length] = smooth.NewProcess(fractions(t.Time), length)
		}
	}
	s.rotation = m.size(variation.Orientation, t.Label, "")
	s.sizes = smooth.NewProcess(fractions(t.Time), sizeLength)
	scaled := m.training.scaled(s.parts, s.plot.Values, c.Width())
	if s.timing, err = newTiming(m, t, s.parts, scaled, c.Width()); err != nil {
		return nil, err
	}
	s.noise = m.noise(t)
	if m.kind() == Ongoing {
		s.texture = newTexture(scaled, c.Width())
		return s, nil
	}
	others := m.training.ofLabel(t.Label, t.ID)
	for _, i := range s.generator(0, partnersKey).Perm(len(others))[:min(len(others), mostPartners)] {
		s.partners = append(s.partners, &partner{take: others[i]})
	}
	return s, nil
}

// planar tells whether a take has axes of a plane only.
func planar(parts []chart.Part) bool {
	flat := false
	for _, part := range parts {
		if part.Axes == 3 || part.Kind == chart.Turn {
			return false
		}
		flat = flat || part.Axes == 2
	}
	return flat
}

// fractions returns a clock as fractions of its duration, from 0 to 1.
func fractions(clock []float64) []float64 {
	out := make([]float64, len(clock))
	for i, at := range clock {
		out[i] = (at - clock[0]) / (clock[len(clock)-1] - clock[0])
	}
	return out
}

// Names under which the parts of a draw have their generators, beside those of
// limbs and parts of the chart.
const (
	wholeKey    = "\x00take"
	textureKey  = "\x00texture"
	noiseKey    = "\x00noise"
	partnersKey = "\x00partners"
)

func (s *recipeSource) draw(draw int, p map[string]float64) (time, data []float64) {
	var y []float64
	if s.texture != nil {
		y = s.texture.draw(s.plot.Values, s.generator(draw, textureKey))
	} else {
		y = slices.Clone(s.plot.Values)
		whole := s.generator(draw, wholeKey)
		s.mix(y, whole, p)
		s.turn(y, whole, p)
		s.resize(y, draw)
	}
	time, shown := s.timing.draw(draw, p)
	values := s.play(y, time, shown)
	s.straighten(values)
	data = s.chart.Take(s.plot, time, values)
	s.noise.add(data, s.take.Width(), s.generator(draw, noiseKey))
	return time, data
}

func (s *recipeSource) generator(draw int, key string) *rand.Rand {
	return Generator(s.maker.seed, s.take.ID, draw, key)
}

// turn turns the whole take about a random axis, in the plane when that is all
// there is.
func (s *recipeSource) turn(y []float64, rng *rand.Rand, p map[string]float64) {
	axis := r3.Unit(r3.Vec{X: rng.NormFloat64(), Y: rng.NormFloat64(), Z: rng.NormFloat64()})
	if s.planar {
		axis = r3.Vec{Z: 1}
	}
	angle := s.rotation * rng.NormFloat64()
	p["rotation_rad"] = angle
	s.chart.Rotate(y, body.Exp(r3.Scale(angle, axis)), s.plot)
}

// resize changes the size of every part's movement smoothly, that of each of
// its coordinates a little by itself, and lets them drift.
func (s *recipeSource) resize(y []float64, draw int) {
	gains := make([]gain, len(s.parts))
	for k, part := range s.parts {
		if part.Kind == chart.Fixed {
			continue
		}
		if part.Follows >= 0 {
			gains[k] = gains[part.Follows]
		} else {
			gains[k] = s.drawGain(part, s.extents[k], partSize(y, s.chart.Width(), part), draw)
		}
		gains[k].apply(y, s.chart.Width(), part)
	}
}

// gain is how a part changes: a factor, and what is added, both for every
// coordinate and frame.
type gain struct{ factor, added [][]float64 }

// drawGain draws how a part of this size changes. Nothing is added to rates and
// accelerations: a hand that rests has none. A rate changes by one factor
// throughout: what has turned comes back to where it was.
func (s *recipeSource) drawGain(part chart.Part, v extent, size float64, draw int) gain {
	n := s.take.Frames()
	rng := s.generator(draw, part.Name)
	constant, common := v.amplitude*rng.NormFloat64(), centred(s.sizes.Draw(make([]float64, n), rng))
	var g gain
	if !aboutMean(part) {
		v.offset, v.shape = 0, 0
	}
	if part.Kind == chart.Rate {
		v.gain, v.single = 0, 0
	}
	for range part.Coordinates {
		factor, added := s.sizes.Draw(make([]float64, n), rng), centred(s.drifts[v.shapeLength].Draw(make([]float64, n), rng))
		moved := v.offset * rng.NormFloat64()
		for i := range factor {
			factor[i] = math.Exp(constant+v.gain*common[i]) * (1 + v.single*factor[i])
			added[i] = size * (moved + v.shape*added[i])
		}
		g.factor, g.added = append(g.factor, factor), append(g.added, added)
	}
	return g
}

// aboutMean tells whether a part is scaled about its mean over the take, as
// places are, and not about zero, as rates and accelerations are.
func aboutMean(part chart.Part) bool { return part.Kind == chart.Free || part.Kind == chart.Turn }

// centred takes the mean off a curve, which is drawn by itself.
func centred(curve []float64) []float64 {
	mean := floats.Sum(curve) / float64(len(curve))
	floats.AddConst(-mean, curve)
	return curve
}

// apply changes a part's coordinates.
func (g gain) apply(y []float64, w int, part chart.Part) {
	for k, x := range part.Coordinates {
		mean := 0.0
		if aboutMean(part) {
			mean = column(y, w, x)
		}
		for i, factor := range g.factor[k] {
			at := &y[i*w+x]
			*at = mean + (*at-mean)*factor + g.added[k][i]
		}
	}
}

// column returns the mean of one coordinate.
func column(y []float64, w, x int) float64 {
	sum := 0.0
	for i := x; i < len(y); i += w {
		sum += y[i]
	}
	return sum * float64(w) / float64(len(y))
}

// partSize returns the root mean square of a part's coordinates about their
// means.
func partSize(y []float64, w int, part chart.Part) float64 {
	sum := 0.0
	for _, x := range part.Coordinates {
		mean := column(y, w, x)
		for i := x; i < len(y); i += w {
			sum += (y[i] - mean) * (y[i] - mean)
		}
	}
	return math.Sqrt(sum * float64(w) / float64(len(y)*len(part.Coordinates)))
}

// play reads the coordinates at the instants shown, limb by limb.
func (s *recipeSource) play(y, time []float64, shown map[string][]float64) []float64 {
	w := s.chart.Width()
	samples := path.Samples{Time: s.take.Time, Values: y, Width: w}
	out := make([]float64, len(time)*w)
	for _, part := range s.parts {
		row := make([]float64, len(part.Coordinates))
		at := shown[part.Limb]
		for i := range time {
			samples.At(row, at[i], part.Coordinates)
			tempo := 1.0
			switch part.Kind {
			case chart.Rate:
				tempo = s.tempo(time, at, i)
			case chart.Linear:
				tempo = s.tempo(time, at, i)
				tempo *= tempo
			}
			for k, x := range part.Coordinates {
				out[i*w+x] = tempo * row[k]
			}
		}
	}
	return out
}

// tempo returns how fast the source is played at frame i: seconds of it per
// second of the new take.
func (s *recipeSource) tempo(time, shown []float64, i int) float64 {
	a, b := max(i-1, 0), min(i+1, len(time)-1)
	first, last := s.take.Time[0], s.take.Time[len(s.take.Time)-1]
	held := func(at float64) float64 { return min(max(at, first), last) }
	return (held(shown[b]) - held(shown[a])) / (time[b] - time[a])
}

// straightKnots is the number of knots between which displacements are
// normalised.
const straightKnots = 16

// straighten evens the displacements of plain parts between knots, as far as
// their strength of displacement normalisation says.
func (s *recipeSource) straighten(values []float64) {
	w := s.chart.Width()
	n := len(values) / w
	for k, part := range s.parts {
		if s.extents[k].straighten == 0 || part.Kind != chart.Free {
			continue
		}
		width := len(part.Coordinates)
		rows := gather(values, w, part.Coordinates)
		samples := path.Samples{Time: evenSteps(n), Values: rows, Width: width}
		knots, all := make([]float64, straightKnots*width), make([]int, width)
		for c := range all {
			all[c] = c
		}
		for i, at := range evenSteps(straightKnots) {
			samples.At(knots[i*width:(i+1)*width], at, all)
		}
		straight := path.NewStraightener(knots, width, s.extents[k].straighten)
		for i := range n {
			straight.Add(rows[i*width:(i+1)*width], float64(i)/float64(n-1))
		}
		scatter(values, w, part.Coordinates, rows)
	}
}
