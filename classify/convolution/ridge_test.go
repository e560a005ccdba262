package convolution

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

// problem is a small training problem: a block of rows for each source.
type problem struct {
	width  int
	labels []int
	blocks [][]float64
}

// drawProblem draws a problem of at least one row and at most most. The first
// feature never varies and the second has a mean far above its deviation.
func drawProblem(t *rapid.T, width, most int) problem {
	p := problem{width: width}
	g := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 2))
	for left := rapid.IntRange(1, most).Draw(t, "rows"); left > 0; {
		rows := rapid.IntRange(1, min(left, 4)).Draw(t, "block")
		label := rapid.IntRange(-1, 2).Draw(t, "label")
		centre := make([]float64, width)
		for j := range centre {
			centre[j] = float64(label)*float64(j%3) + g.NormFloat64()
		}
		block := make([]float64, 0, rows*width)
		for range rows {
			for _, v := range centre {
				block = append(block, v+0.3*g.NormFloat64())
			}
			row := block[len(block)-width:]
			row[0], row[1] = 0.1, row[1]+1e4
		}
		p.labels, p.blocks, left = append(p.labels, label), append(p.blocks, block), left-rows
	}
	return p
}

func (p problem) trainer(r Ridge) *Trainer {
	t := r.Trainer(p.width, p.labels)
	for i, b := range p.blocks {
		t.Offer(i, b)
	}
	return t
}

// rows returns the rows of the sources that are wanted, and their labels.
func (p problem) rows(wanted func(source int) bool) (rows [][]float64, labels []int) {
	for s, b := range p.blocks {
		for ; wanted(s) && len(b) > 0; b = b[p.width:] {
			rows, labels = append(rows, b[:p.width]), append(labels, p.labels[s])
		}
	}
	return rows, labels
}

func every(int) bool { return true }

// plainModel is ridge regression solved as a least-squares problem: the
// penalty is one more row per feature.
type plainModel struct {
	mean, deviation []float64
	labels          []int
	x               mat.Dense // constant, then features; one column per label
}

// newPlain returns a model that standardises by all rows of the problem.
func newPlain(p problem) *plainModel {
	rows, labels := p.rows(every)
	m := &plainModel{mean: make([]float64, p.width), deviation: make([]float64, p.width), labels: distinct(labels)}
	n := float64(len(rows))
	for j := range m.mean {
		for _, r := range rows {
			m.mean[j] += (r[j] - rows[0][j]) / n
		}
		m.mean[j] += rows[0][j]
		for _, r := range rows {
			m.deviation[j] += (r[j] - m.mean[j]) * (r[j] - m.mean[j]) / n
		}
		m.deviation[j] = math.Sqrt(m.deviation[j])
	}
	return m
}

func (m *plainModel) standardise(row []float64) []float64 {
	out := []float64{1}
	for j, v := range row {
		if m.deviation[j] < 1e-9 {
			out = append(out, 0)
		} else {
			out = append(out, (v-m.mean[j])/m.deviation[j])
		}
	}
	return out
}

func (m *plainModel) fit(rows [][]float64, labels []int, strength float64) {
	width := len(m.mean)
	a := mat.NewDense(len(rows)+width, 1+width, nil)
	b := mat.NewDense(len(rows)+width, len(m.labels), nil)
	for i, r := range rows {
		a.SetRow(i, m.standardise(r))
		for c, l := range m.labels {
			b.Set(i, c, -1)
			if l == labels[i] {
				b.Set(i, c, 1)
			}
		}
	}
	for j := range width {
		a.Set(len(rows)+j, 1+j, math.Sqrt(strength))
	}
	var qr mat.QR
	qr.Factorize(a)
	if err := qr.SolveTo(&m.x, false, b); err != nil {
		panic(err)
	}
}

func (m *plainModel) scores(row []float64) []float64 {
	var out mat.Dense
	out.Mul(mat.NewDense(1, 1+len(row), m.standardise(row)), &m.x)
	return out.RawRowView(0)
}

// scoreTolerance is how far scores, of size about 1, of the same fit found in
// another way may be apart.
const scoreTolerance = 1e-6

func near(a, b []float64) bool {
	return slices.EqualFunc(a, b, func(x, y float64) bool { return math.Abs(x-y) <= scoreTolerance*(1+math.Abs(y)) })
}

// TestTrainSolvesRidge holds both forms against the least-squares problem.
func TestTrainSolvesRidge(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawProblem(t, rapid.IntRange(2, 8).Draw(t, "width"), 30)
		strength := rapid.SampledFrom([]float64{0.01, 1, 100}).Draw(t, "strength")
		m, err := p.trainer(Ridge{Strength: strength}).Train()
		if err != nil {
			t.Fatal(err)
		}
		want := newPlain(p)
		rows, labels := p.rows(every)
		want.fit(rows, labels, strength)
		if m.Strength() != strength || !slices.Equal(m.Labels(), want.labels) {
			t.Fatalf("strength %g, labels %v; want %g, %v", m.Strength(), m.Labels(), strength, want.labels)
		}
		for _, r := range rows {
			if got := m.Scores(nil, r); !near(got, want.scores(r)) {
				t.Fatalf("%d rows: scores %v, want %v", len(rows), got, want.scores(r))
			}
			best := slices.Index(m.Scores(nil, r), slices.Max(m.Scores(nil, r)))
			if got := m.Predict(r); got != m.Labels()[best] {
				t.Fatalf("predicts %d, scores say %d", got, m.Labels()[best])
			}
		}
	})
}

// TestFormsAgree solves problems of few rows in both forms.
func TestFormsAgree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const width = 16
		p := drawProblem(t, width, width)
		tr := p.trainer(Ridge{Choose: true})
		few := tr.byRows()
		a, err := few.fit(0.5)
		if err != nil {
			t.Fatal(err)
		}
		wanted, err := few.validate(strengths())
		if err != nil {
			t.Fatal(err)
		}
		tr.flush()
		many := tr.byFeatures()
		b, err := many.fit(0.5)
		if err != nil {
			t.Fatal(err)
		}
		rows, _ := p.rows(every)
		for _, r := range rows {
			if !near(a.Scores(nil, r), b.Scores(nil, r)) {
				t.Fatalf("scores by rows %v, by features %v", a.Scores(nil, r), b.Scores(nil, r))
			}
		}
		got, err := many.validate(strengths())
		if err != nil || !near(got, wanted) {
			t.Fatalf("errors of validation by rows %v, by features %v, %v", wanted, got, err)
		}
	})
}

// TestValidationLeavesSourcesOut holds the validation against fits to what is
// left when a part, with whatever was made from it, is taken away.
func TestValidationLeavesSourcesOut(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawProblem(t, rapid.IntRange(2, 12).Draw(t, "width"), 40)
		tr := p.trainer(Ridge{Choose: true})
		var f form
		if tr.moments == nil {
			f = tr.byRows()
		} else {
			tr.flush()
			f = tr.byFeatures()
		}
		tried := []float64{0.1, 10, 1000}
		got, err := f.validate(tried)
		if err != nil {
			t.Fatal(err)
		}
		if want := plainValidate(p, tr.parts, tried); !near(got, want) {
			t.Fatalf("errors of validation %v, want %v", got, want)
		}
	})
}

func plainValidate(p problem, parts []int, strengths []float64) []float64 {
	sums := make([]float64, len(strengths))
	m := newPlain(p)
	for part := 1; part <= slices.Max(parts); part++ {
		rows, labels := p.rows(func(s int) bool { return parts[s] != part })
		for i, strength := range strengths {
			m.fit(rows, labels, strength)
			for s, b := range p.blocks {
				if parts[s] != part {
					continue
				}
				for c, v := range m.scores(b[:p.width]) {
					want := -1.0
					if m.labels[c] == p.labels[s] {
						want = 1
					}
					sums[i] += (v - want) * (v - want)
				}
			}
		}
	}
	return sums
}

func TestDeal(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		labels := rapid.SliceOfN(rapid.IntRange(0, 6), 1, 60).Draw(t, "labels")
		parts := deal(labels)
		of, sources, sizes := map[int]map[int]bool{}, map[int]int{}, map[int]int{}
		for i, l := range labels {
			if of[l] == nil {
				of[l] = map[int]bool{}
			}
			of[l][parts[i]] = true
			sources[l]++
			sizes[parts[i]]++
		}
		for l, in := range of {
			if sources[l] == 1 != in[0] {
				t.Fatalf("label %d of %d sources in parts %v", l, sources[l], in)
			}
			if sources[l] > 1 && len(in) != min(sources[l], slices.Max(parts)) {
				t.Fatalf("%d sources of label %d in %d of %d parts", sources[l], l, len(in), slices.Max(parts))
			}
		}
		if slices.Max(parts) > 10 {
			t.Fatalf("%d parts", slices.Max(parts))
		}
		for p := 1; p <= slices.Max(parts); p++ {
			if d := sizes[1] - sizes[p]; d < 0 || d > 1 {
				t.Fatalf("part 1 of %d sources, part %d of %d", sizes[1], p, sizes[p])
			}
		}
	})
}

// TestMemoryIsBounded offers many rows and looks at what is kept of them.
func TestMemoryIsBounded(t *testing.T) {
	const width, sources, rows = 20, 50, 33
	g := rand.New(rand.NewPCG(1, 4))
	tr := Ridge{}.Trainer(width, make([]int, sources))
	block := make([]float64, rows*width)
	for s := range sources {
		for i := range block {
			block[i] = g.NormFloat64()
		}
		tr.Offer(s, block)
	}
	if cap(tr.held) > 2*width*width || len(tr.recorded) > 0 || len(tr.waiting) > 0 || len(tr.moments) != 1 {
		t.Errorf("%d values held, %d of recorded takes, %d blocks waiting, %d moments", cap(tr.held), len(tr.recorded), len(tr.waiting), len(tr.moments))
	}
}

// TestStrengthTooSmall has equations that only the strength makes solvable.
func TestStrengthTooSmall(t *testing.T) {
	p := problem{width: 3, labels: []int{0, 1}, blocks: [][]float64{{0, 1, 2}, {2, 1, 1}}}
	m, err := p.trainer(Ridge{Strength: 1e-300}).Train()
	if err == nil || !strings.Contains(err.Error(), "ridge strength 1e-300") {
		t.Errorf("model %v, error %v", m, err)
	}
}
