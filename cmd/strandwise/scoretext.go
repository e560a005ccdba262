package main

import (
	"fmt"
	"io"
	"strings"
	"text/tabwriter"

	"strandwise/classify"
)

// printScore prints a report: a table with a row per result, what is behind it
// where that was asked for or stands out, the notes, and the verdict last.
func printScore(w io.Writer, r *classify.Report) {
	fmt.Fprintf(w, "\nscore: protocol %s, %d labels, normalise %s, band %g, seed %d, %d synthetic takes per recorded one\n",
		r.Protocol, r.Labels, r.Normalise, r.Band, r.Seed, r.PerTake)
	printResults(w, r.Results)
	printLabelFindings(w, r.Results)
	printCurves(w, r.Results, r.PerTake)
	for _, n := range r.Notes {
		fmt.Fprintf(w, "note: %s\n", n)
	}
	fmt.Fprintf(w, "%s\n", r.Verdict)
}

// printResults prints the table of results. Intervals are of 95 %.
func printResults(w io.Writer, results []classify.Result) {
	reject := false
	for _, x := range results {
		reject = reject || x.Rejection != nil
	}
	head, t := "learner\tper label\tlearns from\ttested\terrors\terror %\tinterval\tsaved %\tinterval\tp\t", tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	if reject {
		head += "reject beyond\twrong %\t"
	}
	fmt.Fprintln(t, head)
	for _, x := range results {
		from, p := x.Method, ""
		if x.Origin == classify.FromRecorded {
			from = x.Origin
		}
		fmt.Fprintf(t, "%s\t%s\t%s\t%d\t%d\t%.1f\t%.1f – %.1f\t", learner(x), perLabel(x), from, x.Tested, x.Errors, 100*x.Error, 100*x.Low, 100*x.High)
		if x.P != nil {
			p = fmt.Sprintf("%.2g", *x.P)
			fmt.Fprintf(t, "%s\t%s – %s", share(x.Reduction), share(x.ReductionLow), share(x.ReductionHigh))
		} else {
			fmt.Fprint(t, "\t")
		}
		fmt.Fprintf(t, "\t%s\t", p)
		if reject {
			fmt.Fprint(t, rejection(x))
		}
		fmt.Fprintln(t, x.Finding)
	}
	t.Flush()
	if reject {
		fmt.Fprintln(w, "(reject beyond: the distance at which as many gestures are refused as other movements taken for one; wrong: how many that is)")
	}
}

// rejection is the threshold of a result and its equal error rate, two cells
// of the table.
func rejection(x classify.Result) string {
	if x.Rejection == nil {
		return "\t\t"
	}
	return fmt.Sprintf("%.4g\t%.1f\t", x.Rejection.Threshold, 100*x.Rejection.Error)
}

// printLabelFindings names the labels on which synthetic takes show a
// difference.
func printLabelFindings(w io.Writer, results []classify.Result) {
	for _, x := range results {
		found := map[classify.Finding][]string{}
		for _, l := range x.PerLabel {
			found[l.Finding] = append(found[l.Finding], l.Label)
		}
		for _, f := range []classify.Finding{classify.Helps, classify.Hurts} {
			if labels := found[f]; len(labels) > 0 {
				fmt.Fprintf(w, "%s %s %s (%s%s; p below 0.05 after Holm's correction)\n", x.Method, f, strings.Join(labels, ", "), learner(x), trained(x))
			}
		}
	}
}

// printCurves prints the results with fewer synthetic takes.
func printCurves(w io.Writer, results []classify.Result, perTake int) {
	for _, x := range results {
		if len(x.Curve) == 0 {
			continue
		}
		var points []string
		for _, p := range x.Curve {
			points = append(points, fmt.Sprintf("%d: %.1f", p.PerTake, 100*p.Error))
		}
		if last := x.Curve[len(x.Curve)-1]; last.PerTake < perTake {
			points = append(points, fmt.Sprintf("%d: %.1f", perTake, 100*x.Error))
		}
		fmt.Fprintf(w, "error %% by synthetic takes per recorded one, %s, %s%s: %s\n", x.Method, learner(x), trained(x), strings.Join(points, ", "))
	}
}

func learner(x classify.Result) string {
	if x.Learner != "" {
		return x.Learner
	}
	return string(x.Distance)
}

// perLabel is the number of recorded takes per label, a dash where the
// protocol does not set it.
func perLabel(x classify.Result) string {
	if x.TakesPerLabel == nil {
		return "-"
	}
	return fmt.Sprint(*x.TakesPerLabel)
}

func trained(x classify.Result) string {
	if x.TakesPerLabel == nil {
		return ""
	}
	return fmt.Sprintf(", %d per label", *x.TakesPerLabel)
}

// share writes a share as a percentage, a dash when there is none.
func share(v *float64) string {
	if v == nil {
		return "-"
	}
	return fmt.Sprintf("%.1f", 100**v)
}
