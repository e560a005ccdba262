package template

// Counts says how a search came to its result. Pairs of a query and a template
// are pruned by one of the lower bounds, which are tried in the order listed, or
// else compared.
type Counts struct {
	Pairs            int64 // held against each other
	Ends             int64 // pruned by their first and last frames
	TemplateEnvelope int64 // pruned by the query inside the template's envelope
	QueryEnvelope    int64 // pruned by the template inside the query's envelope
	Sketch           int64 // pruned by warping their sketches
	Abandoned        int64 // compared and given up, or found further than the nearest
	SketchCells      int64 // cells of tables of sketches
	Cells            int64 // cells of tables of takes
}

// Pruned returns the number of pairs that were not compared.
func (c Counts) Pruned() int64 { return c.Ends + c.TemplateEnvelope + c.QueryEnvelope + c.Sketch }

// Plus returns the sum of two counts.
func (c Counts) Plus(o Counts) Counts {
	return Counts{
		Pairs:            c.Pairs + o.Pairs,
		Ends:             c.Ends + o.Ends,
		TemplateEnvelope: c.TemplateEnvelope + o.TemplateEnvelope,
		QueryEnvelope:    c.QueryEnvelope + o.QueryEnvelope,
		Sketch:           c.Sketch + o.Sketch,
		Abandoned:        c.Abandoned + o.Abandoned,
		SketchCells:      c.SketchCells + o.SketchCells,
		Cells:            c.Cells + o.Cells,
	}
}
