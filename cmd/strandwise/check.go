package main

import (
	"fmt"
	"io"
	"maps"
	"slices"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
	"strandwise/ingest"
)

func newCheck(s Streams) *cobra.Command {
	plan, file, asJSON := job.NewPlan(), "", false
	c := &cobra.Command{
		Use:   "check [RECORDING …]",
		Short: "Report what recordings hold and what is wrong with them",
		Long: `Check reads recordings and reports clocks, gaps, units, ranges, and how evenly
labels and people are represented. It writes nothing. Exit code 1 means that
grow would refuse the recordings as they are.`,
		Example: `  strandwise check recordings --pattern '{subject}/{label}_{session}_{take}.csv'
  strandwise check log.csv --unit 'ax,ay,az=g' --repair clock,duplicates`,
		RunE: command(func(c *cobra.Command, args []string) error {
			if err := plan.Load(file, c.Flags(), args); err != nil {
				return err
			}
			report, err := plan.Check(s.In, newBar(s))
			if err != nil {
				return err
			}
			if asJSON {
				err = printJSON(s.Out, report)
			} else {
				printReport(s.Out, report)
			}
			if err == nil && report.Faults > 0 {
				err = fmt.Errorf("grow would refuse these recordings: %s", count(report.Faults, "fault"))
			}
			return err
		}),
	}
	plan.ReadFlags(c.Flags())
	planFlags(c, &file, &asJSON)
	return c
}

// Of long lists only so many lines are printed; --json has them all.
const (
	mostFiles    = 40
	mostFindings = 60
)

func printReport(w io.Writer, r *ingest.Report) {
	printFiles(w, r.Files)
	printLabels(w, r.Labels)
	for _, n := range r.Notices {
		fmt.Fprintf(w, "note: %s\n", n)
	}
	printFindings(w, r.Findings)
	printRepairs(w, r.Repairs)
	looks := len(r.Findings) - r.Faults
	switch {
	case r.Faults > 0:
		fmt.Fprintf(w, "verdict: grow would refuse these recordings: %s", count(r.Faults, "fault"))
	default:
		fmt.Fprint(w, "verdict: grow would take these recordings")
	}
	if looks > 0 {
		fmt.Fprintf(w, "; %s to look at", count(looks, "other thing"))
	}
	fmt.Fprintln(w)
}

func printFiles(w io.Writer, files []ingest.FileReport) {
	// Files that hold no takes by their nature, beside those that do.
	files = slices.DeleteFunc(slices.Clone(files), func(f ingest.FileReport) bool { return f.Takes == 0 && f.Faults == 0 })
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintln(t, "file\ttakes\tframes\tseconds\trate Hz\tjitter ms (median, 99 %)\tgaps\tfaults")
	for i, f := range files {
		if i == mostFiles {
			fmt.Fprintf(t, "… and %d more\n", len(files)-i)
			break
		}
		fmt.Fprintf(t, "%s\t%d\t%d\t%.1f\t%.4g\t%.2f, %.2f\t%d\t%d\n", f.File, f.Takes, f.Frames, f.Seconds, f.Rate, 1e3*f.Jitter, 1e3*f.Jitter99, f.Gaps, f.Faults)
	}
	t.Flush()
}

// printLabels prints a table of labels by subjects: takes, and seconds in all.
func printLabels(w io.Writer, cells []ingest.LabelCount) {
	if len(cells) == 0 {
		return
	}
	takes, seconds := map[[2]string]int{}, map[string]float64{}
	people := map[string]bool{}
	for _, c := range cells {
		takes[[2]string{c.Label, c.Subject}] += c.Takes
		seconds[c.Label] += c.Seconds
		people[c.Subject] = true
	}
	subjects := slices.Sorted(maps.Keys(people))
	fmt.Fprintln(w)
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprint(t, "takes of label")
	for _, s := range subjects {
		if s == "" {
			s = "(no subject)"
		}
		fmt.Fprintf(t, "\t%s", s)
	}
	fmt.Fprintln(t, "\tseconds")
	for _, label := range slices.Sorted(maps.Keys(seconds)) {
		fmt.Fprint(t, label)
		for _, s := range subjects {
			fmt.Fprintf(t, "\t%d", takes[[2]string{label, s}])
		}
		fmt.Fprintf(t, "\t%.1f\n", seconds[label])
	}
	t.Flush()
	fmt.Fprintln(w)
}

func printFindings(w io.Writer, findings []ingest.Finding) {
	for i, f := range findings {
		if i == mostFindings {
			fmt.Fprintf(w, "… and %d more; --json lists all\n", len(findings)-i)
			return
		}
		if f.Kind == ingest.Refused {
			fmt.Fprintf(w, "%s: %s\n", f.Kind, f.Text)
			continue
		}
		fmt.Fprintf(w, "%s: %s\n", f.Kind, describe(f))
	}
}

// describe tells a finding: where, how often, what, and where first.
func describe(f ingest.Finding) string {
	out := ""
	for _, part := range []string{f.File, f.Channel} {
		if part != "" {
			out += part + ": "
		}
	}
	if f.Kind == ingest.Twice {
		return out + fmt.Sprintf("take %s %s", f.Take, f.Text)
	}
	if f.Count > 1 {
		out += fmt.Sprintf("%d ", f.Count)
	}
	out += f.Text
	if f.Take == "" {
		return out
	}
	at := "take " + f.Take
	if f.Line > 0 {
		at = fmt.Sprintf("line %d, %s", f.Line, at)
	}
	if f.Takes > 1 {
		return fmt.Sprintf("%s (in %d takes, first at %s)", out, f.Takes, at)
	}
	return fmt.Sprintf("%s (%s)", out, at)
}

// printRepairs prints what was repaired, if anything was allowed to be.
func printRepairs(w io.Writer, r ingest.Repairs) {
	if r.Recordings == 0 && r.Cuts == 0 {
		return
	}
	fmt.Fprintf(w, "repaired: %s onto a uniform clock; frames %d moved, %d sorted, %d merged, %d made to fill %s, %d left out; %s filled; %s; %s brought to another rate; %s cut\n",
		count(r.Recordings, "recording"), r.Moved, r.Sorted, r.Merged, r.Made, count(r.Gaps, "gap"), r.LeftOut,
		count(r.Values, "value"), count(r.Splits, "split"), count(r.Rates, "sensor"), count(r.Cuts, "take"))
}

// count writes a number with its noun.
func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}
