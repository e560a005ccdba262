package template_test

import (
	"math"

	"strandwise/channels"
	"strandwise/classify/template"
)

// The slow plain reference: every distance as the package comment defines it,
// every pair in full, nothing shared with the search.

// plainNearest returns the first of the nearest templates.
func plainNearest(m template.Metric, query *channels.Take, block []template.Template, synthetic bool) template.Match {
	best := template.Match{Order: template.NoTemplate, Distance: math.Inf(1)}
	for _, t := range block {
		if t.Synthetic && !synthetic {
			continue
		}
		d := plainDistance(m, query, t.Take)
		if d < best.Distance || d == best.Distance && t.Order < best.Order {
			best = template.Match{Order: t.Order, Distance: d}
		}
	}
	return best
}

// plainDistance compares all channels at once, or group by group when there are
// weights, and adds up weight × term.
func plainDistance(m template.Metric, a, b *channels.Take) float64 {
	x, y := plainSeries(m, a), plainSeries(m, b)
	half := m.HalfWidth(a.Frames(), b.Frames())
	sum := 0.0
	if len(m.Weights) == 0 {
		for _, term := range plainTerms(m.Distance, x, y, plainGroups(a.Layout), half) {
			sum += term
		}
		return sum
	}
	for _, g := range a.Layout.Groups {
		weight, named := m.Weights[g.Name]
		if !named {
			weight = 1
		}
		alone := make([]int, len(g.Channels))
		for k := range alone {
			alone[k] = k
		}
		for _, term := range plainTerms(m.Distance, only(x, g.Channels), only(y, g.Channels), [][]int{alone}, half) {
			sum += weight * term
		}
	}
	return sum
}

// plainTerms returns what is added up to a distance.
func plainTerms(d template.Distance, x, y [][]float64, groups [][]int, half int) (terms []float64) {
	switch d {
	case template.EuclideanDependent:
		sum := 0.0
		for i := range x {
			sum += squaredDistance(x[i], y[i])
		}
		return []float64{math.Sqrt(sum)}
	case template.EuclideanIndependent:
		for c := range x[0] {
			sum := 0.0
			for i := range x {
				sum += squaredDistance(x[i][c:c+1], y[i][c:c+1])
			}
			terms = append(terms, math.Sqrt(sum))
		}
		return terms
	case template.DTWDependent:
		return []float64{plainWarp(x, y, half)}
	case template.DTWIndependent:
		for c := range x[0] {
			terms = append(terms, math.Sqrt(plainWarp(only(x, []int{c}), only(y, []int{c}), half)))
		}
		return terms
	}
	return []float64{plainDirections(x, y, groups)}
}

// plainGroups returns the channels of each group, all together when there are
// no groups.
func plainGroups(l *channels.Layout) [][]int {
	if len(l.Groups) == 0 {
		all := make([]int, len(l.Channels))
		for c := range all {
			all[c] = c
		}
		return [][]int{all}
	}
	var groups [][]int
	for _, g := range l.Groups {
		groups = append(groups, g.Channels)
	}
	return groups
}

// plainSeries returns the frames compared.
func plainSeries(m template.Metric, t *channels.Take) [][]float64 {
	frames := make([][]float64, t.Frames())
	for i := range frames {
		frames[i] = append([]float64(nil), t.Frame(i)...)
	}
	switch m.Normalise {
	case template.ZScore:
		for c := range t.Width() {
			plainScale(frames, []int{c})
		}
	case template.GroupScale:
		for _, g := range plainGroups(t.Layout) {
			plainScale(frames, g)
		}
	}
	euclidean := m.Distance == template.EuclideanDependent || m.Distance == template.EuclideanIndependent
	if euclidean && t.Frames() != m.Length {
		frames = plainResample(frames, t.Time, m.Length)
	}
	return frames
}

// plainScale takes the mean off each channel and divides all by the root of
// their mean variance, which is 0 when none of them changes.
func plainScale(frames [][]float64, group []int) {
	n, variance, still := float64(len(frames)), 0.0, true
	for _, c := range group {
		mean, first := 0.0, frames[0][c]
		for _, f := range frames {
			mean += f[c] / n
			still = still && f[c] == first
		}
		for _, f := range frames {
			f[c] -= mean
			variance += f[c] * f[c] / n / float64(len(group))
		}
	}
	for _, f := range frames {
		for _, c := range group {
			if still {
				f[c] = 0
			} else {
				f[c] /= math.Sqrt(variance)
			}
		}
	}
}

func plainResample(frames [][]float64, clock []float64, n int) [][]float64 {
	out := make([][]float64, n)
	duration := clock[len(clock)-1] - clock[0]
	for k := range out {
		at := clock[0] + duration*float64(k)/float64(n-1)
		out[k] = append([]float64(nil), frames[len(frames)-1]...)
		for i := len(clock) - 2; i >= 0; i-- {
			if at >= clock[i] && at <= clock[i+1] {
				u := (at - clock[i]) / (clock[i+1] - clock[i])
				for c := range out[k] {
					out[k][c] = frames[i][c] + u*(frames[i+1][c]-frames[i][c])
				}
			}
		}
	}
	return out
}

// plainWarp fills the whole table.
func plainWarp(x, y [][]float64, half int) float64 {
	table := make([][]float64, len(x)+1)
	for i := range table {
		table[i] = make([]float64, len(y)+1)
		for j := range table[i] {
			table[i][j] = math.Inf(1)
		}
	}
	table[0][0] = 0
	for i := range x {
		for j := range y {
			if max(i-j, j-i) <= half {
				table[i+1][j+1] = squaredDistance(x[i], y[j]) + min(table[i][j], table[i][j+1], table[i+1][j])
			}
		}
	}
	return table[len(x)][len(y)]
}

func squaredDistance(x, y []float64) float64 {
	sum := 0.0
	for c := range x {
		sum += (x[c] - y[c]) * (x[c] - y[c])
	}
	return sum
}

// only returns some channels of frames.
func only(x [][]float64, group []int) [][]float64 {
	out := make([][]float64, len(x))
	for i := range x {
		for _, c := range group {
			out[i] = append(out[i], x[i][c])
		}
	}
	return out
}

func plainDirections(x, y [][]float64, groups [][]int) float64 {
	sum := 0.0
	for _, g := range groups {
		p, q := plainSteps(x, g), plainSteps(y, g)
		for k := range p {
			sum += 1 - plainCosine(p[k], q[k])
		}
	}
	return sum / float64(16*len(groups))
}

// plainSteps returns the displacements between 17 points at equal arc length.
func plainSteps(x [][]float64, group []int) [][]float64 {
	pick := func(f []float64) []float64 {
		out := make([]float64, len(group))
		for k, c := range group {
			out[k] = f[c]
		}
		return out
	}
	arc := []float64{0}
	for i := 1; i < len(x); i++ {
		arc = append(arc, arc[i-1]+math.Sqrt(squaredDistance(pick(x[i]), pick(x[i-1]))))
	}
	total := arc[len(arc)-1]
	var points [][]float64
	for k := range 17 {
		point, at := pick(x[len(x)-1]), total*float64(k)/16
		for i := len(x) - 2; i >= 0; i-- {
			if arc[i+1] > arc[i] && at >= arc[i] && at <= arc[i+1] {
				u := (at - arc[i]) / (arc[i+1] - arc[i])
				a, b := pick(x[i]), pick(x[i+1])
				for c := range point {
					point[c] = a[c] + u*(b[c]-a[c])
				}
			}
		}
		points = append(points, point)
	}
	steps := make([][]float64, 16)
	for k := range steps {
		steps[k] = make([]float64, len(group))
		if math.Sqrt(squaredDistance(points[k], points[k+1])) > 1e-9*total/16 {
			for c := range steps[k] {
				steps[k][c] = points[k+1][c] - points[k][c]
			}
		}
	}
	return steps
}

// plainCosine takes a step of no length to be like another such step and at
// right angles to every other.
func plainCosine(a, b []float64) float64 {
	dot, aa, bb := 0.0, 0.0, 0.0
	for c := range a {
		dot += a[c] * b[c]
		aa += a[c] * a[c]
		bb += b[c] * b[c]
	}
	if aa == 0 && bb == 0 {
		return 1
	}
	if aa == 0 || bb == 0 {
		return 0
	}
	return dot / math.Sqrt(aa*bb)
}
