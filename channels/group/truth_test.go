package group_test

import (
	"fmt"
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/mat"

	"strandwise/channels"
)

// truth is a made-up recording in which it is known which units keep time with
// each other, and how far. Every label has a smooth shape of its own for every
// channel. Every take reads the shapes of a unit by the time map of the unit's
// group; the maps' drivers are Gaussian processes that correlate by rho between
// any two groups.
type truth struct {
	groups []int   // of each unit: units of one group keep one time
	axes   int     // channels of a unit
	rho    float64 // from 0 to 1
	takes  int     // of each label
	labels int
	rests  bool    // shapes begin and end in rest
	trim   float64 // standard deviation of the shift of each end of a take, in parts of it; it goes with the drivers
	spread float64 // standard deviation of the logarithm of the speed
	noise  float64 // standard deviation; shapes have 1
	frames int
}

// wrists is the usual truth: two units of three axes each, apart.
func wrists(rho float64) truth {
	return truth{groups: []int{0, 1}, axes: 3, rho: rho, takes: 30, labels: 4, rests: true, spread: 0.2, noise: 0.05, frames: 60}
}

const (
	shapePoints  = 200
	driverPoints = 64
)

var (
	shapeRoot  = gaussianProcess(shapePoints, 0.07)
	driverRoot = gaussianProcess(driverPoints, 0.2)
)

// gaussianProcess returns the Cholesky factor of the covariance
// exp(−(u−v)²/(2l²)) at n points from 0 to 1.
func gaussianProcess(n int, l float64) *mat.TriDense {
	k := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			d := float64(i-j) / float64(n-1)
			k.SetSym(i, j, math.Exp(-d*d/(2*l*l)))
		}
		k.SetSym(i, i, 1+1e-8)
	}
	var c mat.Cholesky
	if !c.Factorize(k) {
		panic("the covariance is not positive")
	}
	var out mat.TriDense
	c.LTo(&out)
	return &out
}

func drawProcess(root *mat.TriDense, rng *rand.Rand) []float64 {
	n, _ := root.Dims()
	z := make([]float64, n)
	for i := range z {
		z[i] = rng.NormFloat64()
	}
	out := make([]float64, n)
	for i := range n {
		for j := range i + 1 {
			out[i] += root.At(i, j) * z[j]
		}
	}
	return out
}

// layout names channels c0, c1 …; a limb for each unit where limbs are wanted,
// else no groups.
func (w truth) layout(limbs bool) *channels.Layout {
	l := &channels.Layout{}
	for u := range w.groups {
		g := channels.Group{Name: fmt.Sprint("u", u), Limb: fmt.Sprint("u", u)}
		for range w.axes {
			g.Channels = append(g.Channels, len(l.Channels))
			l.Channels = append(l.Channels, channels.Channel{Name: fmt.Sprint("c", len(l.Channels)), Quantity: channels.Misc})
		}
		if limbs {
			l.Groups = append(l.Groups, g)
		}
	}
	return l
}

// record returns the takes of all labels, 50 frames a second.
func (w truth) record(l *channels.Layout, seed uint64) []*channels.Take {
	rng := rand.New(rand.NewPCG(seed, 7))
	var out []*channels.Take
	for label := range w.labels {
		shapes := w.shapes(rng, len(l.Channels))
		for n := range w.takes {
			t := &channels.Take{ID: fmt.Sprint(label, "-", n), Label: fmt.Sprint("label ", label), Layout: l}
			maps := w.maps(rng)
			for f := range w.frames {
				t.Time = append(t.Time, float64(f)/50)
				for c, shape := range shapes {
					at := (shapePoints - 1) * maps[w.groups[c/w.axes]][f]
					t.Data = append(t.Data, between(shape, at)+w.noise*rng.NormFloat64())
				}
			}
			out = append(out, t)
		}
	}
	return out
}

func (w truth) shapes(rng *rand.Rand, n int) [][]float64 {
	out := make([][]float64, n)
	for c := range out {
		out[c] = drawProcess(shapeRoot, rng)
		if !w.rests {
			continue
		}
		for i := range out[c] {
			u := float64(i) / (shapePoints - 1)
			out[c][i] *= ramp(u/0.15) * ramp((1-u)/0.15)
		}
	}
	return out
}

// maps draws the time map of each group, from frame to part of the shape.
func (w truth) maps(rng *rand.Rand) [][]float64 {
	out := make([][]float64, 1+maximum(w.groups))
	a, b := math.Sqrt(w.rho), math.Sqrt(1-w.rho)
	shared := drawProcess(driverRoot, rng)
	start, end := rng.NormFloat64(), rng.NormFloat64()
	for g := range out {
		driver := drawProcess(driverRoot, rng)
		at := make([]float64, driverPoints)
		speed := func(i int) float64 { return math.Exp(w.spread * (a*shared[i] + b*driver[i])) }
		for i := 1; i < driverPoints; i++ {
			at[i] = at[i-1] + (speed(i-1)+speed(i))/2
		}
		from := w.trim * (a*start + b*rng.NormFloat64())
		to := 1 + w.trim*(a*end+b*rng.NormFloat64())
		for f := range w.frames {
			u := between(at, float64(f)/float64(w.frames-1)*(driverPoints-1)) / at[driverPoints-1]
			out[g] = append(out[g], from+u*(to-from))
		}
	}
	return out
}

func maximum(list []int) int {
	out := 0
	for _, v := range list {
		out = max(out, v)
	}
	return out
}

// between reads a series between its values, and holds it beyond its ends.
func between(y []float64, x float64) float64 {
	x = min(max(x, 0), float64(len(y)-1))
	i := min(int(x), len(y)-2)
	return y[i] + (x-float64(i))*(y[i+1]-y[i])
}

// ramp rises smoothly from 0 at 0 to 1 at 1.
func ramp(x float64) float64 {
	x = min(max(x, 0), 1)
	return x * x * (3 - 2*x)
}

func scalesOf(takes []*channels.Take) *channels.Scales {
	s := &channels.Scales{}
	for _, t := range takes {
		s.Add(t)
	}
	return s
}
