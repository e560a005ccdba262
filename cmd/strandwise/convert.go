package main

import (
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
)

func newConvert(s Streams) *cobra.Command {
	plan, file, asJSON := job.NewPlan(), "", false
	to := job.Conversion{Version: job.Version()}
	c := &cobra.Command{
		Use:   "convert [RECORDING …] OUT",
		Short: "Write recordings in another format",
		Long: `Convert reads recordings (files, folders, or - for standard input) and writes
them into one file, in SI units, with missing values left missing. Nothing is
repaired but what --repair allows. The ending of OUT tells what is written:

  .csv                    one row a frame: take, label, subject, session, frame,
                          time_s, then the channels (LeftHand.pos.x); 64-bit floats
  .parquet .pq            one row a take, as in the table takes of a set; 32-bit floats
  .arrow .feather .ipc    the same as an Arrow IPC file
  .arrows                 the same as an Arrow IPC stream
  .bvh                    the skeleton and its motion, one take a file

or --as says it. OUT may be - for standard output (Arrow IPC is then a stream).
Several takes of skeletons become several BVH files: OUT is a folder, as in
--as bvh motions/, or its name has fields, as in '{subject}/{label}_{take}.bvh'.

A file that exists is only replaced with --replace. When anything fails, no file
is left behind.`,
		Example: `  strandwise convert recordings --pattern '{subject}/{label}_{session}_{take}.csv' all.parquet
  strandwise convert walk.c3d --signals analog walk.csv
  strandwise convert dance.bvh --length-unit cm - --as arrow | consumer`,
		RunE: command(func(c *cobra.Command, args []string) error {
			if len(args) == 0 {
				return &job.UsageError{Problem: "name the recordings, and after them the file to write"}
			}
			last := len(args) - 1
			to.Out = args[last]
			if asJSON && to.Out == "-" {
				return &job.UsageError{Where: "--json", Problem: "the recordings are written to standard output, so nothing else can be; name a file to write"}
			}
			if err := plan.Load(file, c.Flags(), args[:last]); err != nil {
				return err
			}
			return convert(c, s, plan, to, asJSON)
		}),
	}
	plan.ReadFlags(c.Flags())
	c.Flags().StringVar(&to.As, "as", "", "what to write: csv, parquet, arrow or bvh (default: by the ending of OUT)")
	c.Flags().BoolVar(&to.Replace, "replace", false, "replace OUT if it exists")
	planFlags(c, &file, &asJSON)
	return c
}

// convert carries out a conversion and prints what it did.
func convert(c *cobra.Command, s Streams, plan *job.Plan, to job.Conversion, asJSON bool) error {
	done, err := plan.Convert(c.Context(), s.In, s.Out, to, newBar(s), noticeTo(s.Err))
	if err != nil {
		return err
	}
	if asJSON {
		return printJSON(s.Out, done)
	}
	if to.Out == "-" {
		return nil
	}
	printConverted(s.Out, done)
	return nil
}

func printConverted(w io.Writer, d *job.Converted) {
	fmt.Fprintf(w, "wrote %s: %s, %s of %s, in %s (%.1f MB)\n",
		d.Out, count(d.Takes, "take"), count(d.Frames, "frame"), count(d.Channels, "channel"), count(d.Files, "file"), float64(d.Bytes)/1e6)
	printRepairs(w, d.Repairs)
}
