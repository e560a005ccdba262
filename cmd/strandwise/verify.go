package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"strandwise/export"
)

func newVerify(s Streams) *cobra.Command {
	asJSON := false
	c := &cobra.Command{
		Use:     "verify SET",
		Short:   "Hold a set against its manifest",
		Long:    "Verify checks every file of a set against the manifest it was sealed with, and names each file, and the part of it, that has changed.",
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
			if n := len(v.Problems); n > 0 {
				return fmt.Errorf("%s does not hold against its manifest: %d problems", args[0], n)
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
	if len(v.Problems) == 0 {
		fmt.Fprintf(s.Out, "%s is as it was sealed: %d files, %d takes\n", dir, v.Files, v.Takes)
	}
}
