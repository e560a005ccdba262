package realism

// Report is what [Measure] found. Parts that could not be measured are nil: too
// few takes of a label, no planar paths, nothing made.
type Report struct {
	Recorded  int `json:"recorded"`  // recorded takes looked at
	LeftOut   int `json:"left_out"`  // beyond the most per label
	Synthetic int `json:"synthetic"` // synthetic takes made from them
	Shortfall int `json:"shortfall"` // synthetic takes that could not be made

	Spread   *Spread   `json:"spread"` // mean over labels
	PowerLaw *PowerLaw `json:"power_law"`
	Band     *Band     `json:"band"`
	Witness  *Witness  `json:"witness"`  // over the classifiers of all labels
	Together *Witness  `json:"together"` // one classifier for all labels, which has more to learn from
	Labels   []Label   `json:"labels"`

	right    []float64 // per source, of the classifiers of the labels
	together []float64
}

// Label is what was found of one label.
type Label struct {
	Label     string   `json:"label"`
	Recorded  int      `json:"recorded"`
	Synthetic int      `json:"synthetic"`
	Spread    *Spread  `json:"spread"`
	Witness   *Witness `json:"witness"`
}

// spreads returns the mean over the labels that have one, nil for none.
func spreads(labels []Label) *Spread {
	var out Spread
	n := 0.0
	for _, l := range labels {
		if s := l.Spread; s != nil {
			n++
			out.Recorded, out.Synthetic, out.Wasserstein = out.Recorded+s.Recorded, out.Synthetic+s.Synthetic, out.Wasserstein+s.Wasserstein
		}
	}
	if n == 0 {
		return nil
	}
	return &Spread{out.Recorded / n, out.Synthetic / n, out.Wasserstein / n}
}
