package classify_test

import (
	"cmp"
	"math"
	"slices"
	"testing"

	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/statistic"
	"strandwise/classify/template"
)

// euclidean returns the distance of two takes of one length.
func euclidean(a, b *channels.Take) float64 {
	sum := 0.0
	for i, v := range a.Data {
		sum += (v - b.Data[i]) * (v - b.Data[i])
	}
	return math.Sqrt(sum)
}

// TestRejectionAgainstPlain measures every distance again.
func TestRejectionAgainstPlain(t *testing.T) {
	takes := split(theatre(5, 3, 6, 1))
	rest := theatre(7, 1, 3, 1)[15:] // two further cues, of which nothing is known
	const perTake = 3
	r := mustScore(t, takes, fitted(jitter{0.5}), classify.Options{
		Distances: []template.Distance{template.EuclideanDependent}, PerTake: perTake, Curve: []int{1}, Reject: true, Rest: rest,
	})
	for i, synthetic := range []bool{false, true} {
		templates := map[string][]*channels.Take{}
		for _, x := range takes {
			if x.Split != channels.Train {
				continue
			}
			templates[x.Label] = append(templates[x.Label], x)
			if synthetic {
				made, _ := jitter{0.5}.Make(x, perTake)
				templates[x.Label] = append(templates[x.Label], made...)
			}
		}
		near := func(x *channels.Take, without string) float64 {
			best := math.Inf(1)
			for label, list := range templates {
				for _, y := range list {
					if label != without {
						best = min(best, euclidean(x, y))
					}
				}
			}
			return best
		}
		var readings []statistic.Reading
		gestures := 0
		for _, x := range takes {
			if x.Split == channels.Test {
				gestures++
				readings = append(readings, statistic.Reading{Distance: near(x, ""), Gesture: true, Weight: 1}, statistic.Reading{Distance: near(x, x.Label), Weight: 1})
			}
		}
		for _, x := range rest {
			readings = append(readings, statistic.Reading{Distance: near(x, ""), Weight: 1})
		}
		slices.SortStableFunc(readings, func(a, b statistic.Reading) int { return cmp.Compare(a.Distance, b.Distance) })
		threshold, rate := statistic.EqualError(readings)
		got := r.Results[i].Rejection
		if math.Abs(got.Threshold/threshold-1) > 1e-5 || math.Abs(got.Error-rate) > 1e-4 {
			t.Errorf("threshold %g and equal error rate %g, plainly %g and %g", got.Threshold, got.Error, threshold, rate)
		}
		if got.Gestures != gestures || got.Others != gestures+len(rest) || got.Rest != len(rest) {
			t.Errorf("%+v counts other than %d gestures and %d of the rest", got, gestures, len(rest))
		}
		if !(got.Low <= got.Error && got.Error <= got.High && got.Low < got.High) {
			t.Errorf("equal error rate %g in %g to %g", got.Error, got.Low, got.High)
		}
	}
}

// TestRejectionChangesNothingElse scores the same with and without it.
func TestRejectionChangesNothingElse(t *testing.T) {
	takes := theatre(4, 3, 4, 2)
	o := classify.Options{Distances: template.Distances(), PerTake: 4, TakesPerLabel: []int{2, 5}}
	plain := mustScore(t, takes, fitted(jitter{1}), o)
	o.Reject = true
	reject := mustScore(t, takes, fitted(jitter{1}), o)
	for i := range reject.Results {
		a, b := plain.Results[i], reject.Results[i]
		if b.Rejection == nil || a.Rejection != nil {
			t.Errorf("%s: rejection %v when not asked for, %v when asked for", a.Distance, a.Rejection, b.Rejection)
		}
		if a.Errors != b.Errors || a.Cells != b.Cells || *a.TakesPerLabel != *b.TakesPerLabel {
			t.Errorf("%s: %d errors and %d cells, with rejection %d and %d", a.Distance, a.Errors, a.Cells, b.Errors, b.Cells)
		}
	}
	if plain.Verdict != reject.Verdict {
		t.Errorf("verdicts differ:\n%s\n%s", plain.Verdict, reject.Verdict)
	}
}

// TestUntrainedLabelIsNoGesture tests takes of a label that nobody else
// performs: to those who never recorded it, it is no gesture.
func TestUntrainedLabelIsNoGesture(t *testing.T) {
	takes := theatre(3, 3, 2, 0.1)
	for _, x := range takes {
		if x.Label == "cue2" {
			x.Subject = "puppeteer1"
		}
	}
	got := mustScore(t, takes, nil, classify.Options{Reject: true}).Results[0].Rejection
	if got.Gestures != 12 || got.Others != 18 {
		t.Errorf("%d gestures and %d other movements; 12 of 18 takes have templates of their label", got.Gestures, got.Others)
	}
}

func TestRestNeedsTheSameChannels(t *testing.T) {
	odd := theatre(1, 1, 1, 1)
	odd[0].Layout = &channels.Layout{Channels: []channels.Channel{{Name: "other"}}}
	_, err := classify.Score(t.Context(), theatre(2, 3, 2, 1), nil, classify.Options{Reject: true, Rest: odd}, nil)
	if err == nil {
		t.Error("rest of other channels is accepted")
	}
}
