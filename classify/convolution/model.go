package convolution

import (
	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// Model tells labels apart by features. It is read-only and may be shared by
// goroutines.
type Model struct {
	labels   []int
	weights  *mat.Dense // labels × width
	constant []float64  // per label
	strength float64
}

// model returns the model with these weights, width × classes, of features
// taken less the origin and the mean and then scaled.
func (t *Trainer) model(weights *mat.Dense, scale, mean []float64, rows []int, strength float64) *Model {
	m := &Model{labels: t.labels, weights: mat.DenseCopyOf(weights.T()), strength: strength}
	all := 0
	for _, n := range rows {
		all += n
	}
	for c, n := range rows {
		w := m.weights.RawRowView(c)
		floats.Mul(w, scale)
		constant := meanTarget(n, all) - floats.Dot(w, t.origin) - floats.Dot(w, mean)
		m.constant = append(m.constant, constant)
	}
	return m
}

// target returns what the function of class c is fitted to on takes of a
// class.
func target(c, class int) float64 {
	if c == class {
		return 1
	}
	return -1
}

// meanTarget returns the mean of the targets of a class that has some of all
// rows.
func meanTarget(rows, all int) float64 { return 2*float64(rows)/float64(all) - 1 }

// Strength returns the strength the model was fitted with.
func (m *Model) Strength() float64 { return m.strength }

// Labels returns the labels the model knows, ascending. The slice is the
// model's.
func (m *Model) Labels() []int { return m.labels }

// Scores computes the value of each label's function for a take's features
// into dst, in the order of Labels, and returns it: about 1 for takes of the
// label, about −1 for others. A nil dst is allocated; wrong lengths panic.
func (m *Model) Scores(dst, features []float64) []float64 {
	if dst == nil {
		dst = make([]float64, len(m.labels))
	}
	if len(dst) != len(m.labels) {
		panic("convolution: destination length mismatch")
	}
	for c := range dst {
		dst[c] = m.score(c, features)
	}
	return dst
}

func (m *Model) score(c int, features []float64) float64 {
	return m.constant[c] + floats.Dot(m.weights.RawRowView(c), features)
}

// Predict returns the label of the greatest score, the least label among
// equals.
func (m *Model) Predict(features []float64) int {
	best, score := 0, m.score(0, features)
	for c := 1; c < len(m.labels); c++ {
		if s := m.score(c, features); s > score {
			best, score = c, s
		}
	}
	return m.labels[best]
}
