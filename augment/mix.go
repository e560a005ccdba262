package augment

import (
	"math/rand/v2"

	"strandwise/augment/path"
	"strandwise/channels"
	"strandwise/channels/align"
)

// partner is another take of the source's label, aligned to it when first
// drawn.
type partner struct {
	take    *channels.Take
	aligned []float64 // its coordinates at each frame of the source
}

// mix moves the coordinates a drawn share of the way to those of a drawn
// partner, where there is one.
func (s *recipeSource) mix(y []float64, rng *rand.Rand, p map[string]float64) {
	share := min(s.maker.variation.Reach*s.maker.variation.Mix, 1) * rng.Float64()
	if len(s.partners) == 0 || share == 0 {
		return
	}
	other := s.partners[rng.IntN(len(s.partners))]
	if other.aligned == nil {
		other.aligned = s.align(other.take)
	}
	p["mix"] = share
	w := s.chart.Width()
	for _, part := range s.parts {
		if !part.Mix {
			continue
		}
		for i := 0; i < len(y); i += w {
			for _, x := range part.Coordinates {
				y[i+x] += share * (other.aligned[i+x] - y[i+x])
			}
		}
	}
}

// align returns another take's coordinates at the moments that match the
// source's frames.
func (s *recipeSource) align(other *channels.Take) []float64 {
	w := s.chart.Width()
	plot := s.chart.PlotLike(other, s.plot)
	t := s.maker.training
	match := align.Align(t.scaled(s.parts, s.plot.Values, w), t.scaled(s.parts, plot.Values, w), w, align.Default())
	frames := make([]float64, len(plot.Values)/w)
	for i := range frames {
		frames[i] = float64(i)
	}
	samples := path.Samples{Time: frames, Values: plot.Values, Width: w}
	all := make([]int, w)
	for x := range all {
		all[x] = x
	}
	out := make([]float64, len(match.At)*w)
	for i, at := range match.At {
		samples.At(out[i*w:(i+1)*w], at, all)
	}
	return out
}
