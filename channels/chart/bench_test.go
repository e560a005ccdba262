package chart_test

import (
	"slices"
	"testing"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
	"strandwise/channels/group"
	"strandwise/testdata/opendata"

	"gonum.org/v1/gonum/spatial/r3"
)

// Run with go test -bench . ./channels/chart
func BenchmarkChart(b *testing.B) {
	plain := opendata.Set(b, "NATOPS")[0]
	layout, err := plain.Layout.WithGroups(group.FromNames(plain.Layout.Channels))
	if err != nil {
		b.Fatal(err)
	}
	plain.Layout = layout
	wrists := puppetTakes(b, 120)[0]
	figure := standingFigure(b, 0)
	for _, take := range []struct {
		name string
		*channels.Take
	}{
		{"plain", plain},
		{"wristbands", wrists},
		{"accelerometers", only(b, wrists, ".accel.")},
		{"skeleton", figure},
		{"points", only(b, figure, ".pos.")},
	} {
		c := newChart(b, take.Take, chart.Options{})
		p := c.Plot(take.Take)
		perTake := func(b *testing.B) {
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*take.Frames()*take.Width()), "ns/value")
		}
		b.Run("plot/"+take.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				c.Plot(take.Take)
			}
			perTake(b)
		})
		b.Run("take/"+take.name, func(b *testing.B) {
			b.ReportAllocs()
			values := slices.Clone(p.Values)
			for b.Loop() {
				c.Take(p, take.Time, values)
			}
			perTake(b)
		})
		b.Run("rotate/"+take.name, func(b *testing.B) {
			values, by := slices.Clone(p.Values), body.Exp(r3.Vec{Y: 1e-3})
			for b.Loop() {
				c.Rotate(values, by, p)
			}
			perTake(b)
		})
	}
}
