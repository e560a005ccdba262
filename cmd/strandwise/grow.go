package main

import (
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
)

func newGrow(s Streams) *cobra.Command {
	plan, file, asJSON := job.NewPlan(), "", false
	c := &cobra.Command{
		Use:   "grow [RECORDING …] --out DIR",
		Short: "Make synthetic takes of recordings and write a sealed, scored set",
		Long: `Grow reads recordings (files, folders, or - for standard input), makes synthetic
takes from those that train, scores them on takes kept apart, and writes a
sealed set of Parquet files. When anything fails it leaves no set behind.`,
		Example: `  strandwise grow train.csv test.csv --rate 20 --per-take 16 --seed 7 --out set
  strandwise grow recordings --pattern '{subject}/{label}_{session}_{take}.csv' --out set`,
		RunE: command(func(c *cobra.Command, args []string) error {
			if err := plan.Load(file, c.Flags(), args); err != nil {
				return err
			}
			return grow(c, s, plan, asJSON)
		}),
	}
	plan.ReadFlags(c.Flags())
	plan.MakeFlags(c.Flags())
	plan.ScoreFlags(c.Flags())
	plan.WriteFlags(c.Flags())
	plan.WorkFlags(c.Flags())
	planFlags(c, &file, &asJSON)
	return c
}

// planFlags adds the flags every command with a plan has.
func planFlags(c *cobra.Command, file *string, asJSON *bool) {
	c.Flags().StringVar(file, "plan", "", "plan file (TOML); its keys are the flags with underscores, and flags win")
	c.Flags().BoolVar(asJSON, "json", false, "print one JSON object")
}

// grow carries out a plan and prints what it did.
func grow(c *cobra.Command, s Streams, plan *job.Plan, asJSON bool) error {
	done, err := plan.Grow(c.Context(), s.In, version(), newBar(s), noticeTo(s.Err))
	if err != nil {
		return err
	}
	if asJSON {
		return printJSON(s.Out, done)
	}
	printGrown(s.Out, done)
	return nil
}

// noticeTo prints notices.
func noticeTo(w io.Writer) func(string) {
	return func(text string) { fmt.Fprintf(w, "note: %s\n", text) }
}

func printGrown(w io.Writer, g *job.Grown) {
	fmt.Fprintf(w, "wrote %s: %d recorded takes, %d synthetic ones made from the %d that train, in %d files (%.1f MB)\n",
		g.Out, g.Recorded, g.Synthetic, g.Training, g.Files, float64(g.Bytes)/1e6)
	if g.Score != nil {
		printScore(w, g.Score)
	}
	fmt.Fprintln(w, caution)
}

// caution is shown after every set.
const caution = `Synthetic takes say nothing about people who were never recorded: try the set on
them before use. This score is no safety case. Motion identifies people: treat
the set as personal data.`
