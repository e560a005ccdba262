package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"strandwise/channels"
	"strandwise/export"
)

// sealed is what seal did.
type sealed struct {
	Out       string `json:"out"`
	Recorded  int64  `json:"recorded"`
	Synthetic int64  `json:"synthetic"`
	Files     int    `json:"files"`
	Bytes     int64  `json:"bytes"`
	Seal      string `json:"seal"`
}

func newSeal(s Streams) *cobra.Command {
	asJSON := false
	c := &cobra.Command{
		Use:   "seal SET",
		Short: "Make one set of the shards that grow wrote",
		Long: `Seal checks that every shard of a set is there, and writes the manifest. The
result is byte for byte what one run of grow would have written. What is missing
is named, and the set left as it is. To seal a set again changes nothing.`,
		Example: `  strandwise grow --plan plan.toml --shard 0 --shards 2
  strandwise grow --plan plan.toml --shard 1 --shards 2
  strandwise seal set`,
		Args: cobra.ExactArgs(1),
		RunE: command(func(c *cobra.Command, args []string) error {
			m, err := export.Seal(args[0])
			if err != nil {
				return err
			}
			done := sealed{Out: args[0], Recorded: m.Takes(channels.Recorded), Synthetic: m.Takes(channels.Synthetic), Files: len(m.Files), Seal: m.Seal}
			for _, f := range m.Files {
				done.Bytes += f.Bytes
			}
			if asJSON {
				return printJSON(s.Out, done)
			}
			fmt.Fprintf(s.Out, "sealed %s: %d recorded takes and %d synthetic ones in %d files (%.1f MB)\n",
				done.Out, done.Recorded, done.Synthetic, done.Files, float64(done.Bytes)/1e6)
			fmt.Fprintln(s.Out, caution)
			return nil
		}),
	}
	c.Flags().BoolVar(&asJSON, "json", false, "print one JSON object")
	return c
}
