package convolution

import "gonum.org/v1/gonum/mat"

// byFeatures is the form with one equation per feature.
type byFeatures struct {
	*Trainer
	all   *moments
	scale []float64
}

func (t *Trainer) byFeatures() *byFeatures {
	all := newMoments(t.width, len(t.labels))
	for _, m := range t.moments {
		all = all.plus(1, m)
	}
	return &byFeatures{Trainer: t, all: all, scale: all.scale(t.origin)}
}

// equations returns the equations of rows with moments m, centred and scaled.
// The sum over rows of a centred feature times ±1 is twice its sum over the
// rows of the class.
func (f *byFeatures) equations(m *moments) *equations {
	n, mean := m.count(), m.mean()
	gram := mat.NewSymDense(f.width, nil)
	raw, products := gram.RawSymmetric(), m.products.RawSymmetric()
	for i, s := range f.scale {
		row, from := raw.Data[i*raw.Stride:], products.Data[i*products.Stride:]
		for j := i; j < f.width; j++ {
			row[j] = s * f.scale[j] * (from[j] - n*mean[i]*mean[j])
		}
	}
	right := mat.NewDense(f.width, len(f.labels), nil)
	right.Apply(func(j, c int, _ float64) float64 {
		return 2 * f.scale[j] * (m.sums.At(c, j) - float64(m.rows[c])*mean[j])
	}, right)
	return newEquations(gram, right)
}

func (f *byFeatures) fit(strength float64) (*Model, error) {
	return f.fitTo(f.all, f.equations(f.all), strength)
}

// fitTo fits a model to rows with moments m, of which e are the equations.
func (f *byFeatures) fitTo(m *moments, e *equations, strength float64) (*Model, error) {
	x, err := e.solve(strength)
	if err != nil {
		return nil, err
	}
	return f.model(x, f.scale, m.mean(), m.rows, strength), nil
}

func (f *byFeatures) validate(strengths []float64) ([]float64, error) {
	sums := make([]float64, len(strengths))
	for part, left := range f.moments {
		if part == 0 {
			continue
		}
		rest := f.all.plus(-1, left)
		e := f.equations(rest)
		for i, strength := range strengths {
			m, err := f.fitTo(rest, e, strength)
			if err != nil {
				return nil, err
			}
			sums[i] += f.squaredError(m, part)
		}
	}
	return sums, nil
}

// squaredError returns that of a model on the recorded takes of a part.
func (f *byFeatures) squaredError(m *Model, part int) float64 {
	sum := 0.0
	scores := make([]float64, len(f.labels))
	for s, p := range f.parts {
		if p != part {
			continue
		}
		for c, v := range m.Scores(scores, f.recorded[s*f.width:(s+1)*f.width]) {
			e := v - target(c, f.classes[s])
			sum += e * e
		}
	}
	return sum
}
