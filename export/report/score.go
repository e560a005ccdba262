package report

import "cmp"

// Score is a score as the file score.json holds it: its JSON can be read into
// this type. Fields that the page does not show are left out.
type Score struct {
	Protocol   string   `json:"protocol"`
	TestShare  float64  `json:"test_share"` // share tested in each split; 0 when it is one at a time
	Normalise  string   `json:"normalise"`
	Band       float64  `json:"band"`
	Seed       uint64   `json:"seed"`
	PerTake    int      `json:"per_take"` // synthetic takes per recorded one
	LabelNames []string `json:"label_names"`
	Takes      int      `json:"takes"`
	Resampled  string   `json:"resampled"` // what bootstrap intervals resample
	// Results holds, per learner and takes per label, one for recorded takes and
	// then one for each method.
	Results    []Result  `json:"results"`
	Overall    []Overall `json:"overall"` // per learner and method, over all takes per label; the first method is the one chosen
	Verdict    string    `json:"verdict"`
	Notes      []string  `json:"notes"`
	Unfinished bool      `json:"unfinished"`
}

// Result is what one learner achieved with one kind of takes to learn from.
type Result struct {
	Distance      string        `json:"distance"` // of a nearest-template learner
	Learner       string        `json:"learner"`  // of any other, its name
	TakesPerLabel *int          `json:"takes_per_label"`
	Method        string        `json:"method"` // "none" for recorded takes alone
	Tested        int           `json:"tested"`
	Errors        int           `json:"errors"`
	Error         float64       `json:"error"`
	Low           float64       `json:"low"` // 95 % interval of the error
	High          float64       `json:"high"`
	Reduction     *float64      `json:"reduction"` // share of the errors saved; nil for recorded takes
	ReductionLow  *float64      `json:"reduction_low"`
	ReductionHigh *float64      `json:"reduction_high"`
	P             *float64      `json:"p"`
	Finding       string        `json:"finding"`
	PerLabel      []LabelResult `json:"per_label"`
	Confusion     [][]int       `json:"confusion"` // tests by label performed and recognised, in the order of the label names
	Curve         []CurvePoint  `json:"curve"`
	Rejection     *Rejection    `json:"rejection"`
}

// Overall compares one method with recorded takes alone.
type Overall struct {
	Distance      string   `json:"distance"`
	Learner       string   `json:"learner"`
	Method        string   `json:"method"`
	Tested        int      `json:"tested"`
	Recorded      int      `json:"errors_recorded"`
	Errors        int      `json:"errors_with_synthetic"`
	Error         float64  `json:"error"`
	Low           float64  `json:"low"`
	High          float64  `json:"high"`
	Reduction     *float64 `json:"reduction"`
	ReductionLow  *float64 `json:"reduction_low"`
	ReductionHigh *float64 `json:"reduction_high"`
	P             *float64 `json:"p"`
	Finding       string   `json:"finding"`
}

// LabelResult counts the errors on the takes of one label.
type LabelResult struct {
	Label     string   `json:"label"`
	Tested    int      `json:"tested"`
	Recorded  int      `json:"errors_recorded"`
	Synthetic *int     `json:"errors_with_synthetic"`
	P         *float64 `json:"p_holm"`
	Finding   string   `json:"finding"`
}

// CurvePoint is a result with fewer synthetic takes per recorded one.
type CurvePoint struct {
	PerTake int     `json:"per_take"`
	Error   float64 `json:"error"`
	Low     float64 `json:"low"`
	High    float64 `json:"high"`
}

// Rejection is the distance beyond which a movement counts as no gesture.
type Rejection struct {
	Threshold float64 `json:"threshold"`
	Error     float64 `json:"error"` // equal error rate
	Low       float64 `json:"low"`
	High      float64 `json:"high"`
}

// Harm is what an inner validation on training takes found, as its JSON has it.
type Harm struct {
	LeftOut string      `json:"left_out"` // "subjects" or "takes"
	PerTake int         `json:"per_take"`
	Labels  []LabelHarm `json:"labels"`
}

// LabelHarm is what growing does to one label for one learner.
type LabelHarm struct {
	Learner   string  `json:"learner"`
	Label     string  `json:"label"`
	Tested    int     `json:"tested"`
	Recorded  int     `json:"recorded"`
	Synthetic int     `json:"synthetic"`
	Gain      float64 `json:"gain"` // errors saved, as a share of the takes tested
	Low       float64 `json:"low"`
	High      float64 `json:"high"`
	P         float64 `json:"p"`
	Finding   string  `json:"finding"`
}

// recordedOnly is the method of a result of recorded takes alone.
const recordedOnly = "none"

// learner returns what the page calls the learner of a result.
func (r Result) learner() string { return cmp.Or(r.Learner, r.Distance) }

func (o Overall) learner() string { return cmp.Or(o.Learner, o.Distance) }

// method returns the method that the verdict is about: the first compared, or
// else the first there is.
func (s *Score) method() string {
	if len(s.Overall) > 0 {
		return s.Overall[0].Method
	}
	for _, r := range s.Results {
		if r.Method != recordedOnly {
			return r.Method
		}
	}
	return recordedOnly
}

// learners lists the learners in order.
func (s *Score) learners() []string {
	var out []string
	for _, r := range s.Results {
		if n := len(out); n == 0 || out[n-1] != r.learner() {
			out = append(out, r.learner())
		}
	}
	return out
}

// results lists the results of one learner and method in order.
func (s *Score) results(learner, method string) []Result {
	var out []Result
	for _, r := range s.Results {
		if r.learner() == learner && r.Method == method {
			out = append(out, r)
		}
	}
	return out
}

// last returns the result of the first learner and the chosen method with the
// most takes per label, and the one of recorded takes beside it. Labels and
// confusions are shown for these.
func (s *Score) last() (before, after Result, ok bool) {
	learners := s.learners()
	if len(learners) == 0 {
		return before, after, false
	}
	with, without := s.results(learners[0], s.method()), s.results(learners[0], recordedOnly)
	if len(with) == 0 || len(without) == 0 {
		return before, after, false
	}
	return without[len(without)-1], with[len(with)-1], true
}
