package chart_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
)

// change is how a test varies a take, once for each limb or group.
type change struct {
	gain  float64 // factor on the amplitude
	warp  float64 // deviation of the logarithm of the tempo
	tempo float64 // factor on the tempo of all
	turn  r3.Vec  // rotation vector, rad
	seed  uint64
}

// varied is a take drawn from another.
type varied struct {
	*channels.Take
	shown map[string][]float64 // by limb: the instant of the source shown in each frame
}

// vary draws a take: read at other times, its parts amplified as their kinds
// allow, turned.
func vary(c *chart.Chart, take *channels.Take, x change) varied {
	p := c.Plot(take)
	frames := int(math.Round(float64(take.Frames()-1)/x.tempo)) + 1
	out := *take
	out.Time = make([]float64, frames)
	for f := range out.Time {
		out.Time[f] = take.Time[0] + take.Duration()/x.tempo*float64(f)/float64(max(frames-1, 1))
	}
	values := make([]float64, frames*c.Width())
	rng := rand.New(rand.NewPCG(x.seed, 1))
	maps := map[string][]float64{} // seconds of the source at each frame
	for _, part := range p.Parts() {
		if maps[part.Limb] == nil {
			maps[part.Limb] = warped(rng, take, frames, x.warp)
		}
		read(values, p.Values, c.Width(), part.Coordinates, take.Time, maps[part.Limb])
	}
	for _, part := range p.Parts() {
		amplify(values, c.Width(), part, x.gain, tempoOf(out.Time, maps[part.Limb]))
	}
	c.Rotate(values, body.Exp(x.turn), p)
	out.Data = c.Take(p, out.Time, values)
	return varied{&out, maps}
}

// unchanged lays a take out and brings it back.
func unchanged(c *chart.Chart, take *channels.Take) []float64 {
	p := c.Plot(take)
	return c.Take(p, take.Time, slices.Clone(p.Values))
}

// warped draws instants of the source that rise smoothly from its first to its
// last.
func warped(rng *rand.Rand, take *channels.Take, frames int, sd float64) []float64 {
	a, b, phase := rng.NormFloat64(), rng.NormFloat64(), 2*math.Pi*rng.Float64()
	out, sum := make([]float64, frames), 0.0
	for f := range out {
		out[f] = sum
		u := float64(f) / float64(frames)
		sum += math.Exp(sd * (a*math.Sin(2*math.Pi*u+phase) + b*math.Cos(4*math.Pi*u)))
	}
	for f := range out {
		out[f] = take.Time[0] + take.Duration()*out[f]/max(out[frames-1], 1e-300)
	}
	return out
}

// tempoOf returns how fast the source is read at each frame.
func tempoOf(time, at []float64) []float64 {
	out := make([]float64, len(time))
	for f := range out {
		a, b := max(f-1, 0), min(f+1, len(time)-1)
		out[f] = (at[b] - at[a]) / (time[b] - time[a])
	}
	return out
}

// read reads columns at instants by Catmull–Rom splines over frames.
func read(dst, src []float64, width int, columns []int, time, at []float64) {
	last, i := len(time)-1, 0
	for f, s := range at {
		for i < last-1 && time[i+1] <= s {
			i++
		}
		u := 0.0
		if last > 0 {
			u = min(max((s-time[i])/(time[i+1]-time[i]), 0), 1)
		}
		for _, c := range columns {
			v := func(k int) float64 { return src[min(max(k, 0), last)*width+c] }
			a, b, d, e := v(i-1), v(i), v(i+1), v(i+2)
			dst[f*width+c] = b + u/2*(d-a+u*(2*a-5*b+4*d-e+u*(3*(b-d)+e-a)))
		}
	}
}

func amplify(values []float64, width int, part chart.Part, gain float64, tempo []float64) {
	for _, c := range part.Coordinates {
		mean := 0.0
		for i := c; i < len(values); i += width {
			mean += values[i] / float64(len(tempo))
		}
		for f := range tempo {
			v := &values[f*width+c]
			switch part.Kind {
			case chart.Free, chart.Turn:
				*v = mean + gain*(*v-mean)
			case chart.Rate:
				*v *= gain * tempo[f]
			case chart.Linear:
				*v *= gain * tempo[f] * tempo[f]
			}
		}
	}
}

// triad returns three channels, frames × 3: "left.accel" for left.accel.x and so
// on.
func triad(t *channels.Take, stem string) []float64 {
	var out []float64
	for f := range t.Time {
		for _, axis := range []string{"x", "y", "z"} {
			out = append(out, t.Frame(f)[t.Layout.Index(stem+"."+axis)])
		}
	}
	return out
}

func vec(v []float64) r3.Vec { return r3.Vec{X: v[0], Y: v[1], Z: v[2]} }

// farthest returns the largest difference of two equally long lists.
func farthest(t testing.TB, a, b []float64) float64 {
	t.Helper()
	if len(a) != len(b) {
		t.Fatalf("%d values, want %d", len(b), len(a))
	}
	worst := 0.0
	for i := range a {
		d := math.Abs(a[i] - b[i])
		if math.IsNaN(d) {
			return math.NaN()
		}
		worst = math.Max(worst, d)
	}
	return worst
}

// newChart lays out a chart or fails.
func newChart(t testing.TB, take *channels.Take, o chart.Options) *chart.Chart {
	t.Helper()
	c, err := chart.New(take.Layout, take.Skeleton, o)
	if err != nil {
		t.Fatal(err)
	}
	return c
}
