package clock

import "math"

// Polyphase changes the rate of a series by up/down with a linear-phase
// low-pass filter, which takes away what the lower of the two rates cannot
// hold. It is a plan: made once, it may be used for many series, also by
// several goroutines at the same time.
//
// The filter is the windowed sinc of Crochiere and Rabiner, Multirate Digital
// Signal Processing (1983), with the length and window that
// scipy.signal.resample_poly documents as its own: 20·max(up, down) + 1 taps,
// cut off at half the lower rate, in a Kaiser window (Kaiser, "Nonrecursive
// digital filter design using the I0-sinh window function", IEEE ISCAS 1974)
// of beta 5, scaled to pass a constant unchanged. At the cut-off it halves the
// amplitude; below 0.8 of it the error is under 1 %, and above 1.2 of it at
// least 50 dB are taken away.
type Polyphase struct {
	up, down int
	half     int         // taps on each side of the middle one
	phases   [][]float64 // taps by the remainder of the output's place modulo up, in the order of the input
	first    []int       // place of the first of these taps relative to the input under the middle one
}

const (
	kaiserBeta = 5.0
	lobes      = 10 // zero crossings of the sinc on each side
)

// Edge is what a series is taken to be beyond its ends.
type Edge int

// The edges.
const (
	Odd  Edge = iota // turned about its end value, so that value and slope go on: "antireflect" in SciPy
	Zero             // zero, "constant" in SciPy: only for series that begin and end at rest at 0
)

// NewPolyphase designs the filter. Up and down are positive; a common factor
// makes no difference.
func NewPolyphase(up, down int) *Polyphase {
	if up < 1 || down < 1 {
		panic("clock: rate ratio is not positive")
	}
	g := divisor(up, down)
	p := &Polyphase{up: up / g, down: down / g}
	p.half = lobes * max(p.up, p.down)
	taps := p.design()
	p.phases, p.first = make([][]float64, p.up), make([]int, p.up)
	for r := range p.phases {
		// The output at place r of the up-sampled series is the sum over m of
		// x[m]·taps[half + r − m·up].
		low, high := ceilDiv(r-p.half, p.up), floorDiv(r+p.half, p.up)
		p.first[r] = low
		for m := low; m <= high; m++ {
			p.phases[r] = append(p.phases[r], taps[p.half+r-m*p.up])
		}
	}
	return p
}

// design returns the taps, whose sum is up.
func (p *Polyphase) design() []float64 {
	taps := make([]float64, 2*p.half+1)
	cut := 1 / float64(max(p.up, p.down))
	sum := 0.0
	for i := range taps {
		n := float64(i - p.half)
		taps[i] = sinc(cut*n) * bessel0(kaiserBeta*math.Sqrt(1-(n/float64(p.half))*(n/float64(p.half))))
		sum += taps[i]
	}
	for i := range taps {
		taps[i] *= float64(p.up) / sum
	}
	return taps
}

// Len returns how many values a series of n becomes: n·up/down, rounded up.
func (p *Polyphase) Len(n int) int { return ceilDiv(n*p.up, p.down) }

// Resample filters x into dst and returns it. Value k stands at k·down/up
// steps of x. A nil dst is allocated; one of another length than Len(len(x))
// panics. It must not overlap x.
func (p *Polyphase) Resample(dst, x []float64, edge Edge) []float64 {
	n := p.Len(len(x))
	if dst == nil {
		dst = make([]float64, n)
	}
	if len(dst) != n {
		panic("clock: length of dst does not fit")
	}
	for k := range dst {
		place := k * p.down
		taps := p.phases[place%p.up]
		from := place/p.up + p.first[place%p.up]
		dst[k] = convolve(taps, x, from, edge)
	}
	return dst
}

// convolve returns the sum of taps times the values of x from a place on,
// which may begin before x and end after it.
func convolve(taps, x []float64, from int, edge Edge) float64 {
	sum := 0.0
	if from >= 0 && from+len(taps) <= len(x) {
		for i, v := range x[from : from+len(taps)] {
			sum += taps[i] * v
		}
		return sum
	}
	for i, tap := range taps {
		sum += tap * beyond(x, from+i, edge)
	}
	return sum
}

// beyond returns x[i], for i outside of x as the edge says.
func beyond(x []float64, i int, edge Edge) float64 {
	last := len(x) - 1
	switch {
	case i >= 0 && i <= last:
		return x[i]
	case edge == Zero:
		return 0
	case last == 0:
		return x[0]
	}
	// Turning about both ends again and again makes a series that repeats
	// after 2·last steps, higher each time by twice the rise from end to end.
	period := 2 * last
	turns := floorDiv(i, period)
	i -= turns * period
	v := float64(turns) * 2 * (x[last] - x[0])
	if i > last {
		return v + 2*x[last] - x[period-i]
	}
	return v + x[i]
}

func sinc(x float64) float64 {
	if x == 0 {
		return 1
	}
	return math.Sin(math.Pi*x) / (math.Pi * x)
}

// bessel0 is the modified Bessel function of the first kind and order 0, by
// its power series (Abramowitz and Stegun, Handbook of Mathematical Functions,
// 1964, 9.6.12). For x up to 5 its thirty terms are exact to the last digits.
func bessel0(x float64) float64 {
	sum, term := 1.0, 1.0
	for k := 1.0; k <= 30; k++ {
		term *= (x / 2 / k) * (x / 2 / k)
		sum += term
	}
	return sum
}

func divisor(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// floorDiv and ceilDiv divide by a positive b, rounding down and up.
func floorDiv(a, b int) int {
	q := a / b
	if a%b < 0 {
		q--
	}
	return q
}

func ceilDiv(a, b int) int { return -floorDiv(-a, b) }
