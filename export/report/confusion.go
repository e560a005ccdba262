package report

import (
	"cmp"
	"fmt"
	"slices"
	"strconv"
)

// mostConfused is how many labels a matrix of confusions is drawn for.
const mostConfused = 60

// square tells whether a confusion has a row and a column for each label.
func square(c [][]int, n int) bool {
	return len(c) == n && !slices.ContainsFunc(c, func(row []int) bool { return len(row) != n })
}

// confusion draws which labels were taken for which, before and after.
func (b *builder) confusion(before, after Result) *figure {
	names := b.in.Score.LabelNames
	n := len(names)
	if n == 0 || n > mostConfused || !square(before.Confusion, n) || !square(after.Confusion, n) {
		return nil
	}
	f := &figure{
		Wide: true,
		Key:  []key{{"k-rb", "recorded takes alone"}, {"k-sb", "with synthetic takes"}},
		Caption: fmt.Sprintf("A row is the label performed, a column the label recognised, both by their numbers in the table of labels. Each cell holds two bars as high as the share of the row's tests that went there (%s, %s). "+
			"Bars beside the diagonal are confusions.", after.learner(), perLabelText(after.TakesPerLabel)),
		Numbers: &table{Caption: "Tests by label performed and recognised; pairs that never occurred are left out", Head: []string{"performed", "recognised as", "tests, recorded", "tests, with synthetic"}},
	}
	f.Panels = []panel{b.confusionPanel(before, after)}
	for i := range names {
		for j := range names {
			if x, y := before.Confusion[i][j], after.Confusion[i][j]; x+y > 0 {
				f.Numbers.add(nameCell(names[i], "no label"), nameCell(names[j], "no label"), figures(whole(x)), figures(whole(y)))
			}
		}
	}
	return f
}

func (b *builder) confusionPanel(before, after Result) panel {
	n := len(before.Confusion)
	size := min(44, max(18, 560/n))
	const left, top = 46, 34
	end := func(k int) float64 { return float64(k * size) }
	p := panel{Name: "Matrix of confusions", Width: max(200, left+n*size+6), Height: top + n*size + 6}
	p.text(classTick, 2, 11, "", "↓ performed, → recognised as")
	grid, own := "", ""
	for k := range n + 1 {
		grid += line(left, top+end(k), left+end(n), top+end(k)) + line(left+end(k), top, left+end(k), top+end(n))
	}
	for k, name := range b.in.Score.LabelNames {
		own += box(left+end(k), top+end(k), float64(size), float64(size))
		no := b.place(name)
		p.text(classTick, left-6, top+end(k)+float64(size)/2+4, "end", no)
		p.text(classTick, left+end(k)+float64(size)/2, top-6, "middle", no)
	}
	p.path(gapFill, own)
	p.path(classGrid, grid)
	p.path(barRecorded, bars(before.Confusion, left, top, size, 0.16))
	p.path(barSynthetic, bars(after.Confusion, left, top, size, 0.54))
	return p
}

// bars draws one bar in every cell that has tests, its left edge at a share of
// the cell's width.
func bars(confusion [][]int, left, top, size int, at float64) string {
	d := ""
	for i, row := range confusion {
		tested := 0
		for _, n := range row {
			tested += n
		}
		for j, n := range row {
			if n > 0 {
				h := max(1.5, float64(n)/float64(tested)*float64(size-4))
				d += box(float64(left+j*size)+at*float64(size), float64(top+(i+1)*size)-2-h, 0.3*float64(size), h)
			}
		}
	}
	return d
}

// place returns the number of a label on the page.
func (b *builder) place(label string) string {
	if at, ok := b.places[label]; ok {
		return strconv.Itoa(at + 1)
	}
	return "–"
}

// mostMistakes is how many pairs of labels the list of confusions holds.
const mostMistakes = 15

// mistakes lists the pairs of labels that were confused most; nil where there
// are none.
func (b *builder) mistakes(before, after Result) *table {
	names := b.in.Score.LabelNames
	n := len(names)
	if !square(before.Confusion, n) || !square(after.Confusion, n) {
		return nil
	}
	type pair struct{ i, j, before, after int }
	var list []pair
	for i := range names {
		for j := range names {
			if x, y := before.Confusion[i][j], after.Confusion[i][j]; i != j && x+y > 0 {
				list = append(list, pair{i, j, x, y})
			}
		}
	}
	if len(list) == 0 {
		return nil
	}
	slices.SortStableFunc(list, func(p, q pair) int { return cmp.Compare(q.before+q.after, p.before+p.after) })
	t := &table{Caption: fmt.Sprintf("The labels most often mistaken for another (%d of %d pairs)", min(len(list), mostMistakes), len(list)), Head: []string{"performed", "mistaken for", "times, recorded", "times, with synthetic"}}
	for _, p := range list[:min(len(list), mostMistakes)] {
		t.add(b.linked(names[p.i]), b.linked(names[p.j]), figures(whole(p.before)), figures(whole(p.after)))
	}
	return t
}
