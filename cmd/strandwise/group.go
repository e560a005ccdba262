package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
)

func newGroup(s Streams) *cobra.Command {
	plan, file, asJSON := job.NewPlan(), "", false
	write, merge := false, 0.0
	c := &cobra.Command{
		Use:   "group [RECORDING …]",
		Short: "Propose which channels move together, with the evidence",
		Long: `Group proposes channel groups, each a trajectory of its own, and limbs, whose
groups share their timing. It goes by the names of channels, by geometry (the
skeleton, points that keep their distance, sensors that turn together), and by
how far timing and size of two limbs' movements depend on each other from take to
take, once every take is aligned to its label's most typical one. With too few
takes to tell it says how many are needed, and goes by names and geometry alone.`,
		Example: `  strandwise group recordings --pattern '{subject}/{label}_{session}_{take}.csv'
  strandwise group --plan plan.toml --write`,
		RunE: command(func(c *cobra.Command, args []string) error {
			if err := plan.Load(file, c.Flags(), args); err != nil {
				return err
			}
			if write && file == "" {
				return &job.UsageError{Where: "--write", Problem: "there is no plan to write into; name it with --plan"}
			}
			p, err := plan.Propose(c.Context(), s.In, merge, newBar(s), noticeTo(s.Err))
			if err != nil {
				return err
			}
			if asJSON {
				err = printJSON(s.Out, p)
			} else {
				err = p.Write(s.Out)
			}
			if err != nil || !write {
				return err
			}
			if err := plan.WriteGroups(p); err != nil {
				return err
			}
			fmt.Fprintf(s.Err, "wrote the groups into %s\n", file)
			return nil
		}),
	}
	plan.ReadFlags(c.Flags())
	c.Flags().Uint64Var(&plan.Seed, "seed", plan.Seed, "seed of permutations and resampling")
	c.Flags().Float64Var(&merge, "merge", 0, "correlation of timing from which two limbs are one (default 0.95)")
	c.Flags().BoolVar(&write, "write", false, "write the proposal into the plan file")
	planFlags(c, &file, &asJSON)
	return c
}
