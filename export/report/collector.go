package report

import (
	"cmp"
	"maps"
	"slices"
	"sync"

	"strandwise/channels"
)

// How many takes of a label a [Collector] keeps to be drawn.
const (
	MostRecorded  = 6
	MostSynthetic = 8
)

// How many takes of a label a [Collector] keeps a sketch of, to tell how far
// takes are from the medoid.
const (
	mostRecordedSketches  = 24
	mostSyntheticSketches = 48
)

// Collector counts the takes of a set and keeps some of each label to look at.
// Which takes it keeps depends on their ids alone, so that neither the order in
// which takes come nor how they are divided among collectors changes anything.
// It reads takes as the set holds them, with times from the first frame and
// 32-bit numbers: fed with a finished set it keeps what it kept when the set was
// made.
//
// It holds, for each label, at most [MostRecorded] and [MostSynthetic] takes of
// [MostFrames] frames and sketches of 24 and 48 takes: about 60 kB per channel
// and label. Takes of the test split are counted and not kept, since synthetic
// takes are not made from them. It is safe for use by several goroutines.
type Collector struct {
	mu     sync.Mutex
	counts map[countKey]*Count
	labels map[string]*kept
}

type countKey struct {
	label, subject string
	split          channels.Split
}

// kept is what is kept of one label.
type kept struct{ recorded, synthetic reservoir }

// NewCollector returns a collector that has seen no takes.
func NewCollector() *Collector {
	return &Collector{counts: map[countKey]*Count{}, labels: map[string]*kept{}}
}

// Add counts a take and keeps what it needs of it. The take is not changed, and
// may be changed afterwards. It has at least one frame.
func (c *Collector) Add(t *channels.Take) {
	c.mu.Lock()
	defer c.mu.Unlock()
	c.count(t)
	if t.Split == channels.Test {
		return
	}
	k := c.label(t.Label)
	if t.Origin() == channels.Synthetic {
		k.synthetic.add(t)
	} else {
		k.recorded.add(t)
	}
}

func (c *Collector) label(name string) *kept {
	k := c.labels[name]
	if k == nil {
		k = &kept{
			recorded:  reservoir{drawn: MostRecorded, most: mostRecordedSketches},
			synthetic: reservoir{drawn: MostSynthetic, most: mostSyntheticSketches},
		}
		c.labels[name] = k
	}
	return k
}

func (c *Collector) count(t *channels.Take) {
	n := c.counted(countKey{t.Label, t.Subject, t.Split})
	if t.Origin() == channels.Synthetic {
		n.Synthetic++
	} else {
		n.Recorded++
	}
}

func (c *Collector) counted(key countKey) *Count {
	if c.counts[key] == nil {
		c.counts[key] = &Count{Label: key.label, Subject: key.subject, Split: key.split}
	}
	return c.counts[key]
}

// Merge adds what another collector has seen of other takes. The other must not
// be used any more.
func (c *Collector) Merge(o *Collector) {
	c.mu.Lock()
	defer c.mu.Unlock()
	for key, n := range o.counts {
		sum := c.counted(key)
		sum.Recorded += n.Recorded
		sum.Synthetic += n.Synthetic
	}
	for name, k := range o.labels {
		into := c.label(name)
		into.recorded.merge(&k.recorded)
		into.synthetic.merge(&k.synthetic)
	}
}

// Counts returns the numbers of takes in order of label, subject and split.
func (c *Collector) Counts() []Count {
	c.mu.Lock()
	defer c.mu.Unlock()
	out := make([]Count, 0, len(c.counts))
	for _, n := range c.counts {
		out = append(out, *n)
	}
	slices.SortFunc(out, func(a, b Count) int {
		return cmp.Or(cmp.Compare(a.Label, b.Label), cmp.Compare(a.Subject, b.Subject), cmp.Compare(a.Split, b.Split))
	})
	return out
}

// Labels returns the takes kept of each label that has takes that train, in
// order of the labels' names, with the distances to the medoids. Scales are the
// sizes of the channel groups; nil takes those of the recorded takes kept.
func (c *Collector) Labels(scales *channels.Scales) []Label {
	c.mu.Lock()
	defer c.mu.Unlock()
	names := slices.Sorted(maps.Keys(c.labels))
	if scales == nil {
		scales = &channels.Scales{}
		for _, name := range names {
			for _, t := range c.labels[name].recorded.sketches() {
				scales.Add(t)
			}
		}
	}
	var out []Label
	for _, name := range names {
		k := c.labels[name]
		l := Label{Name: name, Recorded: k.recorded.takes(), Synthetic: k.synthetic.takes(), DistanceUnit: "× rms size"}
		l.RecordedDistances, l.SyntheticDistances = toMedoid(scaled(k.recorded.sketches(), scales), scaled(k.synthetic.sketches(), scales))
		l.Wasserstein = Wasserstein(l.RecordedDistances, l.SyntheticDistances)
		out = append(out, l)
	}
	return out
}
