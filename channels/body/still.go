package body

import (
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// Interval is a stretch of frames, From included and To not.
type Interval struct{ From, To int }

// Stillness says when a point stands still: when its places stay within Radius
// of the middle of all of them, its speed over 0.1 s is at most Speed, and that
// lasts for Least or longer.
type Stillness struct {
	Radius float64 // in the unit of the places
	Speed  float64 // in that unit per second
	Least  float64 // seconds
}

// StillnessOf returns the stillness of a foot on the ground for a body whose
// longest way from end to end along its bones is span (see [Skeleton.Span];
// about 2.5 m for a person): within 0.4 % of it (10 mm), slower than 4 % of it
// in a second (0.1 m/s), for 0.15 s.
func StillnessOf(span float64) Stillness {
	return Stillness{Radius: 0.004 * span, Speed: 0.04 * span, Least: 0.15}
}

// speedWindow is the time in seconds over which speed is taken.
const speedWindow = 0.1

// Still returns the stretches of frames in which a point stands still, in
// order and apart from each other. places holds the point's three coordinates
// at each time in seconds. A frame with a value that is not a number ends a
// stretch.
func (s Stillness) Still(time, places []float64) []Interval {
	if len(places) != 3*len(time) {
		panic("body: places and times differ in number")
	}
	var out []Interval
	from, box := 0, newBox()
	end := func(to int) {
		if to > from && time[to-1]-time[from] >= s.Least {
			out = append(out, Interval{from, to})
		}
	}
	slow := s.slow(time, places)
	for i := range time {
		at := vec(places[3*i:])
		if grown := box.with(at); slow[i] && grown.radius() <= s.Radius {
			box = grown
			continue
		}
		end(i)
		from, box = i, newBox().with(at)
		if !slow[i] {
			from, box = i+1, newBox()
		}
	}
	end(len(time))
	return out
}

// slow tells for each frame whether the point is slow around it: over the
// window, or, of frames farther apart, on the way to it or from it.
func (s Stillness) slow(time, places []float64) []bool {
	out, a, b := make([]bool, len(time)), 0, 0
	within := func(from, to int) bool {
		way := r3.Norm(r3.Sub(vec(places[3*to:]), vec(places[3*from:])))
		return way <= s.Speed*(time[to]-time[from])
	}
	for i, t := range time {
		for time[a] < t-speedWindow/2-1e-9 {
			a++
		}
		for b+1 < len(time) && time[b+1] <= t+speedWindow/2+1e-9 {
			b++
		}
		switch here := places[3*i] + places[3*i+1] + places[3*i+2]; {
		case math.IsNaN(here):
		case a < b:
			out[i] = within(a, b)
		default:
			out[i] = i > 0 && within(i-1, i) || i+1 < len(time) && within(i, i+1)
		}
	}
	return out
}

// box is the smallest box along the axes that holds some places.
type box struct{ low, high r3.Vec }

func newBox() box {
	inf := math.Inf(1)
	return box{r3.Vec{X: inf, Y: inf, Z: inf}, r3.Vec{X: -inf, Y: -inf, Z: -inf}}
}

func (b box) with(p r3.Vec) box {
	return box{
		r3.Vec{X: min(b.low.X, p.X), Y: min(b.low.Y, p.Y), Z: min(b.low.Z, p.Z)},
		r3.Vec{X: max(b.high.X, p.X), Y: max(b.high.Y, p.Y), Z: max(b.high.Z, p.Z)},
	}
}

// radius returns the distance from its middle to a corner.
func (b box) radius() float64 { return r3.Norm(r3.Sub(b.high, b.low)) / 2 }
