package classify_test

import (
	"fmt"
	"math"
	"testing"
	"time"

	"strandwise/classify"
	"strandwise/classify/template"
	"strandwise/testdata/opendata"
)

// archive is the published accuracy of a nearest template on the splits of the
// archive, in the order of archiveDistances. Source: Shifaz, Pelletier,
// Petitjean, Webb, "Elastic similarity and distance measures for multivariate
// time series", Knowledge and Information Systems (2023), arXiv 2102.10231;
// DTW as is also in Bagnall et al. (2018), arXiv 1811.00075.
var archive = []struct {
	set       string
	normalise template.Normalise
	accuracy  [4]float64
}{
	{"BasicMotions", template.AsIs, [4]float64{0.6000, 0.6000, 1.0000, 0.9750}},
	{"BasicMotions", template.ZScore, [4]float64{0.7250, 0.7250, 0.8750, 0.9750}},
	{"Epilepsy", template.AsIs, [4]float64{0.6667, 0.6304, 0.9783, 0.9638}},
	{"Epilepsy", template.ZScore, [4]float64{0.7536, 0.7319, 0.9493, 0.8696}},
	{"Libras", template.AsIs, [4]float64{0.8167, 0.8278, 0.8944, 0.8722}},
	{"Libras", template.ZScore, [4]float64{0.7444, 0.7056, 0.8111, 0.8056}},
	{"NATOPS", template.AsIs, [4]float64{0.8222, 0.8389, 0.8500, 0.8833}},
	{"NATOPS", template.ZScore, [4]float64{0.7000, 0.7056, 0.7944, 0.7444}},
	{"UWaveGestureLibrary", template.AsIs, [4]float64{0.8812, 0.8750, 0.8688, 0.9031}},
}

var archiveDistances = [4]template.Distance{
	template.EuclideanIndependent, template.EuclideanDependent, template.DTWIndependent, template.DTWDependent,
}

// TestArchive holds the score against the published accuracies, to the last
// take. Under -short the sets that take longest are left out.
func TestArchive(t *testing.T) {
	for _, a := range archive {
		t.Run(fmt.Sprintf("%s/%s", a.set, a.normalise), func(t *testing.T) {
			if testing.Short() && a.set != "BasicMotions" && a.set != "Libras" {
				t.Skip("long: left out under -short")
			}
			takes := opendata.Set(t, a.set)
			for i, d := range archiveDistances {
				start := time.Now()
				r, err := classify.Score(t.Context(), takes, nil, classify.Options{
					Distances: []template.Distance{d}, Normalise: a.normalise,
				}, nil)
				if err != nil {
					t.Fatal(err)
				}
				got := r.Results[0]
				right := got.Tested - got.Errors
				if want := int(math.Round(a.accuracy[i] * float64(got.Tested))); right != want {
					t.Errorf("%s: %d of %d right, published %d", d, right, got.Tested, want)
				}
				t.Logf("%-22s %d of %d right in %.2f s", d, right, got.Tested, time.Since(start).Seconds())
			}
		})
	}
}
