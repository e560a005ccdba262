package path_test

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"strandwise/augment/path"
)

// Run with
//
//	go test -run '^$' -bench . -benchtime 1s -count 5 ./augment/path

// sourcesPerBench is the number of different source paths a benchmark turns
// through, so that no branch predictor learns one of them by heart.
const sourcesPerBench = 16

// drawsPerArc is how many synthetic paths are made per measured source path.
const drawsPerArc = 64

// BenchmarkResample measures one synthetic take of the published method from
// the draw of its intervals to its frames: the arc length of a source is
// measured once per 64 draws, the points are read back evenly to the source's
// number of frames as float32.
func BenchmarkResample(b *testing.B) {
	for _, size := range []struct{ frames, width, knots int }{
		{64, 2, 32}, {128, 6, 32}, {315, 3, 40}, {128, 75, 24},
	} {
		b.Run(fmt.Sprintf("frames=%d/channels=%d/knots=%d", size.frames, size.width, size.knots), func(b *testing.B) {
			sources := make([][]float64, sourcesPerBench)
			for i := range sources {
				sources[i] = walk(rand.New(rand.NewPCG(7, uint64(i))), size.frames, size.width)
			}
			rng := rand.New(rand.NewPCG(1, 2))
			intervals := make([]float64, size.knots-1)
			points := make([]float64, size.knots*size.width)
			frames := make([]float32, size.frames*size.width)
			var arc *path.Arc
			b.ReportAllocs()
			draws := 0
			for b.Loop() {
				if draws%drawsPerArc == 0 {
					arc = path.NewArc(sources[draws/drawsPerArc%len(sources)], size.width)
				}
				arc.Resample(points, path.Intervals(intervals, 0.25, rng))
				readBack(frames, points, size.width)
				draws++
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/take")
		})
	}
}

// readBack lays points evenly over the frames, reading linearly between them.
func readBack(frames []float32, points []float64, width int) {
	n, last := len(frames)/width, len(points)/width-1
	step := float64(last) / float64(n-1)
	for f := range n {
		x := float64(f) * step
		k := min(int(x), last-1)
		along := x - float64(k)
		o := frames[f*width : (f+1)*width]
		p, q := points[k*width:][:len(o)], points[(k+1)*width:][:len(o)]
		for c := range o {
			o[c] = float32(p[c] + along*(q[c]-p[c]))
		}
	}
}

// walk is a random walk of steps within ±½ on every axis.
func walk(rng *rand.Rand, points, width int) []float64 {
	out := make([]float64, points*width)
	for i := range out {
		out[i] = rng.Float64() - 0.5
		if i >= width {
			out[i] += out[i-width]
		}
	}
	return out
}

// BenchmarkSamplesAt measures reading one instant of a take, at instants that
// move forward as a new take reads its source.
func BenchmarkSamplesAt(b *testing.B) {
	for _, width := range []int{3, 6, 75} {
		b.Run(fmt.Sprintf("channels=%d", width), func(b *testing.B) {
			const frames = 128
			s := path.Samples{Time: ramp(frames), Values: walk(rand.New(rand.NewPCG(7, 1)), frames, width), Width: width}
			list, row := make([]int, width), make([]float64, width)
			for c := range list {
				list[c] = c
			}
			at := 0.0
			for b.Loop() {
				if at += 0.9; at > frames-1 {
					at = 0
				}
				s.At(row, at, list)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/frame")
		})
	}
}

// ramp is the clock 0, 1, 2 … in seconds.
func ramp(n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = float64(i)
	}
	return out
}
