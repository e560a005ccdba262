package clock

import "math"

// track is one column where it has values, in order of time.
type track struct {
	time, value []float64
	row         []int
}

// read returns the value at an instant, given the last frame at or before it
// (0 when there is none). Before the first frame and after the last, the
// straight line through the nearest two goes on.
func (t *track) read(at float64, i int, how Interpolation, near float64) float64 {
	i = min(i, len(t.time)-2)
	switch {
	case math.Abs(at-t.time[i]) <= near:
		return t.value[i]
	case math.Abs(at-t.time[i+1]) <= near:
		return t.value[i+1]
	}
	h := t.time[i+1] - t.time[i]
	u := (at - t.time[i]) / h
	a, b := t.value[i], t.value[i+1]
	if how == Linear || u < 0 || u > 1 {
		return a + u*(b-a)
	}
	p, q := h*t.slope(i), h*t.slope(i+1)
	// The cubic Hermite polynomial of value and slope at both ends.
	return a + u*(p+u*(3*(b-a)-2*p-q+u*(p+q-2*(b-a))))
}

// unlike is the ratio of two neighbouring steps above which the parabola
// through their three frames says more about noise than about slope.
const unlike = 5

// slope returns the slope at frame i: that of the parabola through it and its
// two neighbours (the Bessel tangent of de Boor, A Practical Guide to Splines,
// 1978, chapter IV), which for equal steps is the secant of Catmull and Rom
// ("A class of local interpolating splines", 1974), and that secant too where
// the steps are very unlike. At the ends it is the slope there of the parabola
// through the last three frames.
func (t *track) slope(i int) float64 {
	last := len(t.time) - 1
	switch {
	case last == 1:
		return t.secant(0, 1)
	case i == 0:
		return 2*t.secant(0, 1) - t.slope(1)
	case i == last:
		return 2*t.secant(last-1, last) - t.slope(last-1)
	}
	h, k := t.time[i]-t.time[i-1], t.time[i+1]-t.time[i]
	if h > unlike*k || k > unlike*h {
		return t.secant(i-1, i+1)
	}
	return (t.secant(i-1, i)*k + t.secant(i, i+1)*h) / (h + k)
}

func (t *track) secant(i, j int) float64 {
	return (t.value[j] - t.value[i]) / (t.time[j] - t.time[i])
}

// sample reads the track at n equal steps from a start into dst, stride apart.
func (t *track) sample(dst []float64, stride int, g grid, how Interpolation) {
	i := 0
	for k := range g.frames {
		at := g.time(k)
		near := max(onTime*g.step, 4*ulp(at))
		for i+1 < len(t.time) && t.time[i+1] <= at {
			i++
		}
		dst[k*stride] = t.read(at, i, how, near)
	}
}

// ulp is the distance to the next number: times that count from a distant
// epoch are that coarse.
func ulp(x float64) float64 {
	x = math.Abs(x)
	return math.Nextafter(x, math.Inf(1)) - x
}
