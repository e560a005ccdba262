// Package choice puts the takes made from one source take into an order of
// which every beginning is a good choice: the first eight of sixty-four are to
// show what all of them do.
//
// [Takes] orders takes by how they look to recognisers of two kinds, those that
// compare values and those that compare directions; [Order] orders any points
// by how well each beginning covers the rest, and [Farthest] by how far they
// lie apart.
package choice

import "math"

// Order returns the places of the draws in the order in which they cover each
// other best: each next one is the draw that most lowers the sum, over all
// draws, of the Euclidean distance to the nearest recorded point or draw chosen
// so far; among equal ones the first. It is the greedy algorithm for facility
// location, of which every beginning lowers the sum by at least 1 − 1/e of the
// most that as many draws could: G. L. Nemhauser, L. A. Wolsey, M. L. Fisher,
// "An analysis of approximations for maximizing submodular set functions",
// Mathematical Programming 14 (1978) 265–294. Draws far from all others, which
// [Farthest] takes first, wait until they are worth it.
//
// All points must be of one length. Without recorded points the first draw is
// the one nearest to all others. A draw with a value that is not a number adds
// nothing. Time is the square of the number of draws times the length of a point,
// and memory the square of the number of draws.
func Order(draws, recorded [][]float64) []int {
	apart, from := distances(draws, recorded)
	gain := make([]float64, len(draws)) // at most this much, as of an earlier choice
	for i := range gain {
		gain[i] = math.Inf(1)
	}
	order := make([]int, 0, len(draws))
	for range draws {
		next := cover(gain, apart, from)
		order = append(order, next)
		gain[next] = chosen
		for i, d := range apart[next] {
			from[i] = min(from[i], d)
		}
	}
	return order
}

// chosen marks the gain of a draw that was chosen.
const chosen = -1

// cover returns the first draw of the greatest gain. Gains only ever get less,
// so that one which is still the greatest when it is computed anew need not be
// held against others computed anew (M. Minoux, "Accelerated greedy algorithms
// for maximizing submodular set functions", Optimization Techniques, Lecture
// Notes in Control and Information Sciences 7 (1978) 234–243).
func cover(gain []float64, apart [][]float64, from []float64) int {
	fresh := make([]bool, len(gain))
	for {
		best := largest(gain)
		if fresh[best] || gain[best] == chosen {
			return best
		}
		gain[best], fresh[best] = saved(apart[best], from), true
	}
}

// saved returns by how much a draw lowers the sum of distances.
func saved(apart, from []float64) float64 {
	sum := 0.0
	for i, d := range apart {
		if d < from[i] {
			sum += from[i] - d
		}
	}
	return sum
}

// Farthest returns the places of the draws in farthest-point order: each next
// one is the draw furthest from all recorded points and from the draws chosen
// so far, by the Euclidean distance; among equally far ones the first. It is
// the greedy algorithm of T. F. Gonzalez, "Clustering to minimize the maximum
// intercluster distance", Theoretical Computer Science 38 (1985) 293–306,
// started from the recorded points: every beginning of the order leaves no draw
// further from what is chosen than twice the least there can be with as many.
// It asks of points, and costs, what [Order] does.
func Farthest(draws, recorded [][]float64) []int {
	apart, from := distances(draws, recorded)
	order := make([]int, 0, len(draws))
	for range draws {
		next := largest(from)
		order = append(order, next)
		for i, d := range apart[next] {
			if from[i] != chosen {
				from[i] = min(from[i], d)
			}
		}
		from[next] = chosen
	}
	return order
}

// largest returns the first place of the largest value.
func largest(values []float64) int {
	best := 0
	for i, v := range values {
		if v > values[best] {
			best = i
		}
	}
	return best
}

// distances returns how far draws are apart, and from the nearest recorded
// point. Without recorded points, that is as far as the two draws furthest
// apart. A draw that is not a number is far from the others, and needs no
// nearer one.
func distances(draws, recorded [][]float64) (apart [][]float64, from []float64) {
	apart, from = make([][]float64, len(draws)), make([]float64, len(draws))
	widest := 0.0
	for i := range draws {
		apart[i] = make([]float64, len(draws))
		for j := range i {
			apart[i][j] = distance(draws[i], draws[j])
			apart[j][i] = apart[i][j]
			if !math.IsInf(apart[i][j], 1) {
				widest = max(widest, apart[i][j])
			}
		}
	}
	for i, d := range draws {
		from[i] = widest
		for k, r := range recorded {
			if r := distance(d, r); k == 0 || r < from[i] {
				from[i] = r
			}
		}
		if math.IsInf(from[i], 1) {
			from[i] = 0
		}
	}
	return apart, from
}

// distance returns the Euclidean distance of two points, infinite where it is
// not a number.
func distance(a, b []float64) float64 {
	if len(a) != len(b) {
		panic("choice: points of different lengths")
	}
	sum := 0.0
	for i, v := range a {
		sum += (v - b[i]) * (v - b[i])
	}
	if math.IsNaN(sum) {
		return math.Inf(1)
	}
	return math.Sqrt(sum)
}
