package variation

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"

	"strandwise/channels"
)

// Rests are looked for in windows of this many frames.
const restWindow = 12

// stillness is how far the means of a resting window's quarters may lie from
// each other, relative to how far they do on average over the take.
const stillness = 0.1

// bands is the number of bands of a spectrum, of two frequencies of the window
// each.
const bands = 3

// tremor is what windows of rest of one take tell.
type tremor struct {
	variance [][]float64 // channels × windows
	shares   [][]float64 // channels × bands, summed over windows
}

// medianVariance is the median of a variance of as many degrees of freedom as a
// window leaves, relative to its mean (Wilson and Hilferty, Proceedings of the
// National Academy of Sciences 17 (1931) 684–688). The median over windows is
// not moved by those in which something moved after all.
const medianVariance = 0.9275

// noise measures takes at rest, adds a figure and a spectrum per channel, and
// returns the noise of the views, scaled. Whether a window rests is told by its
// slow movement, and the noise by what is left of a parabola, so that the one
// does not favour small values of the other.
func (e *engine) noise(m *Measured) []float64 {
	var found []tremor
	rate, n := 0.0, 0.0
	for _, l := range e.labels {
		for _, t := range l.takes {
			rate, n = rate+t.raw.Rate(), n+1
			if w := e.tremor(t.raw); len(w.variance[0]) > 0 {
				found = append(found, w)
			}
		}
	}
	scaled := make([]float64, e.width)
	for c, channel := range e.layout.Channels {
		f, spectrum := e.noiseOf(channel, c, found, rate/n)
		m.Figures = append(m.Figures, f)
		if !f.Default {
			m.Spectra = append(m.Spectra, spectrum)
			scaled[c] = f.Measured / e.scales.RMS(e.groupOf(c))
		}
	}
	return scaled
}

func (f *form) groupOf(c int) int {
	return slices.IndexFunc(f.layout.Groups, func(g channels.Group) bool { return slices.Contains(g.Channels, c) })
}

// noiseOf sums up what all takes tell about one channel.
func (e *engine) noiseOf(channel channels.Channel, c int, found []tremor, rate float64) (Figure, Spectrum) {
	f := Figure{Part: Noise, Of: channel.Name, Unit: cmp.Or(channel.Unit, "as recorded"), Takes: len(found)}
	if len(found) == 0 {
		f.Default, f.Why = true, "no take rests"
		return f, Spectrum{}
	}
	var windows []weighted
	variance := func(weight func(i int) float64) float64 {
		windows = windows[:0]
		for i, t := range found {
			for _, v := range t.variance[c] {
				windows = append(windows, weighted{v, weight(i)})
			}
		}
		return weightedMedian(windows) / medianVariance
	}
	r := rand.New(rand.NewPCG(e.o.Seed+3, uint64(c)))
	replicas := make([]float64, e.o.Weights)
	for k := range replicas {
		weights := make([]float64, len(found))
		for i := range weights {
			weights[i] = r.ExpFloat64()
		}
		replicas[k] = variance(func(i int) float64 { return weights[i] })
	}
	v := variance(func(int) float64 { return 1 })
	n := float64(len(found))
	freedom := n * (restWindow - 3) / 4 // what still moves in a rest makes windows of one take alike
	w := spread(replicas, leastSpread(freedom), freedom)
	f.Measured, f.Low, f.High = math.Sqrt(v), math.Sqrt(v*math.Exp(-w)), math.Sqrt(v*math.Exp(w))
	f.Raw, f.Used = f.Measured, shrunk(f.Measured, Noise.Default(), n)
	s := Spectrum{Channel: channel.Name, Rate: rate, Shares: make([]float64, bands)}
	for _, t := range found {
		for b, x := range t.shares[c] {
			s.Shares[b] += x
		}
	}
	if all := sum(s.Shares); all > 0 {
		for b := range s.Shares {
			s.Shares[b] /= all
		}
	}
	return f, s
}

// tremor measures the windows of a take that rest.
func (e *engine) tremor(t *channels.Take) tremor {
	w := e.width
	out := tremor{variance: make([][]float64, w), shares: make([][]float64, w)}
	for c := range out.shares {
		out.shares[c] = make([]float64, bands)
	}
	scaled := e.scales.Apply(t)
	var moves []float64
	for i := 0; i+restWindow <= t.Frames(); i += restWindow / 4 {
		window := scaled[i*w : (i+restWindow)*w]
		if held(window, w) {
			moves = append(moves, math.Inf(1))
		} else {
			moves = append(moves, move(window, w))
		}
	}
	for _, from := range stillest(moves) {
		for c := range w {
			out.add(c, restOf(t.Data, w, c, from*restWindow/4))
		}
	}
	return out
}

// stillest returns which of the windows, a quarter of a window apart, rest:
// the stillest first, and none that overlaps one before it. Of a window that
// tells nothing the movement is infinite.
func stillest(moves []float64) []int {
	total, n := 0.0, 0.0
	for _, d := range moves {
		if !math.IsInf(d, 1) {
			total, n = total+d, n+1
		}
	}
	limit := stillness * total / n
	var order, out []int
	for k, d := range moves {
		if d <= limit {
			order = append(order, k)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(moves[a], moves[b]) })
	for _, k := range order {
		if !slices.ContainsFunc(out, func(o int) bool { return max(o-k, k-o) < 4 }) {
			out = append(out, k)
		}
	}
	return out
}

// held tells whether no channel changes over a window: a sensor at rest
// trembles, so these are frames filled in, not a rest.
func held(window []float64, width int) bool {
	for i := width; i < len(window); i++ {
		if window[i] != window[i-width] {
			return false
		}
	}
	return true
}

// move returns the root mean square distance of the means of a window's
// quarters from the mean of the window.
func move(window []float64, width int) float64 {
	d := 0.0
	quarter := len(window) / 4
	for c := range width {
		var means [4]float64
		for k := range means {
			for i := k*quarter + c; i < (k+1)*quarter; i += width {
				means[k] += window[i] / (restWindow / 4)
			}
		}
		middle := (means[0] + means[1] + means[2] + means[3]) / 4
		for _, v := range means {
			d += square(v-middle) / 4
		}
	}
	return math.Sqrt(d)
}

// restOf copies out one channel over a window of rest.
func restOf(data []float64, width, c, from int) []float64 {
	out := make([]float64, restWindow)
	for i := range out {
		out[i] = data[(from+i)*width+c] - data[from*width+c] // exactly 0 where nothing changes
	}
	return out
}

// add counts in one window of one channel: its variance about the parabola that
// fits best, and the power of what is left by bands.
func (t *tremor) add(c int, window []float64) {
	detrend(window)
	power := 0.0
	for _, x := range window {
		power += x * x
	}
	t.variance[c] = append(t.variance[c], power/(restWindow-3))
	for k := 1; k <= restWindow/2; k++ {
		var re, im float64
		for i, x := range window {
			sin, cos := math.Sincos(2 * math.Pi * float64(k*i) / restWindow)
			re, im = re+x*cos, im+x*sin
		}
		p := re*re + im*im
		if k == restWindow/2 {
			p /= 2 // half of it belongs to the other side
		}
		t.shares[c][min((k-1)/(restWindow/2/bands), bands-1)] += p
	}
}

// detrend takes away the parabola that fits best, by polynomials orthogonal
// over the window: 1, x, and x² − mean x² with x from its middle.
func detrend(window []float64) {
	n := float64(len(window))
	spread := (n*n - 1) / 12 // mean of x²
	for _, p := range []func(x float64) float64{
		func(float64) float64 { return 1 },
		func(x float64) float64 { return x },
		func(x float64) float64 { return x*x - spread },
	} {
		var xy, xx float64
		for i, v := range window {
			x := p(float64(i) - (n-1)/2)
			xy, xx = xy+x*v, xx+x*x
		}
		for i := range window {
			window[i] -= xy / xx * p(float64(i)-(n-1)/2)
		}
	}
}
