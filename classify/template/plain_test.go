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

func plainDistance(m template.Metric, a, b *channels.Take) float64 {
	x, y := plainSeries(m, a), plainSeries(m, b)
	half := m.HalfWidth(a.Frames(), b.Frames())
	switch m.Distance {
	case template.EuclideanDependent:
		sum := 0.0
		for i := range x {
			sum += squaredDistance(x[i], y[i])
		}
		return math.Sqrt(sum)
	case template.EuclideanIndependent:
		total := 0.0
		for c := range x[0] {
			sum := 0.0
			for i := range x {
				sum += squaredDistance(x[i][c:c+1], y[i][c:c+1])
			}
			total += math.Sqrt(sum)
		}
		return total
	case template.DTWDependent:
		return plainWarp(x, y, half)
	case template.DTWIndependent:
		total := 0.0
		for c := range x[0] {
			total += math.Sqrt(plainWarp(oneChannel(x, c), oneChannel(y, c), half))
		}
		return total
	}
	return plainDirections(x, y, a.Layout)
}

// plainSeries returns the frames compared.
func plainSeries(m template.Metric, t *channels.Take) [][]float64 {
	frames := make([][]float64, t.Frames())
	for i := range frames {
		frames[i] = append([]float64(nil), t.Frame(i)...)
	}
	if m.Normalise == template.ZScore {
		for c := range t.Width() {
			plainZ(frames, c)
		}
	}
	euclidean := m.Distance == template.EuclideanDependent || m.Distance == template.EuclideanIndependent
	if euclidean && t.Frames() != m.Length {
		frames = plainResample(frames, t.Time, m.Length)
	}
	return frames
}

func plainZ(frames [][]float64, c int) {
	n, mean, variance := float64(len(frames)), 0.0, 0.0
	lowest, highest := frames[0][c], frames[0][c]
	for _, f := range frames {
		mean += f[c] / n
		lowest, highest = min(lowest, f[c]), max(highest, f[c])
	}
	for _, f := range frames {
		variance += (f[c] - mean) * (f[c] - mean) / n
	}
	for _, f := range frames {
		if lowest == highest {
			f[c] = 0
		} else {
			f[c] = (f[c] - mean) / math.Sqrt(variance)
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

func oneChannel(x [][]float64, c int) [][]float64 {
	out := make([][]float64, len(x))
	for i := range x {
		out[i] = x[i][c : c+1]
	}
	return out
}

func plainDirections(x, y [][]float64, l *channels.Layout) float64 {
	groups := l.Groups
	if len(groups) == 0 {
		all := channels.Group{}
		for c := range l.Channels {
			all.Channels = append(all.Channels, c)
		}
		groups = []channels.Group{all}
	}
	sum := 0.0
	for _, g := range groups {
		p, q := plainSteps(x, g.Channels), plainSteps(y, g.Channels)
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
