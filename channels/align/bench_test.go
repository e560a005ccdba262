package align_test

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"strandwise/channels/align"
)

// go test ./channels/align -run '^$' -bench .
func BenchmarkAlign(b *testing.B) {
	for _, c := range []struct{ frames, width int }{{50, 24}, {100, 6}, {200, 3}, {300, 3}, {300, 75}} {
		b.Run(fmt.Sprintf("frames=%d/width=%d", c.frames, c.width), func(b *testing.B) {
			r := rand.New(rand.NewPCG(1, 1))
			x, y := walk(r, c.frames, c.width), walk(r, c.frames, c.width)
			a := align.NewAligner(align.Default())
			b.ReportAllocs()
			for b.Loop() {
				a.Align(x, y, c.width)
			}
			cells := float64(c.frames) * float64(c.frames) * 0.36 // the band of a fifth: 1 − 0.8²
			b.ReportMetric(cells*float64(b.N)/b.Elapsed().Seconds(), "cells/s")
		})
	}
}
