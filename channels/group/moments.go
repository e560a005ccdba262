package group

import "math"

// weigh takes all residuals from the means of their blocks, and weighs the
// waves: each by the inverse of its variance, so that a large shift does not
// drown a small bend, times its reliability, so that noise counts little. The
// weights are those of all units and labels together, and do not look at how
// units go together; so they leave the permutation test exact.
func (r *readings) weigh() {
	for i := range r.parts {
		p := &r.parts[i]
		for _, x := range [][]float64{p.timing, p.halves[0], p.halves[1], p.shape} {
			r.centre(x)
		}
	}
	for k := range waves {
		var timing, shape, both, one, other float64
		for i := range r.parts {
			p := &r.parts[i]
			timing += product(p.timing, p.timing, k)
			shape += product(p.shape, p.shape, k)
			both += product(p.halves[0], p.halves[1], k)
			one += product(p.halves[0], p.halves[0], k)
			other += product(p.halves[1], p.halves[1], k)
		}
		reliable := 1.0
		if one > 0 && other > 0 {
			reliable = spearmanBrown(both, one, other)
		}
		t, s := rootInverse(timing/max(reliable, 1e-3)), rootInverse(shape)
		for i := range r.parts {
			p := &r.parts[i]
			scaleWave(p.timing, k, t)
			scaleWave(p.halves[0], k, t)
			scaleWave(p.halves[1], k, t)
			scaleWave(p.shape, k, s)
		}
	}
}

// centre takes residuals from the means of their blocks.
func (r *readings) centre(x []float64) {
	if x == nil {
		return
	}
	mean := make([]float64, r.blocks*waves)
	count := make([]float64, r.blocks)
	for i, row := range r.rows {
		count[row.block]++
		for k := range waves {
			mean[row.block*waves+k] += x[i*waves+k]
		}
	}
	for i, row := range r.rows {
		for k := range waves {
			x[i*waves+k] -= mean[row.block*waves+k] / count[row.block]
		}
	}
}

// product returns the sum over takes of the products of two residuals in one
// wave.
func product(a, b []float64, k int) float64 {
	sum := 0.0
	for i := k; i < len(a); i += waves {
		sum += a[i] * b[i]
	}
	return sum
}

func scaleWave(a []float64, k int, f float64) {
	for i := k; i < len(a); i += waves {
		a[i] *= f
	}
}

func rootInverse(v float64) float64 {
	if v > 0 {
		return 1 / math.Sqrt(v)
	}
	return 0
}

// spearmanBrown returns the reliability of a measurement from the covariance
// of its two halves and their variances: with r their correlation it is
// 2r/(1+r) (Spearman, "Correlation calculated from faulty data", and Brown,
// "Some experimental results in the correlation of mental abilities", both
// British Journal of Psychology 3 (1910) 271–295 and 296–322). It lies between
// 0 and 1.
func spearmanBrown(both, one, other float64) float64 {
	if !(one > 0 && other > 0) {
		return 0
	}
	r := min(max(both/math.Sqrt(one*other), 0), 1)
	return 2 * r / (1 + r)
}

// moments are sums of products of residuals over takes, of one label or all.
type moments struct {
	timing, shape []float64 // for each pair of units
	units         []unitMoments
}

type unitMoments struct {
	timing, shape    float64 // with itself
	both, one, other float64 // of the timing of its halves
}

func newMoments(units int) moments {
	pairs := units * (units - 1) / 2
	return moments{make([]float64, pairs), make([]float64, pairs), make([]unitMoments, units)}
}

// pairIndex returns the place of units i < j among the pairs of n units.
func pairIndex(i, j, n int) int { return i*(2*n-i-1)/2 + j - i - 1 }

// rho returns the corrected correlation of two units and their reliabilities.
func (m *moments) rho(i, j int) (rho float64, reliability [2]float64) {
	a, b := &m.units[i], &m.units[j]
	if !(a.timing > 0 && b.timing > 0) {
		return 0, reliability
	}
	reliability = [2]float64{a.reliability(), b.reliability()}
	plain := m.timing[pairIndex(i, j, len(m.units))] / math.Sqrt(a.timing*b.timing)
	correction := math.Sqrt(max(reliability[0], leastReliable) * max(reliability[1], leastReliable))
	return min(max(plain/correction, -1), 1), reliability
}

// shapes returns the plain correlation of the shapes of two units.
func (m *moments) shapes(i, j int) float64 {
	a, b := m.units[i].shape, m.units[j].shape
	if !(a > 0 && b > 0) {
		return 0
	}
	return min(max(m.shape[pairIndex(i, j, len(m.units))]/math.Sqrt(a*b), -1), 1)
}

// leastReliable is the reliability below which no correction goes further: a
// correlation of little else than noise cannot be corrected.
const leastReliable = 0.4

func (u *unitMoments) reliability() float64 {
	if u.one == 0 && u.other == 0 {
		return 1
	}
	return spearmanBrown(u.both, u.one, u.other)
}

// moments returns the sums for each label and, last, for all. times says how
// often each take counts, nil for once; the means of the blocks are taken off
// anew.
func (r *readings) moments(times []float64) []moments {
	n := len(r.units)
	out := make([]moments, len(r.labels)+1)
	for k := range out {
		out[k] = newMoments(n)
	}
	offsets := r.blockMeans(times)
	for i, row := range r.rows {
		f := 1.0
		if times != nil {
			f = times[i]
		}
		if f != 0 {
			r.accumulate(&out[row.label], i, f, offsets[row.block*n:])
		}
	}
	all := &out[len(r.labels)]
	for k := range r.labels {
		all.add(&out[k])
	}
	return out
}

// means holds the means of one unit's residuals over a block.
type means struct {
	timing, one, other, shape [waves]float64
}

// blockMeans returns the means over each block, blocks × units.
func (r *readings) blockMeans(times []float64) []means {
	n := len(r.units)
	out := make([]means, r.blocks*n)
	if times == nil {
		return out // residuals are centred already
	}
	count := make([]float64, r.blocks)
	for i, row := range r.rows {
		count[row.block] += times[i]
		for u := range r.parts {
			p, m := &r.parts[u], &out[row.block*n+u]
			addTo(&m.timing, p.timing, i, times[i])
			addTo(&m.one, p.halves[0], i, times[i])
			addTo(&m.other, p.halves[1], i, times[i])
			addTo(&m.shape, p.shape, i, times[i])
		}
	}
	for i := range out {
		f := 1 / count[i/n]
		for k := range waves {
			out[i].timing[k] *= f
			out[i].one[k] *= f
			out[i].other[k] *= f
			out[i].shape[k] *= f
		}
	}
	return out
}

func addTo(dst *[waves]float64, x []float64, i int, f float64) {
	if x == nil {
		return
	}
	for k, v := range x[i*waves:][:waves] {
		dst[k] += f * v
	}
}

// accumulate adds take i, counted f times, to the sums.
func (r *readings) accumulate(m *moments, i int, f float64, offset []means) {
	n := len(r.units)
	timing, shape := make([][waves]float64, n), make([][waves]float64, n)
	for u := range n {
		p, o, s := &r.parts[u], &offset[u], &m.units[u]
		timing[u] = less(p.timing, i, &o.timing)
		shape[u] = less(p.shape, i, &o.shape)
		s.timing += f * dot(&timing[u], &timing[u])
		s.shape += f * dot(&shape[u], &shape[u])
		if p.halves[0] != nil {
			one, other := less(p.halves[0], i, &o.one), less(p.halves[1], i, &o.other)
			s.both += f * dot(&one, &other)
			s.one += f * dot(&one, &one)
			s.other += f * dot(&other, &other)
		}
	}
	pair := 0
	for a := range n {
		for b := a + 1; b < n; b++ {
			m.timing[pair] += f * dot(&timing[a], &timing[b])
			m.shape[pair] += f * dot(&shape[a], &shape[b])
			pair++
		}
	}
}

func less(x []float64, i int, mean *[waves]float64) (out [waves]float64) {
	for k, v := range x[i*waves:][:waves] {
		out[k] = v - mean[k]
	}
	return out
}

func dot(a, b *[waves]float64) float64 {
	sum := 0.0
	for k, v := range a {
		sum += v * b[k]
	}
	return sum
}

func (m *moments) add(o *moments) {
	for k, v := range o.timing {
		m.timing[k] += v
		m.shape[k] += o.shape[k]
	}
	for k, v := range o.units {
		s := &m.units[k]
		s.timing += v.timing
		s.shape += v.shape
		s.both += v.both
		s.one += v.one
		s.other += v.other
	}
}
