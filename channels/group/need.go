package group

import (
	"maps"
	"math"
	"slices"
)

// What counts as enough takes to tell.
const (
	significance = 0.05 // p below which units move together
	widest       = 0.40 // half width of the interval of ρ, at most
	leastFree    = 8    // takes beyond one of each block, below which no interval is believed
	freePerTake  = 2.5  // independent numbers in a take's timing residual of four waves, about, for takes that cannot say themselves
)

// Need says whether there are enough takes, and how many would be.
//
// Two things must be reachable. The permutation test has only so many ways to
// pair takes, and its p cannot be below their inverse, nor below 1/1000; it
// must be able to reach 0.05. And the interval of ρ, which narrows with the
// square root of the takes, must not reach further than 0.40 to either side, nor
// rest on fewer than 8 takes beyond the first of each label (and person).
type Need struct {
	Free      int     `json:"free"`       // takes beyond the first of each label, or label and person
	SmallestP float64 `json:"smallest_p"` // that the permutation test can reach with these takes
	HalfWidth float64 `json:"half_width"` // of the widest interval of ρ; 0 where there is none
	Takes     int     `json:"takes"`      // that would do, all labels of the estimate together; those there are when they do
}

// need works out what is needed from the sizes of blocks and the widest
// interval.
func need(blocks []int, labels int, halfWidth float64) Need {
	takes, free, logWays := 0, 0, 0.0
	for _, n := range blocks {
		takes += n
		free += n - 1
		logWays += logPairings(n)
	}
	n := Need{Free: free, SmallestP: max(math.Exp(-logWays), 1.0/(permutations+1)), HalfWidth: halfWidth, Takes: takes}
	wanted := free
	if free < leastFree || halfWidth == 0 {
		// 1.96/√(free·freePerTake) is the half width about ρ = 0.
		wanted = int(math.Ceil(math.Pow(1.96/widest, 2) / freePerTake))
	} else if halfWidth > widest {
		wanted = int(math.Ceil(float64(free) * math.Pow(halfWidth/widest, 2)))
	}
	n.Takes = max(takes, max(wanted, leastFree)+max(len(blocks), labels, 1))
	if n.SmallestP > significance {
		n.Takes = max(n.Takes, fewest(blocks))
	}
	return n
}

// logPairings returns the logarithm of the number of ways to pair n takes, of
// which the medoid keeps its own.
func logPairings(n int) float64 {
	out, _ := math.Lgamma(float64(max(n, 1)))
	return out
}

// fewest returns how many takes blocks would have, all grown alike, when there
// are ways enough to pair them.
func fewest(blocks []int) int {
	k := max(len(blocks), 1)
	for n := 2; ; n++ {
		if math.Exp(-float64(k)*logPairings(n)) <= significance {
			return n * k
		}
	}
}

// estimate puts together what was measured on label k, or on all.
func (r *readings) estimate(k int, observed []moments, tests [][]chance, spread [][]span) Estimate {
	e := Estimate{Pairs: []Pair{}}
	blocks := make(map[int]int)
	labels := make(map[int]bool)
	for _, row := range r.rows {
		if k == len(r.labels) || row.label == k {
			e.Takes++
			blocks[row.block]++
			labels[row.label] = true
		}
	}
	for label := range labels {
		e.People = e.People || r.people[label]
	}
	sizes := slices.Sorted(maps.Values(blocks))
	widestHere := 0.0
	for i := range r.units {
		for j := i + 1; j < len(r.units); j++ {
			p := r.pair(i, j, &observed[k])
			at := pairIndex(i, j, len(r.units))
			t, s := tests[k][at], spread[k][at]
			p.P, p.PTiming, p.PShape = t.p, t.timing, t.shape
			p.Low, p.High = min(s.low, p.Rho), max(s.high, p.Rho)
			widestHere = max(widestHere, (p.High-p.Low)/2)
			e.Pairs = append(e.Pairs, p)
		}
	}
	e.Need = need(sizes, len(labels), widestHere)
	e.OK = len(e.Pairs) > 0
	for i := range e.Pairs {
		p := &e.Pairs[i]
		p.OK = e.Need.SmallestP <= significance && e.Need.Free >= leastFree && p.High-p.Low <= 2*widest && min(p.Reliability[0], p.Reliability[1]) >= leastReliable
		e.OK = e.OK && p.OK
	}
	return e
}

// pair returns ρ and the correlation of shapes of two units.
func (r *readings) pair(i, j int, m *moments) Pair {
	p := Pair{A: r.units[i].name, B: r.units[j].name}
	p.Rho, p.Reliability = m.rho(i, j)
	p.Shape = m.shapes(i, j)
	return p
}
