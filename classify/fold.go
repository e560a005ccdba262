package classify

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"

	"strandwise/channels"
)

// fold is one split: places among the recordings of the takes that train and
// of those that are tested, both ascending. No take is in both.
type fold struct {
	training, test []int
	k              int // which of the options' takes per label it has
	split          int // the same for the folds of one draw that differ in k alone
	repeat         int
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

// defaultRepeats is the number of splits drawn at random when none is asked
// for.
const defaultRepeats = 10

// leaveOut returns the folds in which the takes of one subject, or of whatever
// the property says, are tested, or those of a share of them drawn at random.
func (o Options) leaveOut(takes []*channels.Take, name string, property func(*channels.Take) string) ([]fold, error) {
	for _, t := range takes {
		if property(t) == "" {
			return nil, fmt.Errorf("protocol %s: take %s%s names no %s; name one for every take, or use protocol given or pooled", name, t.ID, from(t), name)
		}
	}
	all := distinct(takes, property)
	if len(all) < 2 {
		return nil, fmt.Errorf("protocol %s: every take is of one %s, %s; leaving one out needs two or more; use protocol given or pooled", name, name, all[0])
	}
	if o.Repeats > 0 && o.TestShare == 0 && len(o.TakesPerLabel) == 0 {
		return nil, fmt.Errorf("protocol %s draws nothing at random: repeats go with a share to test, with training takes per label, or with protocol pooled", name)
	}
	var folds []fold
	for r := range o.repeats() {
		for _, out := range o.left(all, r) {
			f := divide(takes, func(t *channels.Take) bool { return slices.Contains(out, property(t)) })
			f.repeat = r
			folds = o.thin(folds, f, takes)
		}
	}
	return folds, nil
}

// repeats returns how often everything is drawn.
func (o Options) repeats() int {
	if o.Protocol == Pooled || o.TestShare > 0 {
		return cmp.Or(o.Repeats, defaultRepeats)
	}
	return cmp.Or(o.Repeats, 1)
}

// left returns whom to leave out of repeat r, split by split.
func (o Options) left(all []string, r int) [][]string {
	if o.TestShare == 0 {
		return slices.Collect(slices.Chunk(all, 1))
	}
	g := rand.New(rand.NewPCG(o.Seed, uint64(r)))
	n := min(max(1, int(math.Round(o.TestShare*float64(len(all))))), len(all)-1)
	var out []string
	for _, i := range g.Perm(len(all))[:n] {
		out = append(out, all[i])
	}
	return [][]string{out}
}

// thinning keeps the draws of training takes apart from those of splits.
const thinning = 1 << 32

// thin appends the fold, once for each number of takes per label, with as many
// training takes of each label drawn at random, or all where there are fewer.
// The smaller draws are parts of the larger ones.
func (o Options) thin(folds []fold, f fold, takes []*channels.Take) []fold {
	if len(folds) > 0 {
		f.split = folds[len(folds)-1].split + 1
	}
	if len(o.TakesPerLabel) == 0 {
		return append(folds, f)
	}
	g := rand.New(rand.NewPCG(o.Seed, thinning+uint64(f.split)))
	pools := shuffled(byLabel(takes, f.training), g)
	for i, k := range o.TakesPerLabel {
		thinned := f
		thinned.k, thinned.training = i, nil
		for _, pool := range pools {
			thinned.training = append(thinned.training, pool[:min(share(k, pool), len(pool))]...)
		}
		slices.Sort(thinned.training)
		folds = append(folds, thinned)
	}
	return folds
}

// share returns k, or for 0 half of what the pool has, at least one.
func share(k int, pool []int) int { return cmp.Or(k, max(1, len(pool)/2)) }

// shuffled returns the pools with each in random order.
func shuffled(pools [][]int, g *rand.Rand) [][]int {
	for i, pool := range pools {
		drawn := make([]int, len(pool))
		for j, p := range g.Perm(len(pool)) {
			drawn[j] = pool[p]
		}
		pools[i] = drawn
	}
	return pools
}

// pooled draws the folds of protocol pooled. Repeat r draws from a generator
// keyed by the seed and r alone; its training takes for a smaller number per
// label are among those for a larger one.
func (o Options) pooled(takes []*channels.Take) ([]fold, error) {
	list := o.TakesPerLabel
	if len(list) == 0 {
		list = []int{0}
	}
	if err := checkPools(takes, slices.Max(list)); err != nil {
		return nil, err
	}
	var folds []fold
	for r := range o.repeats() {
		pools := shuffled(byLabel(takes, nil), rand.New(rand.NewPCG(o.Seed, uint64(r))))
		for i, k := range list {
			f := fold{k: i, split: r, repeat: r}
			for _, pool := range pools {
				n := share(k, pool)
				f.training = append(f.training, pool[:n]...)
				f.test = append(f.test, pool[n:]...)
			}
			slices.Sort(f.training)
			slices.Sort(f.test)
			folds = append(folds, f)
		}
	}
	return folds, nil
}

// checkPools reports labels that have too few takes to train k and test one.
func checkPools(takes []*channels.Take, k int) error {
	most := 0
	var short []string
	for _, pool := range byLabel(takes, nil) {
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
// label's name: all takes, or those at the given places.
func byLabel(takes []*channels.Take, places []int) [][]int {
	pools := make(map[string][]int)
	if places == nil {
		for i := range takes {
			places = append(places, i)
		}
	}
	for _, i := range places {
		pools[takes[i].Label] = append(pools[takes[i].Label], i)
	}
	out := make([][]int, 0, len(pools))
	for _, l := range distinct(takes, labelOf) {
		if len(pools[l]) > 0 {
			out = append(out, pools[l])
		}
	}
	return out
}
