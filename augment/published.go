package augment

import (
	"math"
	"slices"

	"strandwise/augment/path"
	"strandwise/channels"
)

// pathSource draws takes by the published method. Each group is one path; the
// limbs' draws are coupled as the variation says. The method knows no clock:
// its points are laid evenly over the source's.
type pathSource struct {
	maker *Maker
	take  *channels.Take
	arcs  []*path.Arc // one per group
	knots int
	time  []float64
}

func newPathSource(m *Maker, t *channels.Take) *pathSource {
	s := &pathSource{maker: m, take: t, time: evenClock(t.Time), knots: m.variation.Knots}
	if s.knots == 0 {
		whole := path.NewArc(m.scales.Apply(t), t.Width())
		s.knots = int(math.Round(min(max(whole.Knots(), 3), max(float64(t.Frames()), 3))))
	}
	for _, g := range t.Layout.Groups {
		s.arcs = append(s.arcs, path.NewArc(gather(t, g.Channels), len(g.Channels)))
	}
	return s
}

func (s *pathSource) draw(draw int, p map[string]float64) (time, data []float64) {
	p["knots"] = float64(s.knots)
	intervals := s.maker.limbIntervals(s.take, draw, s.knots)
	frames, w := len(s.time), s.take.Width()
	data = make([]float64, frames*w)
	for g, group := range s.take.Layout.Groups {
		points := s.arcs[g].Resample(nil, intervals[group.Limb])
		spread(data, w, group.Channels, points)
	}
	return slices.Clone(s.time), data
}

// spread lays n points × channels evenly over the frames of data, reading
// linearly between points.
func spread(data []float64, w int, list []int, points []float64) {
	frames, k := len(data)/w, len(list)
	last := len(points)/k - 1
	for i := range frames {
		x := float64(i) * float64(last) / float64(frames-1)
		j := min(int(x), last-1)
		along := x - float64(j)
		for c, ch := range list {
			a, b := points[j*k+c], points[(j+1)*k+c]
			data[i*w+ch] = a + along*(b-a)
		}
	}
}

// gather copies the listed channels of a take, frame-major.
func gather(t *channels.Take, list []int) []float64 {
	out := make([]float64, 0, t.Frames()*len(list))
	for i := range t.Frames() {
		frame := t.Frame(i)
		for _, c := range list {
			out = append(out, frame[c])
		}
	}
	return out
}
