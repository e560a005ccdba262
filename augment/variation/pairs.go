package variation

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"
	"sync"
	"sync/atomic"
)

// pair is an ordered pair of takes of one label.
type pair struct{ label, a, b int }

// sheet holds the rows of measured pairs, those of one label together.
type sheet struct {
	width int
	pairs []pair
	rows  []float64 // pairs × width
	start []int     // per label: its first pair; and the number of pairs at the end
}

func newSheet(width int, pairs []pair, labels int) *sheet {
	s := &sheet{width: width, pairs: pairs, rows: make([]float64, len(pairs)*width), start: make([]int, labels+1)}
	for _, p := range pairs {
		s.start[p.label+1]++
	}
	for l := range labels {
		s.start[l+1] += s.start[l]
	}
	return s
}

func (s *sheet) row(i int) []float64 { return s.rows[i*s.width:][:s.width] }

// choose lists the pairs to be measured: all of a label, or as many as the
// options allow, drawn at random.
func choose(labels []label, o Options) []pair {
	several := 0
	for _, l := range labels {
		if len(l.takes) > 1 {
			several++
		}
	}
	var out []pair
	for k, l := range labels {
		n := len(l.takes)
		all := n * (n - 1)
		most := min(all, o.Pairs, max(2, o.Total/max(1, several)))
		at := subset(all, most, rand.New(rand.NewPCG(o.Seed, uint64(k))))
		for _, i := range at {
			a, b := i/(n-1), i%(n-1)
			if b >= a {
				b++
			}
			out = append(out, pair{k, a, b})
		}
	}
	return out
}

// subset draws k of the numbers below n, in ascending order (Floyd's
// algorithm: Bentley and Floyd, Communications of the ACM 30 (1987) 754).
func subset(n, k int, r *rand.Rand) []int {
	held := make(map[int]bool, k)
	for j := n - k; j < n; j++ {
		t := r.IntN(j + 1)
		if held[t] {
			t = j
		}
		held[t] = true
	}
	out := make([]int, 0, k)
	for i := range held {
		out = append(out, i)
	}
	slices.SortFunc(out, cmp.Compare[int])
	return out
}

// each calls work for every number below n on several goroutines, each with a
// worker of its own.
func each[W any](n, workers int, newWorker func() W, work func(w W, i int)) {
	var next atomic.Int64
	var wait sync.WaitGroup
	for range min(n, workers) {
		wait.Go(func() {
			w := newWorker()
			for i := int(next.Add(1)) - 1; i < n; i = int(next.Add(1)) - 1 {
				work(w, i)
			}
		})
	}
	wait.Wait()
}

// summary returns each column of the rows from to to summed up under the
// weights, one for each of those rows: the weighted mean of squares, or the
// square of the median angle. Of a column without a number it is NaN.
func (s *sheet) summary(dst []float64, list []column, from, to int, weights []float64) []float64 {
	for c, col := range list {
		if col.median {
			dst[c] = s.weightedMedian(c, from, to, weights)
		} else {
			dst[c] = s.weightedMean(c, from, to, weights)
		}
	}
	return dst
}

func (s *sheet) weightedMean(c, from, to int, weights []float64) float64 {
	total, weight := 0.0, 0.0
	for i := from; i < to; i++ {
		if v := s.rows[i*s.width+c]; !math.IsNaN(v) {
			total += weights[i-from] * v
			weight += weights[i-from]
		}
	}
	return total / weight
}

func (s *sheet) weightedMedian(c, from, to int, weights []float64) float64 {
	var list []weighted
	for i := from; i < to; i++ {
		if v := s.rows[i*s.width+c]; !math.IsNaN(v) {
			list = append(list, weighted{v, weights[i-from]})
		}
	}
	return weightedMedian(list)
}

// weighted is a value that counts by a weight.
type weighted struct{ value, weight float64 }

// weightedMedian returns the value with half the weight on either side, NaN of
// none. It sorts the list.
func weightedMedian(list []weighted) float64 {
	half := 0.0
	for _, o := range list {
		half += o.weight / 2
	}
	slices.SortFunc(list, func(a, b weighted) int { return cmp.Compare(a.value, b.value) })
	for i, o := range list {
		half -= o.weight
		switch {
		case half < 0 || i == len(list)-1:
			return o.value
		case half == 0:
			return (o.value + list[i+1].value) / 2
		}
	}
	return math.NaN()
}
