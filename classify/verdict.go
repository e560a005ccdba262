package classify

import (
	"fmt"
	"strconv"
	"strings"
)

// Finding is what a comparison shows.
type Finding string

// The findings. A difference counts as shown when its p is below 0.05, and the
// 95 % interval of the reduction lies on the same side of 0 as the reduction.
const (
	Helps        Finding = "helps"
	Hurts        Finding = "hurts"
	NoDifference Finding = "no difference shown"
)

// significance is the p below which a difference counts as shown.
const significance = 0.05

// find names what a comparison shows from its p, the errors saved and the
// interval of the reduction.
func find(p float64, gain int, reduction bounds) Finding {
	switch {
	case p >= significance:
	case gain > 0 && reduction.low > 0:
		return Helps
	case gain < 0 && reduction.high < 0:
		return Hurts
	}
	return NoDifference
}

// findLabel names what a corrected p and the errors saved show of one label.
func findLabel(p float64, gain int) Finding {
	switch {
	case p < significance && gain > 0:
		return Helps
	case p < significance && gain < 0:
		return Hurts
	}
	return NoDifference
}

// verdict says in one sentence what a report shows. The first learner and the
// first method decide, so that trying more of either does not make a finding
// likelier; the other learners follow.
func (r *run) verdict(p *Report) string {
	if len(p.Overall) == 0 {
		x := p.Results[0]
		return fmt.Sprintf("Recorded takes alone give %s errors of %d in %d tests (%s); no synthetic takes were made.",
			title(x.Distance, x.Learner), x.Errors, x.Tested, percent("error", x.Error, &x.Low, &x.High))
	}
	var b strings.Builder
	fmt.Fprintf(&b, "%s: ", r.lead(p.Overall[0].Finding))
	if k := r.counts(); k != "" {
		fmt.Fprintf(&b, "over %s takes per label, ", k)
	}
	b.WriteString(clause(p.Overall[0]))
	for i := len(r.methods); i < len(p.Overall); i += len(r.methods) {
		fmt.Fprintf(&b, "; %s %s", aside(p.Overall[i].Finding), clause(p.Overall[i]))
	}
	if p.Unfinished {
		b.WriteString("; interrupted before all splits were scored")
	}
	return b.String() + "."
}

// lead opens a verdict.
func (r *run) lead(f Finding) string {
	what := "Synthetic takes"
	if len(r.methods) > 1 {
		what += " of " + r.methods[0].Name
	}
	switch f {
	case Helps:
		return what + " help"
	case Hurts:
		return what + " hurt"
	}
	if len(r.methods) > 1 {
		return "No difference shown by " + r.methods[0].Name
	}
	return "No difference shown"
}

// aside opens what a verdict says of a further learner.
func aside(f Finding) string {
	switch f {
	case Helps:
		return "they help"
	case Hurts:
		return "they hurt"
	}
	return "no difference shown"
}

// counts lists the takes per label a verdict sums up, when there are several.
func (r *run) counts() string {
	var out []string
	for _, k := range r.numbers() {
		if n := r.takesPerLabel(k); n != nil {
			out = append(out, strconv.Itoa(*n))
		} else {
			out = append(out, "half of all")
		}
	}
	if len(out) < 2 {
		return ""
	}
	return strings.Join(out[:len(out)-1], ", ") + " and " + out[len(out)-1]
}

// clause says what one learner made of the synthetic takes.
func clause(o Overall) string {
	change := percent("error", o.Error, &o.Low, &o.High)
	if o.Reduction != nil {
		change = percent("reduction", *o.Reduction, o.ReductionLow, o.ReductionHigh)
	}
	return fmt.Sprintf("with %s, %d errors in %d tests become %d (%s, p = %.2g)",
		title(o.Distance, o.Learner), o.Recorded, o.Tested, o.Errors, change, *o.P)
}

// percent writes a share with its interval.
func percent(what string, share float64, low, high *float64) string {
	if low == nil {
		return fmt.Sprintf("%s %.1f %%, 95 %% interval up to %.1f %%", what, 100*share, 100**high)
	}
	return fmt.Sprintf("%s %.1f %%, 95 %% interval %.1f to %.1f %%", what, 100*share, 100**low, 100**high)
}
