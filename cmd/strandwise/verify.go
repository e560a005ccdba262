package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"strandwise/channels"
	"strandwise/export"
)

func newVerify(s Streams) *cobra.Command {
	asJSON := false
	c := &cobra.Command{
		Use:   "verify SET",
		Short: "Hold a set against its manifest",
		Long: `Verify checks every file of a set against the manifest it was sealed with, and
names each file, and the part of it, that has changed. It checks that every
synthetic take has its source in the split that trains, and looks for takes for
testing that are nearly the same as one that trains, on which a score flatters:
a synthetic one is a fault; of recorded ones it only warns, since some
recordings are so.`,
		Example: "  strandwise verify set",
		Args:    cobra.ExactArgs(1),
		RunE: command(func(c *cobra.Command, args []string) error {
			v, err := export.Verify(args[0])
			if err != nil {
				return err
			}
			if asJSON {
				if err := printJSON(s.Out, v); err != nil {
					return err
				}
			} else {
				printVerified(s, args[0], v)
			}
			if !v.Sound() {
				return fmt.Errorf("%s does not hold against its manifest: %s", args[0], count(len(v.Problems), "problem"))
			}
			return nil
		}),
	}
	c.Flags().BoolVar(&asJSON, "json", false, "print one JSON object")
	return c
}

func printVerified(s Streams, dir string, v *export.Verification) {
	for _, p := range v.Problems {
		fmt.Fprintln(s.Out, p)
	}
	printCopies(s, v.Copies)
	if v.Sound() {
		fmt.Fprintf(s.Out, "%s is as it was sealed: %d files, %d takes\n", dir, v.Files, v.Takes)
	}
}

// printCopies warns of recorded takes that stand on both sides of the split.
func printCopies(s Streams, copies []export.Copy) {
	const most = 10
	n := 0
	for _, c := range copies {
		if c.Origin != channels.Recorded {
			continue
		}
		if n++; n <= most {
			fmt.Fprintf(s.Err, "note: take %s, which is for testing, is nearly the same as take %s, which trains (difference %.2g of its movement)\n", c.Test, c.Train, c.Difference)
		}
	}
	if n > most {
		fmt.Fprintf(s.Err, "note: and so are %d more; --json lists them\n", n-most)
	}
}
