package main

import (
	"fmt"
	"io"
	"os"
	"os/signal"
	"syscall"

	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
)

func newGrow(s Streams) *cobra.Command {
	plan, file, only, stream, asJSON := job.NewPlan(), "", "", false, false
	c := &cobra.Command{
		Use:   "grow [RECORDING …] --out DIR",
		Short: "Make synthetic takes of recordings and write a sealed, scored set",
		Long: `Grow reads recordings (files, folders, or - for standard input), makes synthetic
takes from those that train, scores them on takes kept apart, and writes a
sealed set of Parquet files. It writes the set in parts, named buckets. When
it fails, is interrupted or killed, finished buckets stay, and the same command
goes on from there, to the same bytes; it refuses to go on with another plan. A
set without a finished bucket is removed.

With --shards the set is written by several runs, on one machine or on many that
share a folder, each with its own --shard; then seal makes one set of them.

With --only ID one synthetic take of a set is made again from the recordings and
the same plan, and written as a recording.

With --stream the takes go to standard output instead, as an Arrow IPC stream of
the same rows as the table takes, for a training program to read while they are
made: nothing is scored. A reader that waits holds the making up, and one that
goes away ends it with exit code 0 and a note on standard error.`,
		Example: `  strandwise grow train.csv test.csv --rate 20 --per-take 16 --seed 7 --out set
  strandwise grow recordings --pattern '{subject}/{label}_{session}_{take}.csv' --out set
  strandwise grow train.csv --rate 20 --stream | python train.py
  strandwise grow train.csv test.csv --rate 20 --per-take 16 --seed 7 --only bow-1~3`,
		RunE: command(func(c *cobra.Command, args []string) error {
			if err := plan.Load(file, c.Flags(), args); err != nil {
				return err
			}
			if stream {
				plan.Out = "-"
			}
			if only != "" {
				return growOnly(c, s, plan, only, asJSON)
			}
			notice, err := plan.LoadShard(c.Flags(), os.Getenv)
			if err != nil {
				return err
			}
			if notice != "" {
				noticeTo(s.Err)(notice)
			}
			return grow(c, s, plan, asJSON)
		}),
	}
	plan.ReadFlags(c.Flags())
	plan.MakeFlags(c.Flags())
	plan.ScoreFlags(c.Flags())
	plan.WriteFlags(c.Flags())
	plan.WorkFlags(c.Flags())
	plan.ShardFlags(c.Flags())
	c.Flags().StringVar(&only, "only", "", "make the one synthetic take of this id again, and write it to --out FILE (csv, parquet, arrow, bvh) or, as CSV, to standard output")
	c.Flags().BoolVar(&stream, "stream", false, "write the takes to standard output as an Arrow IPC stream, and no set")
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
	if plan.Out == "-" {
		return growStream(c, s, plan, asJSON)
	}
	done, err := plan.Grow(c.Context(), s.In, job.Version(), newBar(s), noticeTo(s.Err))
	if err != nil {
		return err
	}
	if asJSON {
		return printJSON(s.Out, done)
	}
	printGrown(s.Out, done)
	return nil
}

// growStream carries out a plan whose takes go to standard output.
func growStream(c *cobra.Command, s Streams, plan *job.Plan, asJSON bool) error {
	if asJSON {
		return &job.UsageError{Where: "--json", Problem: "the takes are written to standard output, so nothing else can be"}
	}
	// Without this a write to a standard output that nobody reads kills the process.
	signal.Ignore(syscall.SIGPIPE)
	defer signal.Reset(syscall.SIGPIPE)
	say := noticeTo(s.Err)
	done, err := plan.GrowStream(c.Context(), s.In, s.Out, job.Version(), newBar(s), say)
	if err == nil && done.Stopped {
		say(fmt.Sprintf("the reader went away after %d takes", done.Takes))
	}
	return err
}

// noticeTo prints notices.
func noticeTo(w io.Writer) func(string) {
	return func(text string) { fmt.Fprintf(w, "note: %s\n", text) }
}

func printGrown(w io.Writer, g *job.Grown) {
	if g.Shard != nil {
		fmt.Fprintf(w, "wrote shard %d of %d of %s: %s in %d files (%.1f MB)\nwhen all shards are there: strandwise seal %s\n",
			g.Shard.Index, g.Shard.Of, g.Out, count(g.Buckets, "bucket"), g.Files, float64(g.Bytes)/1e6, g.Out)
		return
	}
	fmt.Fprintf(w, "wrote %s: %d recorded takes, %d synthetic ones made from the %d that train, in %d files (%.1f MB)\n",
		g.Out, g.Recorded, g.Synthetic, g.Training, g.Files, float64(g.Bytes)/1e6)
	printDraws(w, g.Tallies)
	if g.Score != nil {
		printScore(w, g.Score)
	}
	printHarm(w, g.Harm)
	printRealism(w, g.Realism)
	fmt.Fprintln(w, caution)
}

// caution is shown after every set.
const caution = `Synthetic takes say nothing about people who were never recorded: try the set on
them before use. This score is no safety case. Motion identifies people: treat
the set as personal data.`
