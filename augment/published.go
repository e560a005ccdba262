package augment

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"strandwise/augment/lognormal"
	"strandwise/augment/method"
	"strandwise/augment/path"
	"strandwise/channels"
	"strandwise/channels/chart"
)

// pathSource draws takes by published path resampling. Each group is one path;
// the limbs' draws are coupled as the variation says. The method knows no
// clock: its points are laid evenly over the source's.
type pathSource struct {
	take     *channels.Take
	coupling *coupling
	arcs     []*path.Arc // one per group
	knots    int
	spread   float64
	time     []float64
}

func newPathSource(m *Maker, t *channels.Take, knots int, spread float64) (*pathSource, error) {
	s := &pathSource{take: t, time: evenClock(t.Time), knots: knots, spread: spread}
	if s.knots == 0 {
		whole := path.NewArc(m.training.Scales.Apply(t), t.Width())
		s.knots = int(math.Round(min(max(whole.Knots(), 3), max(float64(t.Frames()), 3))))
	}
	for _, g := range t.Layout.Groups {
		s.arcs = append(s.arcs, path.NewArc(gather(t.Data, t.Width(), g.Channels), len(g.Channels)))
	}
	var err error
	s.coupling, err = m.coupling(t, t.Layout.Limbs())
	return s, err
}

func (s *pathSource) draw(draw int, p map[string]float64) (time, data []float64) {
	p["knots"] = float64(s.knots)
	normals := s.coupling.normals(draw, s.knots-1)
	intervals := make(map[string][]float64)
	for limb, z := range normals {
		intervals[limb] = path.CopulaIntervals(z, s.spread)
	}
	w := s.take.Width()
	data = make([]float64, len(s.time)*w)
	for g, group := range s.take.Layout.Groups {
		spread(data, w, group.Channels, s.arcs[g].Resample(nil, intervals[group.Limb]))
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

// gather copies the listed columns of a table, w columns wide.
func gather(data []float64, w int, list []int) []float64 {
	out := make([]float64, 0, len(data)/w*len(list))
	for i := 0; i < len(data); i += w {
		for _, c := range list {
			out = append(out, data[i+c])
		}
	}
	return out
}

// scatter undoes gather.
func scatter(data []float64, w int, list []int, from []float64) {
	for i := range len(data) / w {
		for k, c := range list {
			data[i*w+c] = from[i*len(list)+k]
		}
	}
}

// publishedSource draws takes by one of the other published methods, at its
// published setting. Values are divided by the size of their group before and
// multiplied by it afterwards.
type publishedSource struct {
	maker  *Maker
	take   *channels.Take
	method Method
	scaled []float64
	whole  bool // all channels vary as one; else each group by itself
	apply  func(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64
	models []*lognormal.Model // of the groups, for Lognormal
	mirror *channels.Take     // for Mirror
}

func newPublishedSource(m *Maker, t *channels.Take, name Method) (*publishedSource, error) {
	s := &publishedSource{maker: m, take: t, method: name, scaled: m.training.Scales.Apply(t)}
	switch name {
	case TimeWarp:
		s.whole, s.apply = true, method.PublishedTimeWarp().Apply
	case Slice:
		s.whole, s.apply = true, method.PublishedSlice().Apply
	case MagnitudeWarp:
		s.apply = method.PublishedMagnitudeWarp().Apply
	case Jitter:
		s.apply = method.PublishedJitter().Apply
	case Scaling:
		s.apply = method.PublishedScaling().Apply
	case Rotation:
		s.apply = method.Rotation{Limit: 0.3}.Apply
	case NoiseField:
		s.apply = method.DefaultNoiseField().Apply
	case Parts:
		s.apply = method.DefaultParts().Apply
	case Barycentre:
		var others [][]float64
		for _, o := range m.training.ofLabel(t.Label, t.ID) {
			others = append(others, m.training.Scales.Apply(o))
		}
		b := method.DefaultBarycentre()
		s.whole = true
		s.apply = func(dst, src []float64, width int, _ []float64, rng *rand.Rand) []float64 {
			return b.Apply(dst, src, others, width, rng)
		}
	case Lognormal:
		return s, s.extract()
	case Mirror:
		var err error
		s.mirror, err = chart.Mirror(t)
		return s, err
	default:
		return nil, fmt.Errorf("no such method")
	}
	return s, nil
}

// extract finds the strokes of every group. A path that is not one of strokes
// is an error.
func (s *publishedSource) extract() error {
	for _, g := range s.take.Layout.Groups {
		list := gather(s.take.Data, s.take.Width(), g.Channels)
		m, err := lognormal.Extract(list, len(g.Channels), s.take.Time, lognormal.Default())
		if err != nil {
			return fmt.Errorf("group %s: %w", g.Name, err)
		}
		s.models = append(s.models, m)
	}
	return nil
}

// unfit tells whether an error says that a method can make nothing of a take,
// which leaves the take without synthetic ones and the others as they are.
func unfit(err error) bool {
	var fit *lognormal.PoorFitError
	return errors.As(err, &fit)
}

func (s *publishedSource) draw(draw int, p map[string]float64) (time, data []float64) {
	t, w := s.take, s.take.Width()
	rng := Generator(s.maker.seed, t.ID, draw, string(s.method))
	time, data = slices.Clone(t.Time), make([]float64, len(t.Data))
	switch {
	case s.mirror != nil:
		copy(data, s.mirror.Data)
	case s.models != nil:
		for g, group := range t.Layout.Groups {
			p["snr_db"] = min(s.models[g].SNR, 200)
			scatter(data, w, group.Channels, lognormal.Published().Synthesise(nil, s.models[g], t.Time, rng))
		}
	case s.whole:
		s.apply(data, s.scaled, w, t.Time, rng)
	default:
		for _, group := range t.Layout.Groups {
			src := gather(s.scaled, w, group.Channels)
			scatter(data, w, group.Channels, s.apply(nil, src, len(group.Channels), t.Time, rng))
		}
	}
	if s.mirror == nil && s.models == nil {
		s.maker.training.Scales.Undo(data, t.Layout)
	}
	return time, data
}
