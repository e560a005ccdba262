package classify_test

import (
	"testing"

	"strandwise/classify"
	"strandwise/classify/template"
	"strandwise/testdata/opendata"
)

// BenchmarkPooled scores an open set of 360 takes by a pooled protocol of two
// repeats: 1, 2, 3 and 5 takes per label, 32 synthetic ones of each. Run with
//
//	go test ./classify -bench Pooled -run '^$' -benchtime 1x
func BenchmarkPooled(b *testing.B) {
	takes := opendata.Set(b, "NATOPS")
	for name, o := range map[string]classify.Options{
		"euclidean":   {Distances: []template.Distance{template.EuclideanDependent}},
		"dtw":         {Distances: []template.Distance{template.DTWDependent}, Band: 0.1},
		"dtw-reject":  {Distances: []template.Distance{template.DTWDependent}, Band: 0.1, Reject: true},
		"convolution": {Learners: []classify.Learner{small()}},
	} {
		b.Run(name, func(b *testing.B) {
			o.Protocol, o.TakesPerLabel, o.Repeats, o.PerTake = classify.Pooled, []int{1, 2, 3, 5}, 2, 32
			tests, cells := 0, int64(0)
			for b.Loop() {
				r, err := classify.Score(b.Context(), takes, fitted(jitter{0.1}), o, nil)
				if err != nil {
					b.Fatal(err)
				}
				for _, x := range withResults(r, classify.FromSynthetic) {
					tests += x.Tested
					cells += x.Cells
				}
			}
			b.ReportMetric(float64(tests)/b.Elapsed().Seconds(), "tests/s")
			b.ReportMetric(float64(cells)/b.Elapsed().Seconds()/1e9, "Gcells/s")
		})
	}
}
