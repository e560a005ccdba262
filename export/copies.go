package export

import (
	"cmp"
	"maps"
	"math"
	"slices"
	"strings"

	"github.com/parquet-go/parquet-go"

	"strandwise/channels"
)

// NearCopy is the difference up to which two takes count as nearly the same:
// read at 32 points spread evenly over their frames they differ, in every
// channel group, by no more than this part of the group's movement, both as
// root mean squares, the movement about the mean of each channel. On six open
// sets of recordings the nearest two different performances across the split
// differ by 0.16, and performances recorded twice by 0.
const NearCopy = 0.05

// Copy is a take for testing that is nearly the same as one that trains, so that
// a score on it flatters.
type Copy struct {
	Test       string          `json:"test"`       // id of the take for testing
	Train      string          `json:"train"`      // id of the nearest one that trains
	Origin     channels.Origin `json:"origin"`     // of the latter
	Difference float64         `json:"difference"` // as a part of the movement; see [NearCopy]
}

// copiesBytes bounds the paths of takes for testing that are held at a time.
// The takes that train are gone over once for each so many.
const copiesBytes = 64 << 20

// findCopies reports near-copies across the split: for each take for testing the
// nearest recorded take that trains, and the nearest synthetic one.
func (c *content) findCopies(v *Verification) error {
	columns, groups := layoutColumns(c.manifest.Layout)
	most := max(1, copiesBytes/(4*pathPoints*max(len(columns), 1)))
	for from := 0; ; from += most {
		index := &copyIndex{groups: groups}
		seen := 0
		err := c.eachTake(channels.Test, columns, func(p takePath) {
			if seen++; seen > from && len(index.takes) < most {
				index.add(p)
			}
		})
		if err != nil || len(index.takes) == 0 {
			return err
		}
		index.sort()
		if err := c.eachTake(channels.Train, columns, index.look); err != nil {
			return err
		}
		index.report(v)
	}
}

// eachTake goes over the rows of the table takes of one split.
func (c *content) eachTake(split channels.Split, columns []string, do func(takePath)) error {
	for _, f := range c.manifest.Files {
		if key, err := placeOf(f.Path); err != nil || key != (tableKey{Takes, split}) {
			continue
		}
		err := c.open(f, func(p *parquet.File) error {
			for _, g := range p.RowGroups() {
				if err := eachPath(g, columns, do); err != nil {
					return err
				}
			}
			return nil
		})
		if err != nil {
			return err
		}
	}
	return nil
}

// layoutColumns returns the columns of the channels, and the places in them of
// each group's; a channel of no group is one by itself.
func layoutColumns(l Layout) (columns []string, groups [][]int) {
	at := map[string]int{}
	for i, c := range l.Channels {
		columns = append(columns, c.Column)
		at[c.Name] = i
	}
	alone := maps.Clone(at)
	for _, g := range l.Groups {
		var group []int
		for _, name := range g.Channels {
			if i, ok := at[name]; ok {
				group = append(group, i)
				delete(alone, name)
			}
		}
		groups = append(groups, group)
	}
	for _, i := range slices.Sorted(maps.Values(alone)) {
		groups = append(groups, []int{i})
	}
	return columns, groups
}

// copyIndex holds takes for testing so that near-copies of them are found
// without comparing with each: takes that differ little differ little in a few
// sums of their values, too, by one of which they are sorted.
type copyIndex struct {
	groups  [][]int
	takes   []indexed
	farther float64 // the largest bound of any
}

// keys is the number of sums.
const keys = 4

type indexed struct {
	id       string
	values   []float32
	movement []float64     // of each group: sum of squares about the means of its channels
	keys     [keys]float64 // sums of the values with signs, scaled to a length of 1
	bound    float64       // by which a key of a near-copy may differ
	nearest  map[channels.Origin]Copy
}

func (x *copyIndex) add(p takePath) {
	t := indexed{id: p.id, values: slices.Clone(p.values), keys: signedSums(p.values), nearest: map[channels.Origin]Copy{}}
	all := 0.0
	for _, group := range x.groups {
		m := 0.0
		for _, c := range group {
			m += movement(p.values[c*pathPoints : (c+1)*pathPoints])
		}
		t.movement = append(t.movement, m)
		all += m
	}
	// By the inequality of Cauchy and Schwarz a sum of length 1 differs by no
	// more than the takes do; a little more is allowed for rounding.
	t.bound = NearCopy*math.Sqrt(all)*(1+1e-6) + 1e-9*math.Abs(t.keys[0])
	x.farther = max(x.farther, t.bound)
	x.takes = append(x.takes, t)
}

// movement returns the sum of squares of values about their mean.
func movement(values []float32) float64 {
	mean := 0.0
	for _, v := range values {
		mean += float64(v) / float64(len(values))
	}
	sum := 0.0
	for _, v := range values {
		sum += (float64(v) - mean) * (float64(v) - mean)
	}
	return sum
}

// signedSums returns sums of the values with signs that look drawn, but are
// always the same: the bits of a product with an odd number.
func signedSums(values []float32) (out [keys]float64) {
	for i, v := range values {
		bits := uint64(i+1) * 0x9e3779b97f4a7c15 >> 32 // 2^64 over the golden ratio
		for k := range out {
			if bits>>(7*k)&1 == 0 {
				out[k] += float64(v)
			} else {
				out[k] -= float64(v)
			}
		}
	}
	for k := range out {
		out[k] /= math.Sqrt(float64(len(values)))
	}
	return out
}

func (x *copyIndex) sort() {
	slices.SortStableFunc(x.takes, func(a, b indexed) int { return cmp.Compare(a.keys[0], b.keys[0]) })
}

// look compares a take that trains with those it might be a near-copy of.
func (x *copyIndex) look(p takePath) {
	at := signedSums(p.values)
	first, _ := slices.BinarySearchFunc(x.takes, at[0]-x.farther, func(t indexed, key float64) int { return cmp.Compare(t.keys[0], key) })
	for i := first; i < len(x.takes) && x.takes[i].keys[0] <= at[0]+x.farther; i++ {
		t := &x.takes[i]
		if !t.maybe(at) {
			continue
		}
		origin, limit := channels.Origin(p.origin), NearCopy
		known, found := t.nearest[origin]
		if found {
			limit = known.Difference
		}
		if d := t.difference(p.values, x.groups, limit); d < limit || d == limit && !found {
			t.nearest[origin] = Copy{Test: t.id, Train: strings.Clone(p.id), Origin: origin, Difference: d}
		}
	}
}

// maybe reports whether a take of these keys can be a near-copy.
func (t *indexed) maybe(at [keys]float64) bool {
	for k := range at {
		if math.Abs(at[k]-t.keys[k]) > t.bound {
			return false
		}
	}
	return true
}

// difference returns the largest difference of a group as a part of its
// movement, or infinity once it is above a limit.
func (t *indexed) difference(values []float32, groups [][]int, limit float64) float64 {
	largest := 0.0
	for g, group := range groups {
		sum := 0.0
		for _, c := range group {
			for i := c * pathPoints; i < (c+1)*pathPoints; i++ {
				d := float64(values[i]) - float64(t.values[i])
				sum += d * d
			}
			if sum > limit*limit*t.movement[g] {
				return math.Inf(1)
			}
		}
		if sum > 0 {
			largest = max(largest, math.Sqrt(sum/t.movement[g]))
		}
	}
	return largest
}

// report adds the copies found, in the order of the ids.
func (x *copyIndex) report(v *Verification) {
	slices.SortStableFunc(x.takes, func(a, b indexed) int { return cmp.Compare(a.id, b.id) })
	for _, t := range x.takes {
		for _, origin := range []channels.Origin{channels.Recorded, channels.Synthetic} {
			if found, ok := t.nearest[origin]; ok {
				v.Copies = append(v.Copies, found)
			}
		}
	}
}
