package clock_test

import (
	"math/rand/v2"
	"testing"

	"strandwise/ingest/clock"
)

// jittered is a take of ten seconds at 100 Hz, six channels.
func jittered() clock.Series {
	random := rand.New(rand.NewPCG(5, 6))
	s := clock.Series{Time: uniform(0, 100, 1000), Width: 6, Data: make([]float64, 6000)}
	for i := range s.Time {
		s.Time[i] += 0.002 * random.Float64()
	}
	for i := range s.Data {
		s.Data[i] = random.NormFloat64()
	}
	return s
}

// go test -bench . -run '^$' ./ingest/clock
func BenchmarkRepair(b *testing.B) {
	s := jittered()
	for _, c := range []struct {
		name string
		o    clock.Options
	}{{"linear", clock.Options{}}, {"cubic", clock.Options{Interpolation: clock.Cubic}}, {"filter-to-50-Hz", clock.Options{Rate: 50}}} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := clock.Repair(s, c.o); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(len(s.Data))*float64(b.N)/b.Elapsed().Seconds()/1e6, "Mvalues/s")
		})
	}
}

func BenchmarkInspect(b *testing.B) {
	s := jittered()
	for b.Loop() {
		clock.Inspect(s.Time)
	}
	b.ReportMetric(float64(len(s.Time))*float64(b.N)/b.Elapsed().Seconds()/1e6, "Mframes/s")
}
