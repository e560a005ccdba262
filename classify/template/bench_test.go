package template_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"strandwise/channels"
	"strandwise/classify/template"
)

// walks returns n takes of random-walk gestures, ten labels in turn: smoothly
// warped copies of the label's prototype with a random walk of the given step
// added, normalised per channel.
func walks(n, frames, width int, noise float64) []*channels.Take {
	g := rand.New(rand.NewPCG(1, 2))
	const labels = 10
	layout := layoutOf(width)
	prototypes := make([][]float64, labels)
	for l := range prototypes {
		prototypes[l] = make([]float64, frames*width)
		for i := range prototypes[l] {
			prototypes[l][i] = g.NormFloat64()
			if i >= width {
				prototypes[l][i] += prototypes[l][i-width]
			}
		}
	}
	takes := make([]*channels.Take, n)
	for k := range takes {
		data := make([]float64, frames*width)
		drift := make([]float64, width)
		swing, phase := 0.05*float64(frames)*g.Float64(), 2*math.Pi*g.Float64()
		for i := range frames {
			at := float64(i) + swing*(math.Sin(2*math.Pi*float64(i)/float64(frames)+phase)-math.Sin(phase))
			at = min(max(at, 0), float64(frames)-1.001)
			j, u := int(at), at-math.Floor(at)
			for c := range width {
				drift[c] += noise * g.NormFloat64()
				p := prototypes[k%labels]
				data[i*width+c] = (1-u)*p[j*width+c] + u*p[(j+1)*width+c] + drift[c]
			}
		}
		takes[k] = take(fmt.Sprint(k), layout, data)
	}
	return takes
}

// BenchmarkSearch holds queries of 128 frames against 100 templates, one
// worker; cells are those of the full band, abandoned or not. Run with
//
//	go test ./classify/template -bench Search -benchtime 1s -run '^$'
func BenchmarkSearch(b *testing.B) {
	const frames, templates = 128, 100
	for _, c := range []struct {
		distance template.Distance
		width    int
		band     float64
		noise    float64
	}{
		{template.DTWDependent, 6, 0.1, 0.1},
		{template.DTWDependent, 6, 0.1, 1},
		{template.DTWDependent, 6, 1, 1},
		{template.DTWDependent, 3, 0.1, 1},
		{template.DTWDependent, 24, 0.1, 1},
		{template.DTWIndependent, 6, 0.1, 0.1},
		{template.DTWIndependent, 6, 0.1, 1},
		{template.DTWIndependent, 6, 1, 1},
		{template.EuclideanDependent, 6, 1, 1},
		{template.EuclideanIndependent, 6, 1, 1},
		{template.DirectionCosine, 6, 1, 1},
	} {
		name := fmt.Sprintf("%s/channels=%d/band=%g/noise=%g", c.distance, c.width, c.band, c.noise)
		b.Run(name, func(b *testing.B) {
			takes := walks(templates+20, frames, c.width, c.noise)
			var block []template.Template
			for i, t := range takes[:templates] {
				block = append(block, template.Template{Take: t, Order: i})
			}
			metric := template.Metric{Distance: c.distance, Normalise: template.ZScore, Band: c.band}
			queries := takes[templates:]
			b.ReportAllocs()
			for b.Loop() {
				s, err := template.NewSearch(metric, takes[:templates], queries)
				if err != nil {
					b.Fatal(err)
				}
				if err := s.Worker().Offer(block); err != nil {
					b.Fatal(err)
				}
			}
			pairs := float64(b.N * len(queries) * templates)
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(queries)), "ns/query")
			b.ReportMetric(pairs*cells(metric, frames)/b.Elapsed().Seconds(), "cells/s")
		})
	}
}

// cells returns the table cells of one pair of takes, 0 for distances without
// a table.
func cells(m template.Metric, frames int) float64 {
	if m.Distance != template.DTWDependent && m.Distance != template.DTWIndependent {
		return 0
	}
	n, half := 0, m.HalfWidth(frames, frames)
	for i := range frames {
		n += min(frames, i+half+1) - max(0, i-half)
	}
	return float64(n)
}
