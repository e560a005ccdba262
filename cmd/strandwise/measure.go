package main

import (
	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
)

func newMeasure(s Streams) *cobra.Command {
	plan, file, asJSON, labels := job.NewPlan(), "", false, false
	c := &cobra.Command{
		Use:   "measure [RECORDING …]",
		Short: "Measure how recorded takes of one label differ",
		Long: `Measure aligns pairs of recorded takes of one label and tells how they differ:
in timing, in where they begin and end, in duration, size, orientation and shape,
in the noise of sensors at rest, and how far limbs share their timing. Takes that
are held out or of the test split are not measured. Figures that are defaults for
want of data say so. It writes nothing; with --json it prints a file that --variation
of grow, score and measure reads.`,
		Example: `  strandwise measure recordings --pattern '{subject}/{label}_{session}_{take}.csv'
  strandwise measure train.csv --rate 50 --json > variation.json`,
		RunE: command(func(c *cobra.Command, args []string) error {
			if err := plan.Load(file, c.Flags(), args); err != nil {
				return err
			}
			m, err := plan.Measure(c.Context(), s.In, newBar(s), noticeTo(s.Err))
			if err != nil {
				return err
			}
			if asJSON {
				return m.Write(s.Out)
			}
			return m.Table(s.Out, labels)
		}),
	}
	plan.ReadFlags(c.Flags())
	plan.MakeFlags(c.Flags())
	c.Flags().BoolVar(&labels, "labels", false, "print the figures of each label too")
	planFlags(c, &file, &asJSON)
	return c
}
