package method

import (
	"math"
	"math/rand/v2"
	"slices"
)

// expm1 is e^x − 1 with x held where the result is finite.
func expm1(x float64) float64 { return math.Expm1(min(x, 700)) }

// drawnCuts draws at most count distinct frames strictly between the first
// and the last of n, in order.
func drawnCuts(n, count int, rng *rand.Rand) []int {
	cuts := rng.Perm(max(n-2, 0))
	cuts = cuts[:min(count, len(cuts))]
	for k := range cuts {
		cuts[k]++
	}
	slices.Sort(cuts)
	return cuts
}

// bends returns at most count frames at which the path turns most sharply, in
// order: local peaks of the angle between the ways into and out of a frame,
// each measured over an eighth of a part, so that noise is not taken for a
// bend, and half a part apart at least.
func bends(src []float64, width, count int) []int {
	n := len(src) / width
	part := n / (count + 1)
	reach, apart := max(part/8, 1), max(part/2, 1)
	angles := make([]float64, n)
	order := make([]int, 0, n)
	for i := reach; i < n-reach; i++ {
		angles[i] = turning(src, width, i-reach, i, i+reach)
		if angles[i] > 0 {
			order = append(order, i)
		}
	}
	slices.SortStableFunc(order, func(i, j int) int {
		switch {
		case angles[i] > angles[j]:
			return -1
		case angles[i] < angles[j]:
			return 1
		}
		return 0
	})
	var cuts []int
	for _, i := range order {
		if len(cuts) == count {
			break
		}
		near := i < apart || n-1-i < apart
		for _, c := range cuts {
			near = near || max(c-i, i-c) < apart
		}
		if !near {
			cuts = append(cuts, i)
		}
	}
	slices.Sort(cuts)
	return cuts
}

// turning returns the angle in radians, 0 to π, between the way from frame i
// to j and the way from j to k; 0 where either has no length.
func turning(src []float64, width, i, j, k int) float64 {
	in, out, dot := 0.0, 0.0, 0.0
	for c := range width {
		a := src[j*width+c] - src[i*width+c]
		b := src[k*width+c] - src[j*width+c]
		in, out, dot = in+a*a, out+b*b, dot+a*b
	}
	length := math.Sqrt(in) * math.Sqrt(out)
	if length == 0 {
		return 0
	}
	return math.Acos(min(max(dot/length, -1), 1))
}
