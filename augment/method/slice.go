package method

import "math/rand/v2"

// Slice cuts a stretch of a stated share out of a take, at a drawn place, and
// stretches it back to the take's duration (Le Guennec, Malinowski, Tavenard
// 2016). The order of the frames is kept.
type Slice struct {
	Share float64 // of the duration, 0 < Share ≤ 1; 1 changes nothing
}

// PublishedSlice returns the published share, nine tenths.
func PublishedSlice() Slice { return Slice{Share: 0.9} }

// Apply makes one take; see the package's contract.
func (s Slice) Apply(dst, src []float64, width int, time []float64, rng *rand.Rand) []float64 {
	if !(s.Share > 0 && s.Share <= 1) {
		panic("method: the share of a slice is not in (0, 1]")
	}
	dst, n := prepare(dst, src, width, time)
	begin := (1 - s.Share) * rng.Float64()
	if n < 2 || s.Share == 1 {
		return dst
	}
	duration := time[n-1] - time[0]
	instants := make([]float64, n)
	for i, t := range time {
		instants[i] = time[0] + begin*duration + s.Share*(t-time[0])
	}
	readAt(dst, src, width, time, instants)
	return dst
}
