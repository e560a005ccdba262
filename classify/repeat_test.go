package classify_test

import (
	"hash/fnv"
	"math"
	"sync"
	"testing"

	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/statistic"
)

// dice is a learner that throws dice, a little better with synthetic takes, and
// keeps count of what it answered.
type dice struct {
	mu     sync.Mutex
	splits []map[*channels.Take][2]bool // per split, wrong with recorded takes and with all
}

func (*dice) Name() string { return "dice" }

func (d *dice) Begin(l classify.Lesson) (classify.Study, error) { return thrown{d, l}, nil }

type thrown struct {
	*dice
	lesson classify.Lesson
}

func (t thrown) Worker() classify.Worker               { return t }
func (t thrown) Learn(int, [][]classify.Example) error { return nil }
func (t thrown) Work(int) classify.Work                { return classify.Work{} }

func (t thrown) Recognise() ([][]classify.Answer, error) {
	answers, wrong := make([][]classify.Answer, 2), map[*channels.Take][2]bool{}
	for _, x := range t.lesson.Test {
		h := fnv.New64a()
		h.Write([]byte(ids(t.lesson.Training) + x.ID))
		throw := h.Sum64()
		w := [2]bool{throw%100 < 50, throw/100%100 < 38}
		wrong[x] = w
		for set, w := range w {
			label := x.Label
			if w {
				label = map[string]string{"cue0": "cue1", "cue1": "cue2", "cue2": "cue0"}[label]
			}
			answers[set] = append(answers[set], classify.Answer{Label: label})
		}
	}
	t.mu.Lock()
	defer t.mu.Unlock()
	t.splits = append(t.splits, wrong)
	return answers, nil
}

// TestRepeatedSplits counts the differences by take or person and by split
// again, and tests both.
func TestRepeatedSplits(t *testing.T) {
	for name, c := range map[string]struct {
		subjects  int
		o         classify.Options
		unit      func(*channels.Take) string
		resampled string
	}{
		"takes":           {5, classify.Options{Protocol: classify.Pooled, Repeats: 7}, func(x *channels.Take) string { return x.ID }, "splits and takes"},
		"people":          {6, classify.Options{Protocol: classify.Pooled, Repeats: 7}, subject, "splits and subjects"},
		"few splits":      {5, classify.Options{Protocol: classify.Pooled, Repeats: 5}, func(x *channels.Take) string { return x.ID }, "splits and takes"},
		"a person a time": {8, classify.Options{Protocol: classify.Subject, TakesPerLabel: []int{2}, Repeats: 3}, subject, "subjects"},
		"some people":     {8, classify.Options{Protocol: classify.Subject, TestShare: 0.3, Repeats: 9}, subject, "splits and subjects"},
	} {
		t.Run(name, func(t *testing.T) {
			d := &dice{}
			c.o.PerTake, c.o.Learners = 1, []classify.Learner{d}
			r := mustScore(t, theatre(3, c.subjects, 4, 1), fitted(jitter{1}), c.o)
			units, takes, splits := map[string]int{}, map[*channels.Take]int{}, []int{}
			tested, before, after := 0, 0, 0
			for _, s := range d.splits {
				saved := 0
				for x, wrong := range s {
					gain := count(wrong[0]) - count(wrong[1])
					units[c.unit(x)] += gain
					takes[x] += gain
					saved += gain
					tested, before, after = tested+1, before+count(wrong[0]), after+count(wrong[1])
				}
				splits = append(splits, saved)
			}
			p := statistic.SignFlip(values(units))
			if len(splits) >= 6 && c.resampled != "subjects" {
				p = max(p, statistic.SignFlip(splits))
			}
			helped, hurt := 0, 0
			for _, gain := range takes {
				helped += count(gain > 0)
				hurt += count(gain < 0)
			}
			x := r.Results[1]
			if x.Tested != tested || r.Results[0].Errors != before || x.Errors != after || *x.Helped != helped || *x.Hurt != hurt {
				t.Errorf("result %+v, want %d errors in %d tests to become %d, helped %d, hurt %d", x, before, tested, after, helped, hurt)
			}
			if math.Abs(*x.P-p) > 1e-3*p || r.Resampled != c.resampled {
				t.Errorf("p %g resampling %s, want %g resampling %s", *x.P, r.Resampled, p, c.resampled)
			}
			if !(*x.ReductionLow < *x.Reduction && *x.Reduction < *x.ReductionHigh && x.Low < x.Error && x.Error < x.High) {
				t.Errorf("error %g in %g to %g, reduction %g in %g to %g", x.Error, x.Low, x.High, *x.Reduction, *x.ReductionLow, *x.ReductionHigh)
			}
		})
	}
}

func values(m map[string]int) []int {
	var out []int
	for _, v := range m {
		out = append(out, v)
	}
	return out
}

// TestIntervalsHoldTheTruth checks the bootstrap intervals where the truth is
// known: the dice err in 50 % and 38 % of all throws.
func TestIntervalsHoldTheTruth(t *testing.T) {
	const runs = 60
	missed, missedReduction := 0, 0
	for seed := range uint64(runs) {
		r := mustScore(t, theatre(3, 3, 6, 1), fitted(jitter{1}), classify.Options{
			Protocol: classify.Pooled, Repeats: 8, Seed: seed, PerTake: 1, Learners: []classify.Learner{&dice{}},
		})
		x := r.Results[1]
		missed += count(x.Low > 0.38 || x.High < 0.38)
		missedReduction += count(*x.ReductionLow > 0.24 || *x.ReductionHigh < 0.24)
	}
	// Of 60 intervals of 95 % seven or more miss once in forty times; the
	// pigeonhole bootstrap errs on the wide side.
	if missed > 6 || missedReduction > 6 {
		t.Errorf("of %d intervals %d miss the error and %d the reduction", runs, missed, missedReduction)
	}
}
