package c3d_test

import (
	"bytes"
	"fmt"
	"testing"

	"strandwise/ingest/c3d"
)

// BenchmarkRead reads 40 points and 8 channels of 10 samples in 1000 frames:
//
//	go test -run '^$' -bench Read ./ingest/c3d
func BenchmarkRead(b *testing.B) {
	for _, order := range orders {
		for _, float := range []bool{false, true} {
			storage := map[bool]string{false: "int", true: "float"}[float]
			b.Run(fmt.Sprintf("order=%v/storage=%s", order, storage), func(b *testing.B) {
				r := long(order, float)
				data := r.write()
				b.SetBytes(int64(len(data)))
				b.ReportAllocs()
				for b.Loop() {
					if _, err := c3d.Read(bytes.NewReader(data), c3d.Options{Size: int64(len(data))}); err != nil {
						b.Fatal(err)
					}
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/take")
			})
		}
	}
}

func long(order c3d.Order, float bool) *recording {
	r := &recording{order: order, float: float, unit: "mm", scale: 0.1, rate: 100, first: 1, frames: 1000, perFrame: 10, genScale: 1, bits: 12}
	for i := range 40 {
		r.labels = append(r.labels, fmt.Sprintf("M%d", i))
	}
	for i := range 8 {
		r.channels = append(r.channels, channel{label: fmt.Sprintf("A%d", i), unit: "V", scale: 0.001})
	}
	for i := range 3 * len(r.labels) * r.frames {
		r.xyz = append(r.xyz, float64(i%2000))
	}
	for i := range len(r.channels) * r.perFrame * r.frames {
		r.stored = append(r.stored, float64(i%4000))
	}
	return r
}
