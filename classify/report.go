package classify

import (
	"math"

	"strandwise/classify/template"
)

// Level is the level of the intervals in a report.
const Level = 0.95

// Report is what a score found, ready to be written as JSON; the package
// comment describes the format.
type Report struct {
	Protocol   Protocol           `json:"protocol"`
	TestShare  float64            `json:"test_share,omitempty"` // share tested in each split; absent when it is one at a time
	Normalise  template.Normalise `json:"normalise"`
	Band       float64            `json:"band"`
	Weights    map[string]float64 `json:"weights,omitempty"` // of channel groups; absent when distances treat all channels as one
	Seed       uint64             `json:"seed"`
	PerTake    int                `json:"per_take"`
	Labels     int                `json:"labels"`
	LabelNames []string           `json:"label_names"` // sorted
	Takes      int                `json:"takes"`
	Resampled  string             `json:"resampled"` // what bootstrap intervals resample
	// Results holds, per learner and takes per label, one for recorded takes,
	// then one for each method with its synthetic takes added, the best first.
	Results []Result `json:"results"`
	// Overall holds one comparison per learner and method over all takes per
	// label; the verdict speaks of these. It is empty without synthetic takes.
	Overall    []Overall `json:"overall"`
	Verdict    string    `json:"verdict"`              // one plain sentence
	Notes      []string  `json:"notes"`                // what a reader should know before believing it
	Unfinished bool      `json:"unfinished,omitempty"` // the score was interrupted, and speaks of the splits done by then
}

// Origins of the takes behind a result.
const (
	FromRecorded  = "recorded"
	FromSynthetic = "recorded+synthetic"
)

// Result is what one learner achieved with one kind of takes to learn from.
// Shares are rounded to four decimals, p to four figures.
type Result struct {
	Distance      template.Distance `json:"distance,omitempty"` // of a nearest-template learner
	Learner       string            `json:"learner,omitempty"`  // of any other, its name
	TakesPerLabel *int              `json:"takes_per_label"`    // null where the protocol does not set it
	Origin        string            `json:"origin"`             // of what it learned from: FromRecorded or FromSynthetic
	Method        string            `json:"method"`             // that made the synthetic takes, or "none"
	Repeats       int               `json:"repeats"`            // how often splits were drawn
	Takes         int               `json:"takes"`              // different takes tested
	Tested        int               `json:"tested"`             // tests, over all splits
	Errors        int               `json:"errors"`
	Accuracy      float64           `json:"accuracy"`
	Error         float64           `json:"error"`
	// Low and High bound the error: Wilson's 95 % interval, or where takes are
	// tested several times, the bootstrap interval over what Resampled says.
	Low  float64 `json:"low"`
	High float64 `json:"high"`
	Comparison
	PerLabel    []LabelResult `json:"per_label"`
	Confusion   [][]int       `json:"confusion"`           // tests by label performed and label recognised, in the order of the label names
	Curve       []CurvePoint  `json:"curve,omitempty"`     // smaller numbers of synthetic takes, ascending
	Rejection   *Rejection    `json:"rejection,omitempty"` // absent unless asked for, and for learners that measure no distance
	Comparisons int64         `json:"comparisons"`         // pairs of takes held against each other; 0 for learners that have no templates
	Cells       int64         `json:"cells"`               // cells of DTW tables, or pairs of frames, a plain program computes for them
}

// Comparison holds recorded takes with synthetic ones against recorded takes
// alone. All is absent for recorded takes.
type Comparison struct {
	Finding Finding `json:"finding,omitempty"`
	// Reduction is the share of the errors with recorded takes that the
	// synthetic ones save, negative when they add errors; absent when there was
	// no error to save. ReductionLow and ReductionHigh are its 95 % paired
	// bootstrap interval; where takes are tested once, or no resample differs from
	// another, widened to hold the one that Wilson's intervals give (see
	// statistic.Reduction). The lower limit is absent when resamples set none.
	Reduction     *float64 `json:"reduction,omitempty"`
	ReductionLow  *float64 `json:"reduction_low,omitempty"`
	ReductionHigh *float64 `json:"reduction_high,omitempty"`
	// Helped and Hurt count the takes recognised more often with the synthetic
	// takes and less often, over all splits.
	Helped *int `json:"helped,omitempty"`
	Hurt   *int `json:"hurt,omitempty"`
	// P is the two-sided p of the difference: McNemar's exact one of Helped
	// against Hurt when each take is tested once; else the larger one of exact
	// sign-flip tests over units and over splits.
	P *float64 `json:"p,omitempty"`
}

// LabelResult counts the errors on the takes of one label.
type LabelResult struct {
	Label     string `json:"label"`
	Tested    int    `json:"tested"`
	Recorded  int    `json:"errors_recorded"`
	Synthetic *int   `json:"errors_with_synthetic,omitempty"` // absent for recorded takes
	// P is the p of the difference on this label, corrected by Holm's method for
	// the number of labels; absent for recorded takes.
	P       *float64 `json:"p_holm,omitempty"`
	Finding Finding  `json:"finding,omitempty"`
}

// CurvePoint is a result with fewer synthetic takes per recorded one.
type CurvePoint struct {
	PerTake       int      `json:"per_take"`
	Errors        int      `json:"errors"`
	Error         float64  `json:"error"`
	Low           float64  `json:"low"`
	High          float64  `json:"high"`
	Reduction     *float64 `json:"reduction,omitempty"`
	ReductionLow  *float64 `json:"reduction_low,omitempty"`
	ReductionHigh *float64 `json:"reduction_high,omitempty"`
}

// Overall compares one method with recorded takes alone over all numbers of
// takes per label.
type Overall struct {
	Distance template.Distance `json:"distance,omitempty"`
	Learner  string            `json:"learner,omitempty"`
	Method   string            `json:"method"`
	Tested   int               `json:"tested"`
	Recorded int               `json:"errors_recorded"`
	Errors   int               `json:"errors_with_synthetic"`
	Error    float64           `json:"error"` // with synthetic takes, in Low to High
	Low      float64           `json:"low"`
	High     float64           `json:"high"`
	Comparison
}

// title returns what a text calls the learner of a result.
func title(distance template.Distance, learner string) string {
	if learner != "" {
		return learner
	}
	return string(distance)
}

// decimals rounds a share to four decimals.
func decimals(v float64) float64 { return math.Round(v*1e4)/1e4 + 0 }

// figures rounds v, at least 0, to n significant figures.
func figures(v float64, n int) float64 {
	if v == 0 {
		return 0
	}
	scale := math.Pow(10, float64(n-1)-math.Floor(math.Log10(v)))
	return math.Round(v*scale) / scale
}
