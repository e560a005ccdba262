package main

import (
	"fmt"
	"io"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"strandwise/classify"
	"strandwise/cmd/internal/job"
)

func newScore(s Streams) *cobra.Command {
	plan, file, asJSON := job.NewPlan(), "", false
	c := &cobra.Command{
		Use:   "score [RECORDING …]",
		Short: "Score nearest templates with and without synthetic takes",
		Long: `Score tells how many takes kept apart a nearest-template recogniser gets wrong,
with recorded templates alone and with synthetic ones added. Synthetic takes are
only ever made from takes that train in the same split. It writes no files.`,
		Example: `  strandwise score train.csv test.csv --rate 50 --protocol given --distance dtw-dependent --band 0.1`,
		RunE: command(func(c *cobra.Command, args []string) error {
			if err := plan.Load(file, c.Flags(), args); err != nil {
				return err
			}
			report, err := plan.Score(c.Context(), s.In, newBar(s), noticeTo(s.Err))
			if err != nil {
				return err
			}
			if asJSON {
				return printJSON(s.Out, report)
			}
			printScore(s.Out, report)
			return nil
		}),
	}
	plan.ReadFlags(c.Flags())
	plan.MakeFlags(c.Flags())
	plan.ScoreFlags(c.Flags())
	plan.WorkFlags(c.Flags())
	planFlags(c, &file, &asJSON)
	return c
}

// printScore prints a report as a table, its notes and its verdict.
func printScore(w io.Writer, r *classify.Report) {
	fmt.Fprintf(w, "\nscore: protocol %s, %d labels, normalise %s, band %g, seed %d\n", r.Protocol, r.Labels, r.Normalise, r.Band, r.Seed)
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintln(t, "distance\ttemplates\ttested\terrors\terror %\t95 % interval\tsaved %\tp")
	for _, x := range r.Results {
		saved, p := "", ""
		if x.Reduction != nil {
			saved = fmt.Sprintf("%.0f", 100**x.Reduction)
		}
		if x.P != nil {
			p = fmt.Sprintf("%.2g", *x.P)
		}
		fmt.Fprintf(t, "%s\t%s\t%d\t%d\t%.1f\t%.1f – %.1f\t%s\t%s\n", x.Distance, x.Origin, x.Tested, x.Errors, 100*x.Error, 100*x.Low, 100*x.High, saved, p)
	}
	t.Flush()
	for _, n := range r.Notes {
		fmt.Fprintf(w, "note: %s\n", n)
	}
	fmt.Fprintf(w, "%s\n", r.Verdict)
}
