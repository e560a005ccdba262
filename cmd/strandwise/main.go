// Command strandwise makes synthetic takes of recorded gestures that differ as
// real takes differ, writes them as Parquet, and scores them honestly.
package main

import (
	"context"
	"os"
	"os/signal"
	"syscall"
)

func main() { os.Exit(run()) }

// run runs the command line of the process and returns its exit code.
func run() int {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	streams := Streams{In: os.Stdin, Out: os.Stdout, Err: os.Stderr}
	return ExitCode(streams, Run(ctx, streams, os.Args[1:]))
}
