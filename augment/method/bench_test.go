package method_test

import (
	"math/rand/v2"
	"testing"
)

// One take of 128 frames × 6 channels by each method; the barycentre averages
// three takes in a band of a fifth.
//
//	go test ./augment/method -run '^$' -bench .
func BenchmarkApply(b *testing.B) {
	const frames, width = 128, 6
	k := take{width: width}
	rng := rand.New(rand.NewPCG(1, 1))
	at := make([]float64, width)
	for i := range frames {
		k.time = append(k.time, float64(i)/50)
		for c := range at {
			at[c] += 0.1 * rng.NormFloat64()
		}
		k.src = append(k.src, at...)
	}
	for name, m := range strengths {
		b.Run(name, func(b *testing.B) {
			dst := make([]float64, len(k.src))
			for b.Loop() {
				m.full.Apply(dst, k.src, width, k.time, rng)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/1e3, "µs/take")
		})
	}
}
