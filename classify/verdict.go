package classify

import (
	"fmt"
	"strings"
)

// significance is the p below which a difference counts as shown.
const significance = 0.05

// verdict says in one sentence what the results show. The first distance
// decides, so that trying more distances does not make a finding likelier; the
// others follow.
func verdict(results []Result) string {
	if len(results) < 2 || results[1].Origin != FromSynthetic {
		r := results[0]
		return fmt.Sprintf("Recorded takes alone give %s errors of %d in %d tests (%s); no synthetic takes were made.", r.Distance, r.Errors, r.Tested, interval(r))
	}
	var b strings.Builder
	fmt.Fprintf(&b, "%s: %s", finding(results[0], results[1]), comparison(results[0], results[1]))
	for i := 3; i < len(results); i += 2 {
		fmt.Fprintf(&b, "; %s %s", lowerFirst(finding(results[i-1], results[i])), comparison(results[i-1], results[i]))
	}
	return b.String() + "."
}

// finding names what a comparison shows: a difference counts when it is
// significant over the takes and of the same sense over the tests.
func finding(recorded, with Result) string {
	switch {
	case *with.P < significance && *with.Helped > *with.Hurt && with.Errors < recorded.Errors:
		return "Synthetic takes help"
	case *with.P < significance && *with.Helped < *with.Hurt && with.Errors > recorded.Errors:
		return "Synthetic takes hurt"
	}
	return "No difference shown"
}

func lowerFirst(s string) string { return strings.ToLower(s[:1]) + s[1:] }

func comparison(recorded, with Result) string {
	return fmt.Sprintf("with %s, %d errors in %d tests become %d (%s, p = %.2g)",
		with.Distance, recorded.Errors, recorded.Tested, with.Errors, interval(with), *with.P)
}

func interval(r Result) string {
	return fmt.Sprintf("error %.1f %%, 95 %% interval %.1f to %.1f %%", 100*r.Error, 100*r.Low, 100*r.High)
}
