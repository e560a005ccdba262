package classify

import (
	"math"

	"strandwise/channels"
	"strandwise/classify/statistic"
	"strandwise/classify/template"
)

// Level is the level of the intervals in a report.
const Level = 0.95

// Report is what a score found, ready to be written as JSON; testdata/report.json
// is one.
type Report struct {
	Protocol  Protocol           `json:"protocol"`
	Normalise template.Normalise `json:"normalise"`
	Band      float64            `json:"band"`
	Seed      uint64             `json:"seed"`
	PerTake   int                `json:"per_take"`
	Labels    int                `json:"labels"`
	Takes     int                `json:"takes"`
	Results   []Result           `json:"results"` // per distance: recorded, then recorded+synthetic
	Verdict   string             `json:"verdict"` // one plain sentence
	Notes     []string           `json:"notes"`   // what a reader should know before believing it
}

// Origins of the templates behind a result.
const (
	FromRecorded  = "recorded"
	FromSynthetic = "recorded+synthetic"
)

// Result is what one distance achieved with one kind of templates. Shares are
// rounded to four decimals, p to four figures.
type Result struct {
	Distance      template.Distance `json:"distance"`
	TakesPerLabel *int              `json:"takes_per_label"` // null where the protocol does not set it
	Origin        string            `json:"origin"`          // of the templates: FromRecorded or FromSynthetic
	Method        string            `json:"method"`          // that made the synthetic ones, or "none"
	Repeats       int               `json:"repeats"`         // splits
	Takes         int               `json:"takes"`           // different takes tested
	Tested        int               `json:"tested"`          // tests, over all splits
	Errors        int               `json:"errors"`
	Accuracy      float64           `json:"accuracy"`
	Error         float64           `json:"error"`
	// Low and High bound the error: Wilson's 95 % interval, counting each take
	// tested once, however often the splits repeat.
	Low  float64 `json:"low"`
	High float64 `json:"high"`
	// Reduction is the share of the errors with recorded templates that the
	// synthetic ones save, negative when they add errors; absent for
	// recorded templates, and when there was no error to save.
	Reduction *float64 `json:"reduction,omitempty"`
	// Helped and Hurt count the takes recognised more often with the synthetic
	// templates and less often, over all splits; absent for recorded templates.
	Helped *int `json:"helped,omitempty"`
	Hurt   *int `json:"hurt,omitempty"`
	// P is McNemar's exact two-sided p of Helped against Hurt.
	P        *float64      `json:"p,omitempty"`
	PerLabel []LabelResult `json:"per_label"`
}

// LabelResult counts the errors on the takes of one label.
type LabelResult struct {
	Label     string `json:"label"`
	Tested    int    `json:"tested"`
	Recorded  int    `json:"errors_recorded"`
	Synthetic *int   `json:"errors_with_synthetic,omitempty"` // absent for recorded templates
}

// report sums up the outcomes.
func (r *run) report() *Report {
	o := r.options
	out := &Report{
		Protocol: o.Protocol, Normalise: o.Normalise, Band: o.Band, Seed: o.Seed, PerTake: o.PerTake,
		Labels: len(distinct(r.takes, labelOf)), Takes: len(r.takes), Notes: r.notes(),
	}
	for d := range o.Distances {
		out.Results = append(out.Results, r.result(d, false))
		if o.PerTake > 0 {
			out.Results = append(out.Results, r.result(d, true))
		}
	}
	out.Verdict = verdict(out.Results)
	return out
}

// result sums up the outcomes of one distance, with or without synthetic
// templates.
func (r *run) result(d int, synthetic bool) Result {
	sum, takes, helped, hurt := total(r.outcomes[d])
	out := Result{
		Distance: r.options.Distances[d], Origin: FromRecorded, Method: "none",
		Repeats: len(r.folds), Takes: takes, Tested: sum.tested, Errors: sum.recorded,
		PerLabel: perLabel(r.takes, r.outcomes[d], synthetic),
	}
	if k := r.options.TakesPerLabel; r.options.Protocol == Pooled && k > 0 {
		out.TakesPerLabel = &k
	}
	if r.options.Protocol != Pooled {
		out.Repeats = 1
	}
	if synthetic {
		out.Origin, out.Method, out.Errors = FromSynthetic, r.options.Method, sum.synthetic
		p := figures(statistic.McNemar(helped, hurt), 4)
		out.Helped, out.Hurt, out.P = &helped, &hurt, &p
		if sum.recorded > 0 {
			reduction := decimals(1 - float64(sum.synthetic)/float64(sum.recorded))
			out.Reduction = &reduction
		}
	}
	share := float64(out.Errors) / float64(out.Tested)
	low, high := statistic.Wilson(share, takes, Level)
	out.Error, out.Accuracy, out.Low, out.High = decimals(share), decimals(1-share), decimals(low), decimals(high)
	return out
}

// total adds up outcomes, and counts the takes tested and those recognised
// more often with synthetic templates (helped) and less often (hurt).
func total(outcomes []outcome) (sum outcome, takes, helped, hurt int) {
	for _, o := range outcomes {
		sum.tested += o.tested
		sum.recorded += o.recorded
		sum.synthetic += o.synthetic
		if o.tested > 0 {
			takes++
		}
		if o.synthetic < o.recorded {
			helped++
		}
		if o.synthetic > o.recorded {
			hurt++
		}
	}
	return sum, takes, helped, hurt
}

// perLabel adds up outcomes by label, in order of the label's name; labels
// never tested are left out.
func perLabel(takes []*channels.Take, outcomes []outcome, synthetic bool) []LabelResult {
	var out []LabelResult
	for _, pool := range byLabel(takes) {
		sum := LabelResult{Label: takes[pool[0]].Label}
		with := 0
		for _, i := range pool {
			sum.Tested += outcomes[i].tested
			sum.Recorded += outcomes[i].recorded
			with += outcomes[i].synthetic
		}
		if synthetic {
			sum.Synthetic = &with
		}
		if sum.Tested > 0 {
			out = append(out, sum)
		}
	}
	return out
}

// decimals rounds a share to four decimals.
func decimals(v float64) float64 { return math.Round(v*1e4) / 1e4 }

// figures rounds v, at least 0, to n significant figures.
func figures(v float64, n int) float64 {
	if v == 0 {
		return 0
	}
	scale := math.Pow(10, float64(n-1)-math.Floor(math.Log10(v)))
	return math.Round(v*scale) / scale
}
