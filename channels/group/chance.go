package group

import (
	"math"
	"math/rand/v2"
	"slices"
)

const (
	permutations = 999
	resamples    = 999
)

// What a random generator is for, so that one use does not shift another.
const (
	forChoice = iota
	forPermutations
	forResamples
)

// generator returns the random generator for one purpose.
func generator(seed, purpose uint64) *rand.Rand { return rand.New(rand.NewPCG(seed, purpose)) }

// chance holds the permutation p-values of one pair of units.
type chance struct{ p, timing, shape float64 }

// permute returns the p-values for each label and, last, all labels, and each
// pair of units: labels+1 × pairs.
//
// If two units are independent, unit A of one take goes as well with unit B of
// any other take of the block as with its own. Only the medoid keeps its own: it
// is aligned to itself, and so unlike the others in both units. The statistic
// is the sum over takes of the products of the two's residuals. 999
// permutations of B, drawn at random within blocks, the same for every pair, and
// the takes as they are give p = (1 + how many of the permutations reach as
// much)/(1 + 999), which never is too small (Phipson and Smyth, "Permutation
// p-values should never be zero", Statistical Applications in Genetics and
// Molecular Biology 9 (2010) article 39). Only units that deviate the same way
// count as together.
//
// The two statistics, of timing and of shape, are each divided by their
// standard deviation over permutations and takes as they are, and the larger
// is the joint statistic, which has its p from the same permutations: so
// looking twice costs what it must.
func (r *readings) permute(seed uint64) [][]chance {
	rng := generator(seed, forPermutations)
	members := r.members(func(t row) bool { return !t.medoid })
	n, groups := len(r.units), len(r.labels)+1
	pairs := n * (n - 1) / 2
	timing, shape := draws(groups*pairs), draws(groups*pairs)
	partner := make([]int, len(r.rows))
	for i := range partner {
		partner[i] = i
	}
	for d := range permutations + 1 {
		if d > 0 {
			for _, m := range members {
				shuffle(rng, partner, m)
			}
		}
		for i, row := range r.rows {
			at := row.label * pairs
			for a := range n {
				for b := a + 1; b < n; b++ {
					timing[at][d] += dotRows(r.parts[a].timing, i, r.parts[b].timing, partner[i])
					shape[at][d] += dotRows(r.parts[a].shape, i, r.parts[b].shape, partner[i])
					at++
				}
			}
		}
		for k := range (groups - 1) * pairs {
			timing[(groups-1)*pairs+k%pairs][d] += timing[k][d]
			shape[(groups-1)*pairs+k%pairs][d] += shape[k][d]
		}
	}
	out := make([][]chance, groups)
	for k := range out {
		for p := range pairs {
			out[k] = append(out[k], chanceOf(timing[k*pairs+p], shape[k*pairs+p]))
		}
	}
	return out
}

// members lists the takes of each block for which keep is true.
func (r *readings) members(keep func(row) bool) [][]int {
	out := make([][]int, r.blocks)
	for i, row := range r.rows {
		if keep(row) {
			out[row.block] = append(out[row.block], i)
		}
	}
	return out
}

// draws makes room for n statistics, the takes as they are first.
func draws(n int) [][]float64 {
	out := make([][]float64, n)
	for i := range out {
		out[i] = make([]float64, permutations+1)
	}
	return out
}

// shuffle gives the takes of a block each other's partners.
func shuffle(rng *rand.Rand, partner, block []int) {
	rng.Shuffle(len(block), func(i, j int) {
		i, j = block[i], block[j]
		partner[i], partner[j] = partner[j], partner[i]
	})
}

func dotRows(a []float64, i int, b []float64, j int) float64 {
	x, y := a[i*waves:][:waves], b[j*waves:][:waves]
	sum := 0.0
	for k, v := range x {
		sum += v * y[k]
	}
	return sum
}

func chanceOf(timing, shape []float64) chance {
	standardise(timing)
	standardise(shape)
	joint := make([]float64, len(timing))
	for i, v := range timing {
		joint[i] = max(v, shape[i])
	}
	return chance{upper(joint), upper(timing), upper(shape)}
}

// standardise brings values to mean 0 and standard deviation 1, or all to 0
// when they do not differ.
func standardise(v []float64) {
	mean, square := 0.0, 0.0
	for _, x := range v {
		mean += x / float64(len(v))
	}
	for _, x := range v {
		square += (x - mean) * (x - mean) / float64(len(v))
	}
	f := rootInverse(square)
	for i := range v {
		v[i] = (v[i] - mean) * f
	}
}

// upper returns the share of values that reach the first, itself included.
// Values that differ by rounding alone are equal.
func upper(v []float64) float64 {
	const rounding = 1e-9
	count := 0
	for _, x := range v {
		if x >= v[0]-rounding {
			count++
		}
	}
	return float64(count) / float64(len(v))
}

// span is an interval.
type span struct{ low, high float64 }

// bootstrap returns 95 % intervals of ρ for each label and, last, all labels,
// and each pair: the middle of what resampled takes give. Takes are drawn with
// replacement within blocks (Efron and Tibshirani, An Introduction to the
// Bootstrap (1993), chapter 13).
func (r *readings) bootstrap(seed uint64) [][]span {
	rng := generator(seed, forResamples)
	members := r.members(func(row) bool { return true })
	n, groups := len(r.units), len(r.labels)+1
	pairs := n * (n - 1) / 2
	values := make([][]float64, groups*pairs)
	times := make([]float64, len(r.rows))
	for range resamples {
		clear(times)
		for _, m := range members {
			for range m {
				times[m[rng.IntN(len(m))]]++
			}
		}
		for k, m := range r.moments(times) {
			for a := range n {
				for b := a + 1; b < n; b++ {
					rho, _ := m.rho(a, b)
					at := k*pairs + pairIndex(a, b, n)
					values[at] = append(values[at], rho)
				}
			}
		}
	}
	out := make([][]span, groups)
	for k := range out {
		for p := range pairs {
			out[k] = append(out[k], middle(values[k*pairs+p]))
		}
	}
	return out
}

// middle returns the interval that leaves out 2.5 % of the values at each end.
func middle(v []float64) span {
	slices.Sort(v)
	out := int(math.Round(0.025 * float64(len(v)+1)))
	return span{v[out-1], v[len(v)-out]}
}
