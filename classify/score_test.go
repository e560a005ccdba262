package classify_test

import (
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
// split they are given none. A learner that tests nothing watches the splits.
func TestFitSeesTrainingTakesOnly(t *testing.T) {
	all := theatre(3, 4, 4, 0.1)
	for _, c := range []struct {
		options classify.Options
		takes   []*channels.Take
		check   func(training, tested []*channels.Take) error
		splits  int
	}{
		{classify.Options{Protocol: classify.Given}, split(theatre(3, 4, 4, 0.1)), checkGiven, 1},
		{classify.Options{Protocol: classify.Subject}, all, checkApart(subject), 4},
		{classify.Options{Protocol: classify.Subject, TestShare: 0.5, Repeats: 6}, all, checkApart(subject), 6},
		{classify.Options{Protocol: classify.Subject, TakesPerLabel: []int{3}, Repeats: 2}, all, checkApart(subject), 8},
		{classify.Options{Protocol: classify.Session}, all, checkApart(session), 3},
		{classify.Options{Protocol: classify.Session, TakesPerLabel: []int{1, 0}}, all, checkApart(session), 6},
		{classify.Options{Protocol: classify.Pooled, TakesPerLabel: []int{5}, Repeats: 7}, all, checkPooled(5), 7},
		{classify.Options{Protocol: classify.Pooled, Repeats: 3}, all, checkPooled(8), 3},
		{classify.Options{Protocol: classify.Pooled}, all, checkPooled(8), 10},
	} {
		t.Run(fmt.Sprint(c.options.Protocol, c.options.TakesPerLabel, c.options.TestShare), func(t *testing.T) {
			var mu sync.Mutex
			spy := &spy{}
			fits, makes := map[string]int{}, 0
			fit := func(training []*channels.Take) (classify.Maker, error) {
				mu.Lock()
				defer mu.Unlock()
				given := slices.Clone(training)
				clear(training) // it is the fit's own list: this harms nobody
				fits[ids(given)]++
				return makerFunc(func(source *channels.Take, n int) ([]*channels.Take, error) {
					if !slices.Contains(given, source) {
						t.Errorf("a maker fitted to %s is asked for takes of %s", ids(given), source.ID)
					}
					mu.Lock()
					defer mu.Unlock()
					makes++
					return jitter{0.1}.Make(source, n)
				}), nil
			}
			c.options.PerTake, c.options.Learners = 2, []classify.Learner{spy}
			mustScore(t, c.takes, fit, c.options)
			trained := 0
			for _, l := range spy.lessons {
				if err := c.check(l.Training, l.Test); err != nil {
					t.Error(err)
				}
				for _, x := range l.Test {
					if slices.Contains(l.Training, x) || !slices.Contains(c.takes, x) {
						t.Errorf("take %s is tested, and trains or is no recording", x.ID)
					}
				}
				fits[ids(l.Training)]--
				trained += len(l.Training)
			}
			for list, n := range fits {
				if n != 0 {
					t.Errorf("the list %s is given to %+d fits more than to learners", list, n)
				}
			}
			if len(spy.lessons) != c.splits || makes != trained {
				t.Errorf("%d splits, want %d; %d takes train and makers are asked %d times", len(spy.lessons), c.splits, trained, makes)
			}
		})
	}
}

func ids(takes []*channels.Take) string {
	var out []string
	for _, t := range takes {
		out = append(out, t.ID)
	}
	return strings.Join(out, " ")
}

// spy is a learner that keeps its lessons and answers with the first label.
type spy struct {
	mu      sync.Mutex
	lessons []classify.Lesson
}

func (*spy) Name() string { return "spy" }

func (s *spy) Begin(l classify.Lesson) (classify.Study, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.lessons = append(s.lessons, l)
	return spying{l}, nil
}

type spying struct{ lesson classify.Lesson }

func (s spying) Worker() classify.Worker               { return s }
func (s spying) Learn(int, [][]classify.Example) error { return nil }
func (s spying) Work(int) classify.Work                { return classify.Work{} }
func (s spying) Recognise() ([][]classify.Answer, error) {
	out := make([][]classify.Answer, len(s.lesson.Sets))
	for i := range out {
		for range s.lesson.Test {
			out[i] = append(out[i], classify.Answer{Label: s.lesson.Training[0].Label})
		}
	}
	return out, nil
}

// TestLongerListsHoldShorterOnes checks that a curve over takes per label is
// paired: the training takes of a smaller number are among those of a larger.
func TestLongerListsHoldShorterOnes(t *testing.T) {
	for _, p := range []classify.Protocol{classify.Pooled, classify.Subject, classify.Session} {
		spy := &spy{}
		mustScore(t, theatre(3, 4, 4, 0.1), nil, classify.Options{
			Protocol: p, TakesPerLabel: []int{1, 2, 5}, Repeats: 4, Workers: 1, Learners: []classify.Learner{spy},
		})
		sizes := map[int]int{}
		for _, l := range spy.lessons { // in no order
			sizes[len(l.Training)]++
			shorter := map[int]int{6: 3, 15: 6}[len(l.Training)]
			if shorter > 0 && !slices.ContainsFunc(spy.lessons, func(s classify.Lesson) bool {
				return len(s.Training) == shorter && holds(l.Training, s.Training)
			}) {
				t.Errorf("protocol %s: the list %s holds no list of %d", p, ids(l.Training), shorter)
			}
		}
		if want := len(spy.lessons) / 3; sizes[3] != want || sizes[6] != want || sizes[15] != want {
			t.Errorf("protocol %s: %d lessons of the sizes %v", p, len(spy.lessons), sizes)
		}
	}
}

func holds(all, some []*channels.Take) bool {
	return !slices.ContainsFunc(some, func(t *channels.Take) bool { return !slices.Contains(all, t) })
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

func subject(t *channels.Take) string { return t.Subject }
func session(t *channels.Take) string { return t.Session }

// checkApart checks that none of those of whom a take trains is tested. Takes
// that neither train nor are tested may be anyone's.
func checkApart(who func(*channels.Take) string) func(training, tested []*channels.Take) error {
	return func(training, tested []*channels.Take) error {
		trains := map[string]bool{}
		for _, t := range training {
			trains[who(t)] = true
		}
		for _, t := range tested {
			if trains[who(t)] {
				return fmt.Errorf("%s is tested with %s and trains", who(t), t.ID)
			}
		}
		return nil
	}
}

func checkPooled(k int) func(training, tested []*channels.Take) error {
	return func(training, tested []*channels.Take) error {
		if n := len(training) + len(tested); n != 48 {
			return fmt.Errorf("%d of 48 takes train or are tested", n)
		}
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
	var mu sync.Mutex
	for seed := range uint64(2) {
		fit := func(training []*channels.Take) (classify.Maker, error) {
			var ids []string
			for _, t := range training {
				ids = append(ids, t.ID)
			}
			mu.Lock()
			defer mu.Unlock()
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
		o := classify.Options{
			Protocol: p, Distances: template.Distances(), Normalise: template.ZScore, Band: 0.2, Learners: []classify.Learner{small()},
			PerTake: 3, Curve: []int{1}, TakesPerLabel: []int{1, 3}, Reject: true, Seed: 9, Workers: 1,
		}
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
	for name, o := range map[string]classify.Options{
		"pooled":  {Protocol: classify.Pooled},
		"few":     {Protocol: classify.Pooled, TakesPerLabel: []int{1, 3}, Repeats: 12},
		"subject": {Protocol: classify.Subject},
	} {
		t.Run(name, func(t *testing.T) {
			if testing.Short() && name == "few" {
				t.Skip("long: left out under -short")
			}
			o.Distances, o.PerTake = []template.Distance{template.EuclideanDependent}, 4
			wrong := 0
			for seed := range uint64(runs) {
				takes := theatre(4, 3, 5, 1)
				g := rand.New(rand.NewPCG(seed, 0))
				for i := range takes {
					j := g.IntN(i + 1)
					takes[i].Label, takes[j].Label = takes[j].Label, takes[i].Label
				}
				o.Seed = seed
				r := mustScore(t, takes, fitted(jitter{0.7}), o)
				wrong += count(!strings.HasPrefix(r.Verdict, "No difference shown"))
			}
			t.Logf("%d of %d verdicts on shuffled labels claim a difference", wrong, runs)
			if wrong > 7 {
				t.Errorf("%d of %d verdicts on shuffled labels claim a difference", wrong, runs)
			}
		})
	}
}
