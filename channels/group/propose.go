package group

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"strandwise/channels"
)

// OneBody is the ρ from which limbs are proposed as one: their timing is then
// as alike as it can be told, and giving each a timing of its own would only
// tear them apart. Below it limbs stay apart, and takes are made with the ρ
// that was measured.
const OneBody = 0.95

// Options says how groups are proposed. The zero value is ready for use.
type Options struct {
	Seed  uint64  // of the permutations, bootstrap samples and choice of takes
	Merge float64 // ρ from which limbs are one; 0 is [OneBody]
}

// Proposal is a proposal of groups and limbs, with its evidence.
type Proposal struct {
	Groups    []Proposed `json:"groups"`
	Limbs     []Proposed `json:"limbs"`
	Bones     []Bone     `json:"bones"`     // found, however weak
	Triads    []Triad    `json:"triads"`    // every accelerometer with every gyroscope
	Candidate *Coupling  `json:"candidate"` // measured between the limbs that names and geometry gave
	Merges    []Merge    `json:"merges"`    // of those limbs, by the ρ of the pairs that are told apart from chance
	Threshold float64    `json:"threshold"` // ρ from which merges were done
	Coupling  *Coupling  `json:"coupling"`  // between the limbs proposed
	Notes     []string   `json:"notes"`     // what a reader must know: too few takes, evidence that disagrees
	Rules     []Rule     `json:"rules"`     // for a plan
}

// Proposed is one proposed group or limb.
type Proposed struct {
	Name     string   `json:"name"`
	Limb     string   `json:"limb,omitempty"` // of a group
	Channels []string `json:"channels"`
	From     []Source `json:"from"`
	Evidence []string `json:"evidence"` // one line each
}

// Propose proposes groups of channels and the limbs they are fixed to, from
// three sources. Groups the layout states are kept; else they come from names,
// or, where no name says anything, from runs of numbered channels. Their limbs
// come from names and the skeleton, or from bones of constant length. Then
// limbs are joined by what the data say: by average linkage on ρ (see
// [Coupling]), from Merge up; a pair that is not told apart from chance at
// p ≤ 0.05 counts as ρ = 0, and one with too few takes to tell is never the
// reason for a merge. Groups are never joined: each is a trajectory in a space
// of its own.
//
// The takes must share a layout and have finite values; there must be at least
// one.
func Propose(takes []*channels.Take, o Options) (*Proposal, error) {
	if len(takes) == 0 {
		return nil, errors.New("propose groups: there are no takes")
	}
	if o.Merge == 0 {
		o.Merge = OneBody
	}
	p := &proposing{o: o, takes: takes, found: candidatesOf(takes[0])}
	p.out = &Proposal{Threshold: o.Merge, Bones: []Bone{}, Triads: []Triad{}, Merges: []Merge{}, Notes: []string{}}
	if err := p.use(p.found.groups); err != nil {
		return nil, fmt.Errorf("propose groups: %w", err)
	}
	p.geometry()
	p.data()
	p.describe()
	rules, err := Rules(p.layout.Channels, p.layout.Groups)
	if err != nil {
		return nil, fmt.Errorf("propose groups: %w", err)
	}
	p.out.Rules = rules
	return p.out, nil
}

// proposing is one proposal under way.
type proposing struct {
	o      Options
	takes  []*channels.Take // with the layout proposed so far
	layout *channels.Layout
	scales *channels.Scales
	found  candidates
	out    *Proposal
	merged map[string][]string // the limbs a limb was joined from
}

// use gives the takes these groups.
func (p *proposing) use(groups []channels.Group) error {
	l, err := p.takes[0].Layout.WithGroups(groups)
	if err != nil {
		return err
	}
	p.layout, p.scales = l, &channels.Scales{}
	list := make([]*channels.Take, len(p.takes))
	for i, t := range p.takes {
		c := *t
		c.Layout = l
		list[i] = &c
		p.scales.Add(&c)
	}
	p.takes = list
	return nil
}

// mustUse is use for the groups of before with other limbs.
func (p *proposing) mustUse(groups []channels.Group) {
	if err := p.use(groups); err != nil {
		panic("group: " + err.Error())
	}
}

// geometry finds bones and triads, and gives groups that nothing else has put
// on limbs those of the bones.
func (p *proposing) geometry() {
	if p.found.limbs == Nothing && len(p.layout.Groups) == 1 {
		p.putAllOnOne()
		return
	}
	found, top := bones(p.takes, p.layout)
	p.out.Bones = append(p.out.Bones, found...)
	p.out.Triads = append(p.out.Triads, triads(p.takes, p.layout)...)
	p.compareTriads()
	if p.found.limbs != Nothing || len(found) == 0 {
		return
	}
	p.found.limbs = Bones
	groups := slices.Clone(p.layout.Groups)
	for i, k := range top {
		if k >= 0 {
			groups[i].Limb = groups[k].Name
		}
	}
	p.rename(groups)
}

// rename numbers the limbs of nameless groups from 1 and uses the groups.
func (p *proposing) rename(groups []channels.Group) {
	number := make(map[string]string)
	for i, g := range groups {
		if number[g.Limb] == "" {
			number[g.Limb] = fmt.Sprintf("limb_%d", len(number)+1)
		}
		groups[i].Limb = number[g.Limb]
	}
	p.mustUse(groups)
}

// data measures the coupling of the limbs and joins those that are one body.
func (p *proposing) data() {
	before := MeasureCoupling(p.takes, p.scales, p.o.Seed)
	p.out.Candidate, p.out.Coupling = before, before
	limbs := before.Limbs
	if len(limbs) < 2 {
		return
	}
	if !slices.ContainsFunc(before.Pooled.Pairs, func(q Pair) bool { return q.OK }) {
		p.fallBack(&before.Pooled)
		return
	}
	similarity := func(i, j int) float64 {
		q := before.Pooled.Pairs[pairIndex(min(i, j), max(i, j), len(limbs))]
		if !q.OK || q.P > significance {
			return min(q.Rho, 0)
		}
		return q.Rho
	}
	merges, clusters := agglomerate(len(limbs), similarity, p.o.Merge)
	for _, m := range merges {
		p.out.Merges = append(p.out.Merges, Merge{names(limbs, m.members), m.similarity, m.similarity >= p.o.Merge})
	}
	if len(clusters) < len(limbs) {
		p.join(limbs, clusters)
		p.out.Coupling = MeasureCoupling(p.takes, p.scales, p.o.Seed)
	} else if p.found.limbs == Nothing {
		p.join(limbs, clusters) // they have no names yet
		p.out.Coupling = renamed(before, p.layout.Limbs())
	}
}

func names(of []string, at []int) []string {
	out := make([]string, len(at))
	for i, k := range at {
		out[i] = of[k]
	}
	return out
}

// join gives the groups of each cluster of limbs one limb.
func (p *proposing) join(limbs []string, clusters []cluster) {
	name := make(map[string]string)
	p.merged = make(map[string][]string)
	for _, c := range clusters {
		members := names(limbs, c)
		for _, m := range members {
			name[m] = strings.Join(members, "+")
		}
		p.merged[strings.Join(members, "+")] = members
	}
	groups := slices.Clone(p.layout.Groups)
	for i := range groups {
		groups[i].Limb = name[groups[i].Limb]
	}
	if p.found.of != Numbers {
		p.mustUse(groups)
		return
	}
	old := groups
	p.rename(slices.Clone(groups))
	for i, g := range p.layout.Groups {
		p.merged[g.Limb] = p.merged[old[i].Limb]
	}
}

// renamed is a coupling with other names for its limbs, in the same order.
func renamed(c *Coupling, limbs []string) *Coupling {
	out := &Coupling{Limbs: limbs, Pooled: c.Pooled, Labels: slices.Clone(c.Labels)}
	rename := func(e *Estimate) {
		e.Pairs = slices.Clone(e.Pairs)
		for i := range limbs {
			for j := i + 1; j < len(limbs); j++ {
				q := &e.Pairs[pairIndex(i, j, len(limbs))]
				q.A, q.B = limbs[i], limbs[j]
			}
		}
	}
	rename(&out.Pooled)
	for i := range out.Labels {
		rename(&out.Labels[i])
	}
	return out
}

// fallBack leaves the limbs to names and geometry, where the takes are too few
// to tell. Groups of which nothing says that they are apart share one limb.
func (p *proposing) fallBack(e *Estimate) {
	if p.found.limbs != Nothing {
		p.note("%s; the limbs are those that %s say", e.tooFew(), p.found.limbs.says())
		return
	}
	p.note("%s; nothing else says which channels are apart, so all share one timing: name the columns, or state groups in the plan", e.tooFew())
	p.putAllOnOne()
	p.out.Coupling = MeasureCoupling(p.takes, p.scales, p.o.Seed)
}

// putAllOnOne gives all groups one limb.
func (p *proposing) putAllOnOne() {
	groups := slices.Clone(p.layout.Groups)
	for i := range groups {
		groups[i].Limb = "all"
	}
	p.mustUse(groups)
}

func (p *proposing) note(format string, a ...any) {
	p.out.Notes = append(p.out.Notes, fmt.Sprintf(format, a...))
}

// says is the source as the subject of a sentence, in the plural.
func (s Source) says() string {
	switch s {
	case Stated:
		return "the stated groups"
	case Skeleton:
		return "names and the skeleton"
	case Bones:
		return "the bones"
	}
	return "names"
}

// tooFew says why the takes do not tell, and how many would.
func (e *Estimate) tooFew() string {
	why := fmt.Sprintf("the interval of ρ reaches %.2f to either side, and %.2f is wanted", e.Need.HalfWidth, widest)
	if e.Need.SmallestP > significance {
		why = fmt.Sprintf("they can be paired in so few ways that p cannot be below %.2g", e.Need.SmallestP)
	} else if e.Need.HalfWidth <= widest {
		why = "a limb's own channels hardly agree on its timing"
		if e.Need.Free < leastFree {
			why = fmt.Sprintf("only %d are more than the first of their label (and person), and %d are wanted", e.Need.Free, leastFree)
		}
	}
	text := fmt.Sprintf("%d takes are too few to tell how limbs share their timing: %s", e.Takes, why)
	if e.Need.Takes > e.Takes {
		text += fmt.Sprintf("; about %d would do", e.Need.Takes)
	}
	return text
}
