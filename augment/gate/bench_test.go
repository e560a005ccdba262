package gate_test

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"strandwise/augment/gate"
	"strandwise/channels"
)

// Run with
//
//	go test -run '^$' -bench 'Check|Fit' ./augment/gate

// BenchmarkCheck measures one candidate against every gate, of a source made
// ready before, with 96 references.
func BenchmarkCheck(b *testing.B) {
	for _, points := range []int{1, 2, 25} {
		l := layout(channels.Position, points)
		takes, _ := theatre(l, 6, 16, 128)
		source := fit(b, takes, gate.Default()).Source(takes[0])
		candidate := waves(l, 0, "c", 128, rand.New(rand.NewPCG(1, 2)))
		b.Run(fmt.Sprintf("frames=128/channels=%d", 3*points), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				source.Check(candidate)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/take")
		})
	}
}

// BenchmarkFit measures limits of 96 training takes of 128 frames × 6 channels.
func BenchmarkFit(b *testing.B) {
	takes, scales := theatre(layout(channels.Position, 2), 6, 16, 128)
	for b.Loop() {
		if _, err := gate.Fit(takes, scales, gate.Default()); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N*len(takes)), "µs/take")
}
