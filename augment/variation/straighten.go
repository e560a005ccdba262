package variation

import (
	"math"

	"strandwise/augment/path"
)

// Straightening is tried at this many knots evenly spaced in time, on at most
// this many takes, and at strengths this far apart.
const (
	straightenKnots = 16
	straightenTakes = 40
	straightenSteps = 8
)

// straighten adds, for each group and all together, the strength of
// displacement normalisation that changes takes as much as their shape was
// found to differ. It is not used: made takes are best left with the
// displacements they have.
func (e *engine) straighten(m *Measured) {
	var figures []Figure
	for g, group := range e.layout.Groups {
		shape, own := m.Find(Shape, "", group.Name)
		length, _ := m.Find(ShapeLength, "", "")
		if !own || !shape.shown() {
			continue
		}
		curve := e.straightened(g)
		seen := within(length.Used)
		f := shape
		f.Part, f.Unit, f.Used, f.Default = Straighten, Straighten.Unit(), Straighten.Default(), true
		f.Why = "left out, since made takes serve better without"
		f.Raw = strengthOf(curve, shape.Raw)
		f.Measured = strengthOf(curve, shape.Measured*seen)
		f.Low, f.High = strengthOf(curve, shape.Low*seen), strengthOf(curve, shape.High*seen)
		figures = append(figures, f)
	}
	m.Figures = append(m.Figures, figures...)
}

// straightened returns by how much displacement normalisation changes the
// takes of a group, relative to their movement, at strengths from 0 to 1.
func (e *engine) straightened(g int) []float64 {
	list := e.layout.Groups[g].Channels
	var takes []*view
	for _, l := range e.labels {
		takes = append(takes, l.takes...)
	}
	stride := (len(takes) + straightenTakes - 1) / straightenTakes
	changed, moved := make([]float64, straightenSteps+1), 0.0
	for k := 0; k < len(takes); k += stride {
		v := make([]float64, 0, e.frames*len(list))
		for i := range e.frames {
			for _, c := range list {
				v = append(v, takes[k].data[i*e.width+c])
				moved += square(v[len(v)-1])
			}
		}
		for s := range changed {
			changed[s] += straightenOne(v, len(list), float64(s)/straightenSteps)
		}
	}
	for s := range changed {
		changed[s] = math.Sqrt(changed[s] / max(moved, math.SmallestNonzeroFloat64))
	}
	return changed
}

// straightenOne returns the summed square of what displacement normalisation
// of a strength adds to a path, about its mean.
func straightenOne(values []float64, width int, strength float64) float64 {
	frames := len(values) / width
	knots := make([]float64, straightenKnots*width)
	for k := range straightenKnots {
		read(knots[k*width:][:width], values, width, float64(k)/(straightenKnots-1)*float64(frames-1))
	}
	s := path.NewStraightener(knots, width, strength)
	added := make([]float64, len(values))
	for i := range frames {
		s.Add(added[i*width:][:width], float64(i)/float64(frames-1))
	}
	total := 0.0
	for c := range width {
		centre(added, width, c)
	}
	for _, d := range added {
		total += d * d
	}
	return total
}

// strengthOf finds the strength at which the curve, which rises from 0, first
// reaches a value; 1 if it does not.
func strengthOf(curve []float64, value float64) float64 {
	for s := 1; s < len(curve); s++ {
		if curve[s] >= value {
			before := curve[s-1]
			return (float64(s-1) + min(max((value-before)/(curve[s]-before), 0), 1)) / float64(len(curve)-1)
		}
	}
	return 1
}
