package main

import (
	"errors"
	"fmt"
	"time"

	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
)

func newScore(s Streams) *cobra.Command {
	plan, file, asJSON := job.NewPlan(), "", false
	c := &cobra.Command{
		Use:   "score [RECORDING …]",
		Short: "Score recognisers with and without synthetic takes",
		Long: `Score tells how many takes kept apart a recogniser gets wrong, taught with
recorded takes alone and with synthetic ones added, and how sure the difference
is. Synthetic takes are only ever made from takes that train in the same split.
It writes no files. The last line says whether synthetic takes help, hurt, or
show no difference. Interrupted, it prints what it had.`,
		Example: `  strandwise score train.csv test.csv --rate 50 --protocol given --distance dtw-dependent --band 0.1
  strandwise score recordings --protocol pooled --takes-per-label 1,2,3,5 --repeats 20 --learner both --compare`,
		RunE: command(func(c *cobra.Command, args []string) error {
			if err := plan.Load(file, c.Flags(), args); err != nil {
				return err
			}
			began := time.Now()
			report, err := plan.Score(c.Context(), s.In, newBar(s), noticeTo(s.Err))
			if report == nil {
				return err
			}
			if asJSON {
				return errors.Join(printJSON(s.Out, report), err)
			}
			fmt.Fprintf(s.Err, "read and scored in %.1f s\n", time.Since(began).Seconds())
			printScore(s.Out, report)
			return err
		}),
	}
	plan.ReadFlags(c.Flags())
	plan.MakeFlags(c.Flags())
	plan.ScoreFlags(c.Flags())
	plan.WorkFlags(c.Flags())
	planFlags(c, &file, &asJSON)
	return c
}
