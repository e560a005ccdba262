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
// added.
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

// The benchmarks hold 100 queries of 128 frames against 100 templates. Times are
// of the process, all included: preparing the queries, preparing the templates,
// and the search. cells/s are those of the full band, computed or not; x-plain is
// how many times faster than the plain code that is. Run with
//
//	go test ./classify/template -bench . -benchtime 1s -run '^$'
const (
	benchFrames    = 128
	benchTemplates = 100
	benchQueries   = 100
)

// easy and noisy are steps of the random walk added to copies of one gesture, of
// which the gesture itself has steps of 1.
const easy, noisy = 0.1, 1.0

func BenchmarkSearch(b *testing.B) {
	for _, c := range []struct {
		distance template.Distance
		width    int
		band     float64
		noise    float64
	}{
		{template.DTWDependent, 6, 0.1, easy},
		{template.DTWDependent, 6, 0.1, noisy},
		{template.DTWDependent, 6, 0.3, noisy},
		{template.DTWDependent, 6, 1, easy},
		{template.DTWDependent, 6, 1, noisy},
		{template.DTWDependent, 3, 0.1, noisy},
		{template.DTWDependent, 24, 0.1, noisy},
		{template.DTWIndependent, 6, 0.1, easy},
		{template.DTWIndependent, 6, 0.1, noisy},
		{template.DTWIndependent, 6, 1, noisy},
		{template.EuclideanDependent, 6, 1, noisy},
		{template.EuclideanIndependent, 6, 1, noisy},
		{template.DirectionCosine, 6, 1, noisy},
	} {
		name := fmt.Sprintf("%s/channels=%d/band=%g/noise=%g", c.distance, c.width, c.band, c.noise)
		metric := template.Metric{Distance: c.distance, Normalise: template.ZScore, Band: c.band}
		b.Run(name, func(b *testing.B) {
			takes := walks(benchTemplates+benchQueries, benchFrames, c.width, c.noise)
			b.ReportAllocs()
			start := processTime()
			var counts template.Counts
			for b.Loop() {
				counts = searchOnce(b, metric, takes)
			}
			ns := float64(processTime() - start)
			report(b, metric, ns)
			reportCounts(b, metric, counts)
			if c.distance == template.DTWDependent {
				b.ReportMetric(plainTime(metric, takes)*float64(b.N*benchQueries)/ns, "x-plain")
			}
		})
	}
}

// plainTime returns the nanoseconds a query takes the plain code, of ten.
func plainTime(m template.Metric, takes []*channels.Take) float64 {
	const queries = 10
	start := processTime()
	plainSearch(m, takes[:benchTemplates+queries])
	return float64(processTime()-start) / queries
}

// searchOnce searches, and returns what was done.
func searchOnce(b *testing.B, m template.Metric, takes []*channels.Take) template.Counts {
	var block []template.Template
	for i, t := range takes[:benchTemplates] {
		block = append(block, template.Template{Take: t, Order: i})
	}
	s, err := template.NewSearch(m, takes[:benchTemplates], takes[benchTemplates:])
	if err != nil {
		b.Fatal(err)
	}
	if err := s.Worker().Offer(block); err != nil {
		b.Fatal(err)
	}
	return s.Counts()
}

func report(b *testing.B, m template.Metric, ns float64) {
	pairs := float64(b.N * benchQueries * benchTemplates)
	b.ReportMetric(ns/float64(b.N*benchQueries), "ns/query")
	if n := cells(m, benchFrames); n > 0 {
		b.ReportMetric(pairs*n/ns*1e9, "cells/s")
	}
}

func reportCounts(b *testing.B, m template.Metric, c template.Counts) {
	for unit, n := range map[string]int64{
		"%ends": c.Ends, "%template-envelope": c.TemplateEnvelope, "%query-envelope": c.QueryEnvelope,
		"%sketch": c.Sketch, "%abandoned": c.Abandoned, "%compared": c.Pairs - c.Pruned(),
	} {
		b.ReportMetric(100*float64(n)/float64(c.Pairs), unit)
	}
	if n := cells(m, benchFrames); n > 0 {
		b.ReportMetric(100*float64(c.SketchCells)/n/float64(c.Pairs), "%sketch-cells")
		b.ReportMetric(100*float64(c.Cells)/n/float64(c.Pairs), "%cells")
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

// BenchmarkPlain is what the search is measured against: the table of every pair
// in full, in two rows.
func BenchmarkPlain(b *testing.B) {
	for _, band := range []float64{0.1, 1} {
		for _, noise := range []float64{easy, noisy} {
			b.Run(fmt.Sprintf("dtw-dependent/channels=6/band=%g/noise=%g", band, noise), func(b *testing.B) {
				takes := walks(benchTemplates+benchQueries, benchFrames, 6, noise)
				m := template.Metric{Distance: template.DTWDependent, Normalise: template.ZScore, Band: band}
				start := processTime()
				for b.Loop() {
					plainSearch(m, takes)
				}
				report(b, m, float64(processTime()-start))
			})
		}
	}
}

// plainSearch holds every query against every template.
func plainSearch(m template.Metric, takes []*channels.Take) {
	var values [][][]float64
	for _, t := range takes {
		values = append(values, plainSeries(m, t))
	}
	for _, q := range values[benchTemplates:] {
		best := math.Inf(1)
		for _, t := range values[:benchTemplates] {
			best = min(best, plainRows(q, t, m.HalfWidth(len(q), len(t))))
		}
	}
}

// plainRows is plainWarp of which two rows are held.
func plainRows(x, y [][]float64, half int) float64 {
	above, row := make([]float64, len(y)+1), make([]float64, len(y)+1)
	for j := range above {
		above[j] = math.Inf(1)
	}
	above[0] = 0
	for i, a := range x {
		lo, hi := max(0, i-half), min(len(y), i+half+1)
		row[lo] = math.Inf(1)
		for j := lo; j < hi; j++ {
			row[j+1] = squaredDistance(a, y[j]) + min(above[j], above[j+1], row[j])
		}
		if hi < len(y) {
			row[hi+1] = math.Inf(1)
		}
		above, row = row, above
	}
	return above[len(y)]
}
