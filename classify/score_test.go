package classify_test

import (
	"context"
	"errors"
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/template"
)

// split marks every third take as tested.
func split(takes []*channels.Take) []*channels.Take {
	for i, t := range takes {
		t.Split = channels.Train
		if i%3 == 0 {
			t.Split = channels.Test
		}
	}
	return takes
}

// TestFitSeesTrainingTakesOnly records what a score hands out. A fit and a
// maker that would cheat have nothing to cheat with: of the takes tested in a
// split they are given none.
func TestFitSeesTrainingTakesOnly(t *testing.T) {
	all := theatre(3, 4, 4, 0.1)
	for _, c := range []struct {
		options classify.Options
		takes   []*channels.Take
		check   func(kept, tested []*channels.Take) error
		splits  int
	}{
		{classify.Options{Protocol: classify.Given}, split(theatre(3, 4, 4, 0.1)), checkGiven, 1},
		{classify.Options{Protocol: classify.Subject}, all, checkSubject, 4},
		{classify.Options{Protocol: classify.Pooled, TakesPerLabel: 5, Repeats: 7}, all, checkPooled(5), 7},
		{classify.Options{Protocol: classify.Pooled, Repeats: 3}, all, checkPooled(8), 3},
	} {
		t.Run(fmt.Sprint(c.options.Protocol, c.options.TakesPerLabel), func(t *testing.T) {
			calls, asked := 0, map[*channels.Take]int{}
			var mu sync.Mutex
			fit := func(training []*channels.Take) (classify.Maker, error) {
				calls++
				tested := slices.DeleteFunc(slices.Clone(c.takes), func(t *channels.Take) bool { return slices.Contains(training, t) })
				if len(training)+len(tested) != len(c.takes) {
					t.Errorf("split %d hands out takes that are not among the recordings, or one twice", calls)
				}
				if err := c.check(training, tested); err != nil {
					t.Errorf("split %d: %v", calls, err)
				}
				return makerFunc(func(source *channels.Take, n int) ([]*channels.Take, error) {
					if !slices.Contains(training, source) {
						t.Errorf("the maker of split %d is asked for takes of %s, which does not train in it", calls, source.ID)
					}
					mu.Lock()
					defer mu.Unlock()
					asked[source]++
					return jitter{0.1}.Make(source, n)
				}), nil
			}
			c.options.PerTake = 2
			r := mustScore(t, c.takes, fit, c.options)
			if calls != c.splits {
				t.Errorf("fit was called %d times for %d splits", calls, c.splits)
			}
			made := 0
			for _, n := range asked {
				made += n
			}
			if tested := r.Results[0].Tested; made+tested != c.splits*len(c.takes) {
				t.Errorf("%d takes trained and %d were tested in %d splits of %d takes", made, tested, c.splits, len(c.takes))
			}
		})
	}
}

func checkGiven(training, tested []*channels.Take) error {
	for _, t := range tested {
		if t.Split != channels.Test {
			return fmt.Errorf("take %s of split %q is tested", t.ID, t.Split)
		}
	}
	for _, t := range training {
		if t.Split == channels.Test {
			return fmt.Errorf("test take %s trains", t.ID)
		}
	}
	return nil
}

func checkSubject(training, tested []*channels.Take) error {
	for _, t := range training {
		if t.Subject == tested[0].Subject {
			return fmt.Errorf("%s, who is tested, trains with %s", t.Subject, t.ID)
		}
	}
	for _, t := range tested {
		if t.Subject != tested[0].Subject {
			return fmt.Errorf("%s and %s are tested together", t.Subject, tested[0].Subject)
		}
	}
	return nil
}

func checkPooled(k int) func(training, tested []*channels.Take) error {
	return func(training, _ []*channels.Take) error {
		counts := map[string]int{}
		for _, t := range training {
			counts[t.Label]++
		}
		for label, n := range counts {
			if n != k {
				return fmt.Errorf("label %s has %d training takes, want %d", label, n, k)
			}
		}
		return nil
	}
}

func TestPooledSplitsDiffer(t *testing.T) {
	takes := theatre(2, 2, 4, 0.1)
	seen := map[string]int{}
	for seed := range uint64(2) {
		fit := func(training []*channels.Take) (classify.Maker, error) {
			var ids []string
			for _, t := range training {
				ids = append(ids, t.ID)
			}
			seen[strings.Join(ids, " ")]++
			return jitter{0.1}, nil
		}
		mustScore(t, takes, fit, classify.Options{Protocol: classify.Pooled, PerTake: 1, Repeats: 20, Seed: seed})
	}
	if len(seen) < 30 { // of 40 drawn out of 4900
		t.Errorf("40 random splits of two seeds are only %d different ones", len(seen))
	}
}

// TestScoreAgreesWithPlain scores random takes of the given split again, with
// a plain search among all templates at once.
func TestScoreAgreesWithPlain(t *testing.T) {
	takes := split(theatre(6, 3, 8, 2.5))
	const perTake = 5
	r := mustScore(t, takes, fitted(jitter{0.5}), classify.Options{
		Distances: []template.Distance{template.EuclideanDependent}, PerTake: perTake,
	})
	var recorded, made []*channels.Take
	for _, x := range takes {
		if x.Split == channels.Train {
			recorded = append(recorded, x)
			m, _ := jitter{0.5}.Make(x, perTake)
			made = append(made, m...)
		}
	}
	tested, errs, with, helped, hurt := 0, 0, 0, 0, 0
	for _, x := range takes {
		if x.Split != channels.Test {
			continue
		}
		tested++
		a, b := nearest(x, recorded) != x.Label, nearest(x, slices.Concat(recorded, made)) != x.Label
		errs += count(a)
		with += count(b)
		helped += count(a && !b)
		hurt += count(b && !a)
	}
	if helped == 0 || hurt == 0 {
		t.Fatalf("the synthetic takes help %d and hurt %d: this set tests nothing", helped, hurt)
	}
	got := [5]int{r.Results[0].Tested, r.Results[0].Errors, r.Results[1].Errors, *r.Results[1].Helped, *r.Results[1].Hurt}
	if want := [5]int{tested, errs, with, helped, hurt}; got != want {
		t.Errorf("tested, errors, errors with synthetic takes, helped, hurt are %v, plainly %v", got, want)
	}
}

func nearest(x *channels.Take, templates []*channels.Take) string {
	best, label := 0.0, ""
	for _, t := range templates {
		sum := 0.0
		for i, v := range t.Data {
			sum += (v - x.Data[i]) * (v - x.Data[i])
		}
		if label == "" || sum < best {
			best, label = sum, t.Label
		}
	}
	return label
}

func count(yes bool) int {
	if yes {
		return 1
	}
	return 0
}

func TestWorkersDoNotMatter(t *testing.T) {
	takes := theatre(4, 3, 3, 1)
	for _, p := range []classify.Protocol{classify.Subject, classify.Pooled} {
		o := classify.Options{Protocol: p, Distances: template.Distances(), Normalise: template.ZScore, Band: 0.2, PerTake: 3, Seed: 9, Workers: 1}
		one := mustScore(t, takes, fitted(jitter{0.3}), o)
		for _, n := range []int{2, 7, 100} {
			o.Workers = n
			if diff := cmp.Diff(one, mustScore(t, takes, fitted(jitter{0.3}), o)); diff != "" {
				t.Errorf("protocol %s: reports of 1 and of %d workers differ (-1 +%d):\n%s", p, n, n, diff)
			}
		}
	}
}

// TestCopiesChangeNothing adds exact copies as synthetic takes: every one ties
// with its source, and the source wins.
func TestCopiesChangeNothing(t *testing.T) {
	takes := theatre(4, 3, 3, 2.5)
	r := mustScore(t, takes, fitted(jitter{0}), classify.Options{Distances: template.Distances(), PerTake: 4})
	for i := 0; i < len(r.Results); i += 2 {
		recorded, with := r.Results[i], r.Results[i+1]
		if recorded.Errors == 0 || with.Errors != recorded.Errors || *with.Helped+*with.Hurt != 0 || *with.P != 1 || *with.Reduction != 0 {
			t.Errorf("%s: %d errors become %d with copies, helped %d, hurt %d, p %g", recorded.Distance, recorded.Errors, with.Errors, *with.Helped, *with.Hurt, *with.P)
		}
	}
	if !strings.HasPrefix(r.Verdict, "No difference shown") {
		t.Errorf("verdict on copies: %s", r.Verdict)
	}
}

// TestTiedLabels has two labels with the same recorded take: the first in the
// order of the takes wins, whichever the workers meet first.
func TestTiedLabels(t *testing.T) {
	takes := theatre(2, 1, 2, 0)
	a, b, x, y := takes[0], takes[2], takes[1], takes[3]
	b.Data, x.Data, y.Data = a.Data, a.Data, a.Data
	x.Split, y.Split = channels.Test, channels.Test
	for _, order := range [][]*channels.Take{{a, b, x, y}, {b, a, x, y}} {
		r := mustScore(t, order, fitted(jitter{0}), classify.Options{PerTake: 3})
		for _, result := range r.Results {
			for _, l := range result.PerLabel {
				if want := count(l.Label != order[0].Label); l.Recorded != want || l.Synthetic != nil && *l.Synthetic != want {
					t.Errorf("with %s first, label %s has %d errors of 1, want %d", order[0].Label, l.Label, l.Recorded, want)
				}
			}
		}
	}
}

func TestCancel(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	seen := 0
	_, err := classify.Score(ctx, theatre(3, 3, 3, 1), nil, classify.Options{Workers: 1}, func(done, total int) {
		if seen++; done == 5 {
			cancel()
		}
	})
	if !errors.Is(err, context.Canceled) {
		t.Errorf("error of a cancelled score: %v", err)
	}
	if seen != 5 {
		t.Errorf("a score cancelled at take 5 went on to %d", seen)
	}
}

func TestProgress(t *testing.T) {
	var steps [][2]int
	_, err := classify.Score(t.Context(), theatre(2, 3, 2, 1), nil, classify.Options{Workers: 4}, func(done, total int) {
		steps = append(steps, [2]int{done, total})
	})
	if err != nil {
		t.Fatal(err)
	}
	var want [][2]int
	for i := range 24 { // 3 subjects left out, 8 takes train each time
		want = append(want, [2]int{i + 1, 24})
	}
	if diff := cmp.Diff(want, steps); diff != "" {
		t.Errorf("progress (-want +got):\n%s", diff)
	}
}

func TestMakerFaults(t *testing.T) {
	takes := theatre(2, 3, 2, 1)
	fault := errors.New("the arm is missing")
	wide := &channels.Layout{Channels: make([]channels.Channel, 3)}
	for name, c := range map[string]struct {
		fit  classify.Fit
		text string
	}{
		"fit":  {func([]*channels.Take) (classify.Maker, error) { return nil, fault }, "measure variation: the arm is missing"},
		"make": {fitted(makerFunc(func(*channels.Take, int) ([]*channels.Take, error) { return nil, fault })), "make takes from cue"},
		"channels": {fitted(makerFunc(func(s *channels.Take, n int) ([]*channels.Take, error) {
			return []*channels.Take{{ID: "odd", Layout: wide, Time: []float64{0, 1}, Data: []float64{0, 0, 0, 1, 1, 1}}}, nil
		})), "take odd has 3 channels"},
	} {
		_, err := classify.Score(t.Context(), takes, c.fit, classify.Options{PerTake: 2}, nil)
		if err == nil || !strings.Contains(err.Error(), c.text) {
			t.Errorf("%s: error %v does not say %q", name, err, c.text)
		}
	}
}

// TestRandomLabels shuffles the labels: whatever the synthetic takes do, there
// is nothing to learn, and no verdict but one is right.
func TestRandomLabels(t *testing.T) {
	const runs = 100
	wrong := 0
	for seed := range uint64(runs) {
		takes := theatre(4, 3, 5, 1)
		g := rand.New(rand.NewPCG(seed, 0))
		for i := range takes {
			j := g.IntN(i + 1)
			takes[i].Label, takes[j].Label = takes[j].Label, takes[i].Label
		}
		r := mustScore(t, takes, fitted(jitter{0.7}), classify.Options{
			Protocol: classify.Pooled, Distances: []template.Distance{template.EuclideanDependent}, PerTake: 4, Seed: seed,
		})
		wrong += count(!strings.HasPrefix(r.Verdict, "No difference shown"))
	}
	// The test's level is 5 %, and 8 or more of 100 come by chance once in eight
	// times; the seeds are fixed.
	if wrong > 7 {
		t.Errorf("%d of %d verdicts on shuffled labels claim a difference", wrong, runs)
	}
}
