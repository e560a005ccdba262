package variation

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"
)

// evidence is what the pairs of a scope tell, summed up.
type evidence struct {
	squares  []float64   // columns
	replicas [][]float64 // the same under random weightings of the takes
	pairs    int
	takes    int
	freedom  float64 // takes less labels
}

// evidence sums up the pairs of a scope.
func (e *engine) evidence(s *sheet, sc scope) evidence {
	ev := evidence{squares: e.sum(s, sc, nil), replicas: e.replicas(s, sc), pairs: s.start[sc.to] - s.start[sc.from]}
	ev.takes, ev.freedom = e.takes(sc)
	return ev
}

// replicas returns the columns of a scope under random weightings of its
// takes, weightings × columns.
func (e *engine) replicas(s *sheet, sc scope) [][]float64 {
	out := make([][]float64, e.o.Weights)
	each(len(out), e.o.Workers, func() struct{} { return struct{}{} }, func(_ struct{}, k int) {
		r := rand.New(rand.NewPCG(e.o.Seed+2, uint64(k)))
		weights := make([][]float64, len(e.labels))
		for l := range weights { // all labels draw, so that a label has the same weights in every scope
			weights[l] = make([]float64, len(e.labels[l].takes))
			for i := range weights[l] {
				weights[l][i] = r.ExpFloat64()
			}
		}
		out[k] = e.sum(s, sc, weights)
	})
	return out
}

// widest bounds the logarithm of the factor by which an interval of squares
// spreads.
const widest = 9

// spread returns how far the logarithm of a figure lies from its truth, in 95
// of 100 cases: the standard deviation of the logarithm of its replicas, not
// less than the least, times the quantile of Student's distribution.
func spread(replicas []float64, least, freedom float64) float64 {
	var logs []float64
	for _, v := range replicas {
		if v > 0 {
			logs = append(logs, math.Log(v))
		}
	}
	sd := least
	if len(logs) > 1 {
		sd = max(sd, stat.StdDev(logs, nil))
	}
	return min(student(freedom)*sd, widest)
}

// student returns the quantile of Student's distribution that a normal figure
// of so many degrees of freedom keeps within in 95 of 100 cases.
func student(freedom float64) float64 {
	return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: max(1, freedom)}.Quantile(0.975)
}

// leastSpread is the standard deviation of the logarithm of a variance
// estimated with so many degrees of freedom.
func leastSpread(freedom float64) float64 { return math.Sqrt(2 / freedom) }
