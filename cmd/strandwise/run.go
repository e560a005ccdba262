package main

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
)

// Streams are what a command reads and writes.
type Streams struct {
	In  io.Reader
	Out io.Writer // results
	Err io.Writer // progress, notices and faults
}

// Exit codes.
const (
	exitDone  = 0 // done
	exitFault = 1 // the data, or the place to write to, has a fault; named on Streams.Err
	exitUsage = 2 // wrong usage; Streams.Err says what would be legal
)

const about = `Strandwise makes new takes of recorded gestures, that differ from the recorded
ones in the ways real takes differ, and writes them as Parquet with an honest
nearest-template score.

Exit codes: 0 done; 1 the recordings or the place to write to have a fault,
named on standard error; 2 wrong usage.`

// Run runs one command line. Faults come back as errors; see [ExitCode].
func Run(ctx context.Context, s Streams, args []string) error {
	root := &cobra.Command{
		Use:           "strandwise",
		Short:         "Grow gesture recordings into training sets",
		Long:          about,
		Version:       job.Version(),
		SilenceErrors: true,
		SilenceUsage:  true,
		Args:          cobra.NoArgs,
		RunE:          func(c *cobra.Command, _ []string) error { return c.Help() },
	}
	root.SetIn(s.In)
	root.SetOut(s.Out)
	root.SetErr(s.Err)
	root.SetArgs(args)
	root.SetFlagErrorFunc(func(c *cobra.Command, err error) error {
		return &job.UsageError{Problem: fmt.Sprintf("%v; '%s -h' lists the flags", err, c.CommandPath())}
	})
	root.AddCommand(newDemo(s), newCheck(s), newConvert(s), newGroup(s), newMeasure(s), newGrow(s), newScore(s), newSeal(s), newVerify(s), newLook(s))
	return asUsage(root.ExecuteContext(ctx))
}

// asUsage marks the errors cobra makes itself, which are plain, as wrong
// usage; the commands mark their own.
func asUsage(err error) error {
	var placed placedError
	if err == nil || errors.As(err, &placed) {
		return errors.Unwrap(err)
	}
	return &job.UsageError{Problem: err.Error()}
}

// placedError is an error that comes from a command and not from cobra.
type placedError struct{ error }

func (e placedError) Unwrap() error { return e.error }

// command wraps what a command does so that its errors are told apart from
// those of the command line.
func command(do func(c *cobra.Command, args []string) error) func(*cobra.Command, []string) error {
	return func(c *cobra.Command, args []string) error {
		if err := do(c, args); err != nil {
			return placedError{err}
		}
		return nil
	}
}

// ExitCode prints an error, if there is one, and returns the exit code of the
// process.
func ExitCode(s Streams, err error) int {
	var usage *job.UsageError
	var unfinished *job.UnfinishedError
	switch {
	case err == nil:
		return exitDone
	case errors.Is(err, context.Canceled) && errors.As(err, &unfinished):
		fmt.Fprintf(s.Err, "strandwise: interrupted; %s\n", unfinished.GoOn())
		return exitFault
	case errors.Is(err, context.Canceled):
		fmt.Fprintln(s.Err, "strandwise: interrupted; nothing unfinished was left behind")
		return exitFault
	case errors.As(err, &usage):
		fmt.Fprintf(s.Err, "strandwise: %v\n", err)
		return exitUsage
	}
	fmt.Fprintf(s.Err, "strandwise: %v\n", err)
	return exitFault
}

// printJSON prints one indented JSON object.
func printJSON(w io.Writer, v any) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(v)
}
