package main

import (
	"fmt"
	"io"
	"strings"

	"strandwise/augment/gate"
	"strandwise/classify"
	"strandwise/classify/realism"
)

// printDraws tells what the gates said of the draws.
func printDraws(w io.Writer, tallies map[string]int64) {
	checked, wanted, made := tallies["draws checked"], tallies["takes wanted"], tallies["takes made"]
	if checked > 0 {
		var failed []string
		for _, g := range gate.All() {
			if n := tallies[g.String()]; n > 0 {
				failed = append(failed, fmt.Sprintf("%s %d", g, n))
			}
		}
		if len(failed) == 0 {
			failed = []string{"none"}
		}
		fmt.Fprintf(w, "gates: %d draws checked; failed: %s\n", checked, strings.Join(failed, ", "))
	}
	if n := tallies["takes dropped by a person"]; n > 0 {
		fmt.Fprintf(w, "left out because a person dropped them: %d\n", n)
	}
	if made < wanted {
		fmt.Fprintf(w, "short of %d takes: draws kept failing the gates, or the method can make nothing of a take\n", wanted-made)
	}
}

// printHarm tells what growing does to labels, on training takes left out.
func printHarm(w io.Writer, h *classify.Harm) {
	if h == nil {
		return
	}
	fmt.Fprintf(w, "\non training %s left out in turn:\n", h.LeftOut)
	for _, l := range h.Overall {
		fmt.Fprintf(w, "  %s: %d errors in %d become %d (%s)\n", l.Learner, l.Recorded, l.Tested, l.Synthetic, l.Finding)
	}
	for _, l := range h.Labels {
		if l.Finding == classify.Hurts {
			fmt.Fprintf(w, "  %s hurts %s: %d errors in %d become %d; --spare %s leaves it as recorded\n", l.Learner, l.Label, l.Recorded, l.Tested, l.Synthetic, l.Label)
		}
	}
}

// printRealism tells how much like recorded takes the synthetic ones are.
func printRealism(w io.Writer, r *realism.Report) {
	if r == nil {
		return
	}
	if r.Spread != nil {
		fmt.Fprintf(w, "distance to the label's medoid: recorded and synthetic takes differ by %.0f %% of the recorded spread\n", 100*r.Spread.Wasserstein)
	}
	if t := r.Together; t != nil {
		fmt.Fprintf(w, "a classifier tells synthetic from recorded takes in %.0f %% of cases (%.0f to %.0f; 50 is ideal)\n", 100*t.Accuracy, 100*t.Low, 100*t.High)
	}
}
