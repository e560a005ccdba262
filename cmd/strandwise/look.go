package main

import (
	"errors"
	"fmt"
	"time"

	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
	"strandwise/export/look"
	"strandwise/export/marks"
)

// looking is what look says once its page can be opened.
type looking struct {
	Address string `json:"address"`
	Takes   int    `json:"takes"`
}

func newLook(s Streams) *cobra.Command {
	port, by, asJSON := 0, "", false
	c := &cobra.Command{
		Use:   "look SET",
		Short: "Look at takes on a page, and mark those to drop or to keep",
		Long: `Look serves a page on 127.0.0.1 and prints its address, which opens it once, in
one browser. It shows the takes of a set: their channels and, where channels are
positions, a figure that moves; a synthetic take beside its source. Each take can
be marked drop or keep. Marks are written at once to marks.csv in the set.

Look runs until it is interrupted with Ctrl-C. To look at a set on another machine,
forward a port of the same number: ssh -L 8123:127.0.0.1:8123, and --port 8123.`,
		Example: "  strandwise look set",
		Args:    cobra.ExactArgs(1),
		RunE: command(func(c *cobra.Command, args []string) (err error) {
			if port < 0 || port > 65535 {
				return &job.UsageError{Where: "--port", Problem: fmt.Sprintf("%d is no port; legal are 1 to 65535, and 0 for a free one", port)}
			}
			set, err := look.Open(args[0])
			if err != nil {
				return err
			}
			defer func() { err = errors.Join(err, set.Close()) }()
			log, err := marks.Open(args[0], by, time.Now)
			if err != nil {
				return err
			}
			return look.Serve(c.Context(), set, log, port, func(address string) error {
				if asJSON {
					return printJSON(s.Out, looking{address, set.Takes()})
				}
				_, err := fmt.Fprintf(s.Out, "%s holds %s. Open this address once:\n\n  %s\n\nMarks are saved as they are made. End with Ctrl-C.\n", args[0], count(set.Takes(), "take"), address)
				return err
			})
		}),
	}
	c.Flags().IntVar(&port, "port", 0, "port to listen on; 0 takes a free one")
	c.Flags().StringVar(&by, "by", "", "who marks, for the column by of marks.csv")
	c.Flags().BoolVar(&asJSON, "json", false, "print the address as one JSON object")
	return c
}
