package augment_test

import (
	"context"
	"fmt"
	"testing"

	"strandwise/augment"
	"strandwise/channels"
)

// Run with
//
//	go test -run '^$' -bench . -benchtime 1s -count 5 ./augment

// BenchmarkDraw measures one synthetic take, from its generators to its
// frames, of a source that was made ready before.
func BenchmarkDraw(b *testing.B) {
	for _, method := range []augment.Method{augment.Recipe, augment.Path} {
		for _, size := range []struct{ frames, sensors int }{{64, 1}, {128, 2}, {128, 25}} {
			layout := sensorLayout(b, size.sensors)
			take := wander(layout, "bench", size.frames, 1)
			source := source(b, augment.Published(method), 1, take)
			name := fmt.Sprintf("method=%s/frames=%d/channels=%d", method, size.frames, take.Width())
			b.Run(name, func(b *testing.B) {
				b.ReportAllocs()
				draw := 0
				for b.Loop() {
					source.Draw(draw)
					draw++
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/take")
			})
		}
	}
}

// BenchmarkGrow measures a whole stream, 64 recorded takes of 128 frames × 6
// channels with 32 synthetic takes each, as synthetic takes per second.
func BenchmarkGrow(b *testing.B) {
	const recordings, perTake = 64, 32
	layout := sensorLayout(b, 2)
	takes := make([]*channels.Take, recordings)
	for i := range takes {
		takes[i] = wander(layout, fmt.Sprint("take", i), 128, uint64(i))
	}
	for _, method := range []augment.Method{augment.Recipe, augment.Path} {
		m := maker(b, augment.Published(method), 1, takes...)
		for _, workers := range []int{1, 2} {
			b.Run(fmt.Sprintf("method=%s/workers=%d", method, workers), func(b *testing.B) {
				made := 0
				for b.Loop() {
					for t, err := range augment.Grow(context.Background(), stream(takes...), m, augment.GrowOptions{PerTake: perTake, Workers: workers}) {
						if err != nil {
							b.Fatal(err)
						}
						if t.Origin() == channels.Synthetic {
							made++
						}
					}
				}
				b.ReportMetric(float64(made)/b.Elapsed().Seconds(), "takes/s")
			})
		}
	}
}
