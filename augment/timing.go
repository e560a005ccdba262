package augment

import (
	"math"
	"slices"

	"strandwise/augment/path"
	"strandwise/augment/smooth"
	"strandwise/augment/variation"
	"strandwise/channels"
	"strandwise/channels/chart"
)

// timing draws which instant of a source take each frame of a new one shows.
// A draw is an increasing map of the parameter along the path of the whole
// take, a mixture of arc length and time, so that limbs with one timing stay
// exactly together.
type timing struct {
	maker    *Maker
	take     *channels.Take
	coupling *coupling
	clock    *path.Clock
	even     []float64 // the source's clock, or one with even steps where its steps differ
	places   []float64 // even steps of the parameter, at which the rate is drawn
	limbs    map[string]limbTiming
	duration float64 // deviation of the logarithm of the duration
}

// limbTiming holds the sizes of one limb's timing.
type limbTiming struct {
	rate, trim float64
	process    *smooth.Process
}

func newTiming(m *Maker, t *channels.Take, parts []chart.Part, scaled []float64, width int) (*timing, error) {
	arc := path.NewArc(scaled, width)
	s := &timing{
		maker: m, take: t, even: evenClock(t.Time),
		clock:  path.NewClock(t.Time, arc.Cumulative(), m.variation.TimeShare),
		places: evenSteps(t.Frames()),
		limbs:  make(map[string]limbTiming),
	}
	var limbs []string
	for _, part := range parts {
		if !slices.Contains(limbs, part.Limb) {
			limbs = append(limbs, part.Limb)
		}
	}
	lengths := make(map[float64]*smooth.Process)
	for _, limb := range limbs {
		length := m.plainSize(variation.TimingLength, t.Label, limb)
		if lengths[length] == nil {
			lengths[length] = smooth.NewProcess(s.places, length)
		}
		s.limbs[limb] = limbTiming{m.rate(t, limb), m.trim(t, limb), lengths[length]}
	}
	s.duration = m.size(variation.Duration, t.Label, "")
	var err error
	s.coupling, err = m.coupling(t, limbs)
	return s, err
}

// evenSteps returns n places from 0 to 1.
func evenSteps(n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = float64(i) / float64(n-1)
	}
	return out
}

// Bounds of timing draws: of the logarithm of the rate of playing, of the
// logarithm of a factor on the duration, and of a shift of an end in standard
// deviations.
const (
	maxLogRate        = 2.3
	maxLogDuration    = 1
	maxTrimDeviations = 2.5
)

// ongoingRate is the size of timing of an ongoing motion, whose ends are where
// the recording was cut and cannot be trimmed.
const ongoingRate = 0.05

// knots of recipe timing by knots, unless the variation says how many.
const defaultKnots = 6

// durationKey names the generator of durations, which no limb has.
const durationKey = "\x00duration"

// draw returns the clock of a new take and, for each limb, the instant of the
// source that each frame shows, in seconds. Instants before the source's first
// frame or after its last show that frame.
func (s *timing) draw(draw int, p map[string]float64) (time []float64, shown map[string][]float64) {
	first, duration := s.take.Time[0], s.take.Duration()
	time = s.newClock(draw, p)
	normals := s.coupling.normals(draw, 2+s.draws())
	shown = make(map[string][]float64, len(normals))
	for k, limb := range s.coupling.limbs {
		e := normals[limb]
		trim := s.limbs[limb].trim
		start, end := trim*clip(e[0], maxTrimDeviations), trim*clip(e[1], maxTrimDeviations)
		m := s.timingMap(e[2:], limb)
		at := make([]float64, len(time))
		for i := range time {
			u := s.clock.Parameter(float64(i) / float64(len(time)-1))
			at[i] = first + duration*(start+s.clock.Time(m(u))*(1+end-start))
		}
		shown[limb] = at
		if k == 0 {
			p["start_s"], p["end_s"] = start*duration, end*duration
		}
	}
	return time, shown
}

// newClock returns the clock of a draw: the even one, or one of as even steps
// that lasts a drawn factor longer.
func (s *timing) newClock(draw int, p map[string]float64) []float64 {
	if s.duration == 0 {
		return slices.Clone(s.even)
	}
	rng := Generator(s.maker.seed, s.take.ID, draw, durationKey)
	factor := math.Exp(clip(s.duration*rng.NormFloat64(), maxLogDuration))
	n := len(s.even)
	frames := max(2, int(math.Round(float64(n-1)*factor))+1)
	p["duration_factor"] = float64(frames-1) / float64(n-1)
	step := (s.even[n-1] - s.even[0]) / float64(n-1)
	out := make([]float64, frames)
	for i := range out {
		out[i] = s.even[0] + float64(i)*step
	}
	return out
}

// trim returns how far a limb's start and end shift, as a fraction of the
// duration. What is cut out of an ongoing motion has no end to shift.
func (m *Maker) trim(t *channels.Take, limb string) float64 {
	if m.kind() == Ongoing {
		return 0
	}
	return min(m.size(variation.Trim, t.Label, limb), maxTrim)
}

// rate returns the deviation of a limb's logarithmic rate of playing.
func (m *Maker) rate(t *channels.Take, limb string) float64 {
	if m.kind() == Ongoing {
		return m.variation.Reach * ongoingRate
	}
	return m.size(variation.Timing, t.Label, limb)
}

// draws returns how many normal draws make a timing.
func (s *timing) draws() int {
	n := s.knots() - 1
	for _, limb := range s.limbs {
		n = max(n, limb.process.Nodes())
	}
	return n
}

func (s *timing) knots() int {
	if s.maker.variation.Knots == 0 {
		return defaultKnots
	}
	return s.maker.variation.Knots
}

func clip(x, most float64) float64 { return min(max(x, -most), most) }

// timingMap returns the map of the parameter that the draws of a limb make.
func (s *timing) timingMap(normals []float64, limb string) func(float64) float64 {
	if s.maker.variation.Timing == Knots {
		return s.knotsMap(normals[:s.knots()-1])
	}
	l := s.limbs[limb]
	return s.smoothMap(l.process.Curve(make([]float64, len(s.places)), normals[:l.process.Nodes()]), l.rate)
}

// smoothMap returns the map whose slope at each place is the exponential of the
// curve there, times the deviation.
func (s *timing) smoothMap(curve []float64, deviation float64) func(float64) float64 {
	sum, before := make([]float64, len(curve)), 0.0 // trapezoids
	for i, z := range curve {
		w := math.Exp(clip(deviation*z, maxLogRate))
		if i > 0 {
			sum[i] = sum[i-1] + (before+w)/2
		}
		before = w
	}
	last := len(sum) - 1
	return func(u float64) float64 {
		x := u * float64(last)
		i := min(int(x), last-1)
		return (sum[i] + (x-float64(i))*(sum[i+1]-sum[i])) / sum[last]
	}
}

// knotsMap returns the smooth map through drawn intervals between knots.
func (s *timing) knotsMap(normals []float64) func(float64) float64 {
	intervals := path.CopulaIntervals(slices.Clone(normals), min(s.maker.variation.Reach*s.maker.variation.Spread, 0.33))
	return path.NewMap(path.Fractions(make([]float64, len(intervals)+1), intervals)).At
}
