package lognormal

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

// Options say how far an extraction goes.
type Options struct {
	Floor   float64 // least signal-to-noise ratio that is accepted, decibels
	Target  float64 // ratio at which no more strokes are sought, decibels
	Strokes int     // most strokes, at most MaxStrokes; 0 for as many as have no more parameters than the path has values
}

// Default returns a floor of 15 dB, below which the model does not describe
// the path, a target of 30 dB and as many strokes as the path can carry.
func Default() Options { return Options{Floor: 15, Target: 30} }

// MaxStrokes bounds the strokes of one path, whatever its length, and with them
// the time an extraction takes.
const MaxStrokes = 40

// Iterations of a refinement, and the share of the error below which it stops:
// of the first guesses, of a new stroke with those it overlaps, of all strokes
// together.
const (
	guessIterations = 4
	localIterations = 4
	jointIterations = 12
	coarseGain      = 0.02
	fineGain        = 0.002
)

// leastGain is the rise of the signal-to-noise ratio, in decibels, below which a
// stroke did not help.
const leastGain = 0.1

// patience is how many strokes in a row may not help before no more are sought.
const patience = 3

// Extract finds strokes whose sum is the path src, frames × width at the given
// instants in seconds, strictly increasing, in the plane or in space (width 1
// to 3). It returns a [*PoorFitError] when their reconstruction stays under the
// floor, and an error for a path of another width, of fewer than four frames or
// with values that are not finite. A path that does not move is a model without
// strokes.
func Extract(src []float64, width int, time []float64, o Options) (*Model, error) {
	if err := check(src, width, time); err != nil {
		return nil, fmt.Errorf("sigma-lognormal model: %w", err)
	}
	m := &Model{Width: width, SNR: math.Inf(1)}
	copy(m.Start[:], src[:width])
	observed := steps(src, width, time)
	largest := observed.largest()
	switch {
	case largest == 0:
		return m, nil
	case math.IsInf(largest, 0):
		return nil, fmt.Errorf("sigma-lognormal model: the path's speed is beyond what a number holds; check its unit and clock")
	}
	x := newExtraction(observed, largest, width, o)
	x.run()
	m.Strokes, m.SNR = x.strokes, x.snr()
	if m.SNR < o.Floor {
		return nil, &PoorFitError{SNR: m.SNR, Floor: o.Floor, Strokes: len(m.Strokes)}
	}
	inOrder(m.Strokes)
	for j := range m.Strokes {
		m.Strokes[j].T0 += time[0]
		m.Strokes[j].D *= largest
	}
	return m, nil
}

// inOrder sorts strokes by their peak times.
func inOrder(strokes []Stroke) {
	slices.SortStableFunc(strokes, func(a, b Stroke) int { return cmp.Compare(a.PeakTime(), b.PeakTime()) })
}

// check reports what no model can be made of.
func check(src []float64, width int, time []float64) error {
	if width < 1 || width > len(Vec{}) {
		return fmt.Errorf("a path of %d coordinates; the model takes one to three, so give it each tracked point by itself", width)
	}
	if len(src) != width*len(time) {
		panic("lognormal: the path does not have one point per instant")
	}
	if len(time) < 4 {
		return fmt.Errorf("%d frames are too few for a stroke; give at least four", len(time))
	}
	for i, v := range src {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return fmt.Errorf("value %v at frame %d, coordinate %d; fill or drop it first", v, i/width, i%width)
		}
	}
	return nil
}

// extraction is the state of one run. Velocities are counted in the path's
// largest, so that no unit is too small or too large for their squares.
type extraction struct {
	fitter
	options  Options
	observed float64 // energy of the path
	residual signal  // what the strokes leave
	strokes  []Stroke
}

func newExtraction(observed signal, largest float64, width int, o Options) *extraction {
	x := &extraction{options: o, residual: observed}
	x.width = width
	duration, travelled := 0.0, 0.0
	for i := range observed.velocity {
		v := &observed.velocity[i]
		*v = combine(1/largest, *v, 0, Vec{})
		step := observed.time[i+1] - observed.time[i]
		duration += step
		travelled += math.Sqrt(dot(*v, *v)) * step
	}
	x.observed = x.residual.energy()
	n := len(observed.velocity)
	x.bounds = bounds{
		earliest: -duration, latest: duration,
		minMu: math.Log(duration / float64(n)), maxMu: math.Log(2 * duration),
		longest: travelled,
	}
	most := (n + 1) * width / columns(width)
	if o.Strokes > 0 {
		most = o.Strokes
	}
	x.options.Strokes = min(max(most, 1), MaxStrokes)
	return x
}

func (x *extraction) snr() float64 { return decibels(x.observed, x.residual.energy()) }

// run adds strokes until the target is reached, the strokes are used up or
// several in a row did not help, and refines them all.
func (x *extraction) run() {
	for idle := 0; len(x.strokes) < x.options.Strokes && x.snr() < x.options.Target && idle < patience; {
		before := x.snr()
		if !x.addStroke() {
			break
		}
		if idle++; x.snr() >= before+leastGain {
			idle = 0
		}
	}
	x.refine(x.strokes, x.residual, jointIterations, fineGain)
	x.drop()
}

// drop takes out the strokes, the shortest first, without which the ratio still
// reaches the target or does not fall: later ones have taken over what they
// explained.
func (x *extraction) drop() {
	order := slices.Clone(x.strokes)
	slices.SortStableFunc(order, func(a, b Stroke) int { return cmp.Compare(a.D, b.D) })
	for _, k := range order {
		least := min(x.options.Target, x.snr())
		x.residual.add(k, 1)
		if x.snr() >= least {
			x.strokes = slices.DeleteFunc(x.strokes, func(other Stroke) bool { return other == k })
		} else {
			x.residual.add(k, -1)
		}
	}
}

// addStroke explains the biggest lump of the residual by one more stroke and
// refines it with those it overlaps. It tells whether there was one.
func (x *extraction) addStroke() bool {
	l, ok := x.residual.biggestLump()
	if !ok {
		return false
	}
	var best Stroke
	least := math.Inf(1)
	guesses := l.guesses()
	for j, k := range guesses {
		guesses[j] = x.aim(k, l)
	}
	for _, k := range append(guesses, x.straight(guesses[0], l)) {
		trial := signal{x.residual.time, slices.Clone(x.residual.velocity)}
		trial.add(k, -1)
		one := []Stroke{k}
		x.refine(one, trial, guessIterations, coarseGain)
		if e := trial.energy(); e < least {
			best, least = one[0], e
		}
	}
	if !(least < x.residual.energy()) {
		return false
	}
	x.residual.add(best, -1)
	x.strokes = append(x.strokes, best)
	inOrder(x.strokes) // strokes that are near in time near in the equations too, which keeps those sparse
	x.refineAround(best)
	return true
}

// aim gives a stroke the direction of the lump's movement before and after its
// peak.
func (x *extraction) aim(k Stroke, l lump) Stroke {
	var before, after Vec
	for i := l.low; i < l.high; i++ {
		s := &before
		if x.residual.time[i+1] > l.t3 {
			s = &after
		}
		*s = combine(1, *s, x.residual.time[i+1]-x.residual.time[i], x.residual.velocity[i])
	}
	whole := unit(combine(1, before, 1, after), unit(before, Vec{1, 0, 0}))
	k.Mid = whole
	if x.width == 1 {
		k.Normal = Vec{0, 1, 0}
		return k
	}
	a, b := unit(before, whole), unit(after, whole)
	bend := combine(1, b, -1, a)
	flat := combine(1, bend, -dot(bend, whole), whole)
	k.Normal = unit(flat, perpendicular(whole))
	// Halves of an arc's way point a half of its turn apart.
	k.Turn = min(2*math.Acos(clip(dot(a, b), -1, 1)), math.Pi)
	return k
}

// straight returns the stroke without its turn, in the direction of the peak:
// where strokes cancel, the halves of what is left point anywhere.
func (x *extraction) straight(k Stroke, l lump) Stroke {
	i := l.low
	for i+1 < l.high && x.residual.time[i+1] < l.t3 {
		i++
	}
	k.Mid = unit(x.residual.velocity[i], k.Mid)
	k.Turn = 0
	if x.width > 1 {
		k.Normal = perpendicular(k.Mid)
	}
	return k
}

// perpendicular returns a unit vector at right angles to v, in the x, y plane
// where v is.
func perpendicular(v Vec) Vec {
	return unit(Vec{-v[1], v[0], 0}, Vec{1, 0, 0})
}

// refineAround refines the strokes that move while k is near its peak.
func (x *extraction) refineAround(k Stroke) {
	from, to := core(k)
	var near []Stroke
	var at []int
	for j, other := range x.strokes {
		if begin, end := core(other); begin < to && end > from {
			near, at = append(near, other), append(at, j)
		}
	}
	x.refine(near, x.residual, localIterations, coarseGain)
	for i, j := range at {
		x.strokes[j] = near[i]
	}
}

// core returns the times between which a stroke does nine tenths of its way.
func core(k Stroke) (from, to float64) {
	const deviations = 1.645
	return k.T0 + math.Exp(k.Mu-deviations*k.Sigma), k.T0 + math.Exp(k.Mu+deviations*k.Sigma)
}
