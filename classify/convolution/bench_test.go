package convolution_test

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"strandwise/channels"
	"strandwise/classify/convolution"
)

// BenchmarkFeatures describes takes of 128 frames by 300 kernels, one worker.
// Run with
//
//	go test ./classify/convolution -bench Features -run '^$'
func BenchmarkFeatures(b *testing.B) {
	for _, width := range []int{1, 3, 6, 24} {
		b.Run(fmt.Sprintf("channels=%d", width), func(b *testing.B) {
			takes := walks(16, 128, width)
			k, err := convolution.New(convolution.Options{}, width, rand.New(rand.NewPCG(1, 1)))
			if err != nil {
				b.Fatal(err)
			}
			w, dst := k.Worker(), make([]float64, k.Width())
			b.ReportAllocs()
			i := 0
			for b.Loop() {
				if _, err := w.Features(dst, takes[i%len(takes)]); err != nil {
					b.Fatal(err)
				}
				i++
			}
			perTake := float64(b.Elapsed().Nanoseconds()) / float64(b.N)
			b.ReportMetric(perTake, "ns/take")
			b.ReportMetric(perTake/300, "ns/kernel")
		})
	}
}

// walks returns n random walks.
func walks(n, frames, width int) []*channels.Take {
	g := rand.New(rand.NewPCG(1, 2))
	l := layoutOf(width)
	takes := make([]*channels.Take, n)
	for k := range takes {
		data := make([]float64, frames*width)
		for i := range data {
			data[i] = g.NormFloat64()
			if i >= width {
				data[i] += data[i-width]
			}
		}
		takes[k] = take(fmt.Sprint(k), l, data)
	}
	return takes
}

// BenchmarkTrain fits models to blocks of 33 rows of 600 features, six labels:
// by rows, just beyond that, and many. Run with
//
//	go test ./classify/convolution -bench Train -run '^$'
func BenchmarkTrain(b *testing.B) {
	const width, labels, rows = 600, 6, 33
	for _, c := range []struct {
		sources int
		ridge   convolution.Ridge
	}{
		{6, convolution.Ridge{}},
		{18, convolution.Ridge{}},
		{30, convolution.Ridge{}},
		{450, convolution.Ridge{}},
		{18, convolution.Ridge{Choose: true}},
		{30, convolution.Ridge{Choose: true}},
	} {
		b.Run(fmt.Sprintf("rows=%d/choose=%t", c.sources*rows, c.ridge.Choose), func(b *testing.B) {
			g := rand.New(rand.NewPCG(1, 6))
			numbers, block := make([]int, c.sources), make([]float64, rows*width)
			for i := range numbers {
				numbers[i] = i % labels
			}
			for i := range block {
				block[i] = g.NormFloat64()
			}
			b.ReportAllocs()
			for b.Loop() {
				tr := c.ridge.Trainer(width, numbers)
				for s := range c.sources {
					block[s*7%len(block)]++ // no two blocks alike
					tr.Offer(s, block)
				}
				if _, err := tr.Train(); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N*c.sources*rows), "µs/row")
		})
	}
}
