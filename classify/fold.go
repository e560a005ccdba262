package classify

import (
	"cmp"
	"errors"
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"

	"strandwise/channels"
)

// fold is one split: places among the recordings of the takes that train and
// of those that are tested, both ascending. No take is in both.
type fold struct {
	training, test []int
}

// protocol returns the protocol to use for the takes.
func (o Options) protocol(takes []*channels.Take) Protocol {
	if o.Protocol != Auto {
		return o.Protocol
	}
	if slices.ContainsFunc(takes, func(t *channels.Take) bool { return t.Split == channels.Test }) {
		return Given
	}
	all := !slices.ContainsFunc(takes, func(t *channels.Take) bool { return t.Subject == "" })
	if all && len(distinct(takes, subjectOf)) >= 3 {
		return Subject
	}
	return Pooled
}

// folds returns the splits of the protocol, which is not Auto.
func (o Options) folds(takes []*channels.Take) ([]fold, error) {
	if o.Protocol == Pooled {
		return pooledFolds(takes, o)
	}
	if o.TakesPerLabel > 0 || o.Repeats > 0 {
		return nil, fmt.Errorf("protocol %s draws nothing at random: training takes per label and repeats go with protocol pooled only", o.Protocol)
	}
	if o.Protocol == Given {
		return givenFold(takes)
	}
	return subjectFolds(takes)
}

func givenFold(takes []*channels.Take) ([]fold, error) {
	f := divide(takes, func(t *channels.Take) bool { return t.Split == channels.Test })
	if len(f.test) == 0 {
		return nil, errors.New("protocol given: no take is of the test split; mark takes with split test, or use protocol subject or pooled")
	}
	if len(f.training) == 0 {
		return nil, errors.New("protocol given: every take is of the test split; mark takes with split train, or use protocol subject or pooled")
	}
	return []fold{f}, nil
}

func subjectFolds(takes []*channels.Take) ([]fold, error) {
	for _, t := range takes {
		if t.Subject == "" {
			return nil, fmt.Errorf("protocol subject: take %s%s names no subject; name one for every take, or use protocol given or pooled", t.ID, from(t))
		}
	}
	subjects := distinct(takes, subjectOf)
	if len(subjects) < 2 {
		return nil, fmt.Errorf("protocol subject: every take is by %s; leaving a subject out needs two or more; use protocol given or pooled", subjects[0])
	}
	folds := make([]fold, len(subjects))
	for i, s := range subjects {
		folds[i] = divide(takes, func(t *channels.Take) bool { return t.Subject == s })
	}
	return folds, nil
}

// from says where a take comes from, for messages.
func from(t *channels.Take) string {
	if t.Where == "" {
		return ""
	}
	return " (" + t.Where + ")"
}

// divide returns the fold in which the takes that tested says yes to are
// tested.
func divide(takes []*channels.Take, tested func(*channels.Take) bool) fold {
	var f fold
	for i, t := range takes {
		if tested(t) {
			f.test = append(f.test, i)
		} else {
			f.training = append(f.training, i)
		}
	}
	return f
}

// defaultRepeats is the number of splits the pooled protocol draws when none
// is asked for.
const defaultRepeats = 10

// pooledFolds draws the folds. Repeat r draws from a generator keyed by the
// seed and r alone.
func pooledFolds(takes []*channels.Take, o Options) ([]fold, error) {
	pools := byLabel(takes)
	if err := checkPools(takes, pools, o.TakesPerLabel); err != nil {
		return nil, err
	}
	folds := make([]fold, cmp.Or(o.Repeats, defaultRepeats))
	for r := range folds {
		g := rand.New(rand.NewPCG(o.Seed, uint64(r)))
		for _, pool := range pools {
			k := o.TakesPerLabel
			if k == 0 {
				k = max(1, len(pool)/2)
			}
			for i, p := range g.Perm(len(pool)) {
				if i < k {
					folds[r].training = append(folds[r].training, pool[p])
				} else {
					folds[r].test = append(folds[r].test, pool[p])
				}
			}
		}
		slices.Sort(folds[r].training)
		slices.Sort(folds[r].test)
	}
	return folds, nil
}

// checkPools reports labels that have too few takes to train k and test one.
func checkPools(takes []*channels.Take, pools [][]int, k int) error {
	most := 0
	var short []string
	for _, pool := range pools {
		most = max(most, len(pool))
		if len(pool) <= k {
			short = append(short, fmt.Sprintf("%s (%d)", takes[pool[0]].Label, len(pool)))
		}
	}
	if most < 2 {
		return errors.New("protocol pooled: every label has one take, which leaves none to test; record at least two takes of a label")
	}
	if len(short) > 0 {
		return fmt.Errorf("protocol pooled: %d training takes per label leave none to test of %s; legal is anything below the number of takes of every label", k, strings.Join(short, ", "))
	}
	return nil
}

// byLabel returns the places of the takes of each label, in order of the
// label's name.
func byLabel(takes []*channels.Take) [][]int {
	places := make(map[string][]int)
	for i, t := range takes {
		places[t.Label] = append(places[t.Label], i)
	}
	out := make([][]int, 0, len(places))
	for _, l := range distinct(takes, labelOf) {
		out = append(out, places[l])
	}
	return out
}

func labelOf(t *channels.Take) string   { return t.Label }
func subjectOf(t *channels.Take) string { return t.Subject }

// distinct returns the different values of a property, sorted.
func distinct(takes []*channels.Take, property func(*channels.Take) string) []string {
	values := make([]string, len(takes))
	for i, t := range takes {
		values[i] = property(t)
	}
	slices.Sort(values)
	return slices.Compact(values)
}
