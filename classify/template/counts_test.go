package template_test

import (
	"sync"
	"testing"

	"strandwise/classify/template"
)

// searched returns the counts of a search of so many queries in so many
// templates, offered in blocks of ten by two workers.
func searched(t *testing.T, m template.Metric, noise float64, queries, templates int) template.Counts {
	t.Helper()
	takes := walks(queries+templates, 128, 6, noise)
	s, err := template.NewSearch(m, takes[:templates], takes[templates:])
	if err != nil {
		t.Fatal(err)
	}
	errs := make([]error, 2)
	var g sync.WaitGroup
	for k := range errs {
		g.Go(func() {
			w := s.Worker()
			for from := 10 * k; from < templates && errs[k] == nil; from += 20 {
				var block []template.Template
				for i := from; i < min(from+10, templates); i++ {
					block = append(block, template.Template{Take: takes[i], Order: i})
				}
				errs[k] = w.Offer(block)
			}
		})
	}
	g.Wait()
	for _, err := range errs {
		if err != nil {
			t.Fatal(err)
		}
	}
	return s.Counts()
}

// TestCounts checks that every pair is accounted for once, whoever did it.
func TestCounts(t *testing.T) {
	const queries, templates = 7, 40
	for _, distance := range template.Distances() {
		m := template.Metric{Distance: distance, Normalise: template.ZScore, Band: 0.1}
		c := searched(t, m, noisy, queries, templates)
		compared := c.Pairs - c.Pruned()
		if c.Pairs != queries*templates || compared < queries || c.Abandoned > compared-queries {
			t.Errorf("%s: %+v, want %d pairs, of which one a query at least is compared and not abandoned", distance, c, queries*templates)
		}
		warped := distance == template.DTWDependent || distance == template.DTWIndependent
		if !warped && (c.Pruned() > 0 || c.Cells > 0 || c.SketchCells > 0) {
			t.Errorf("%s: %+v, want nothing pruned and no cells", distance, c)
		}
		tables := int64(1)
		if distance == template.DTWIndependent {
			tables = 6
		}
		if full := compared * tables * int64(cells(m, 128)); warped && (c.Cells == 0 || c.Cells > full || c.Abandoned == 0 && c.Cells != full) {
			t.Errorf("%s: %+v, want no more than %d cells", distance, c, full)
		}
	}
}

// TestPruning checks that the bounds do their work: what a search costs, in
// table cells out of all there are, on takes that are easy to tell apart and on
// noisy ones.
func TestPruning(t *testing.T) {
	for _, c := range []struct {
		distance         template.Distance
		band, noise      float64
		sketches, tables float64 // at most
	}{
		{template.DTWDependent, 0.1, easy, 0.10, 0.08},
		{template.DTWDependent, 0.1, noisy, 0.35, 0.06},
		{template.DTWDependent, 1, easy, 0.05, 0.08},
		{template.DTWDependent, 1, noisy, 0.35, 0.06},
	} {
		m := template.Metric{Distance: c.distance, Normalise: template.ZScore, Band: c.band}
		n := searched(t, m, c.noise, 20, 100)
		all := float64(n.Pairs) * cells(m, 128)
		if s, f := float64(n.SketchCells)/all, float64(n.Cells)/all; s > c.sketches || f > c.tables {
			t.Errorf("%s, band %g, noise %g: %.3f of the cells in sketches and %.3f in tables, want at most %g and %g; %+v", c.distance, c.band, c.noise, s, f, c.sketches, c.tables, n)
		}
	}
}
