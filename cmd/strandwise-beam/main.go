// Command strandwise-beam carries out the plan of strandwise grow on a
// distributed engine: any runner of Apache Beam. It is a module of its own, so
// that strandwise itself carries neither Beam nor the clients of object storage.
//
// This process reads the recordings once, scores, and seals. What is handed to
// the engine are references to recorded takes, each with the shard that a hash
// of its id says, and never the takes made: of these nothing leaves the process
// that makes them but the finished files. Each shard is made by one call of the
// code that strandwise grow runs, so the sealed set is that of grow, byte for
// byte.
package main

import (
	"context"
	"flag"
	"os"
	"os/signal"
	"slices"
	"strings"
	"syscall"

	"github.com/apache/beam/sdks/v2/go/pkg/beam"
)

func main() { os.Exit(run()) }

// run runs the command line of the process and returns its exit code. An engine
// starts the same program as its worker, with flags of Beam's own.
func run() int {
	register()
	if slices.ContainsFunc(os.Args[1:], isWorkerFlag) {
		flag.Parse()
		beam.Init() // serves the engine, and ends the process
		return exitFault
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	streams := Streams{Out: os.Stdout, Err: os.Stderr}
	return ExitCode(streams, Run(ctx, streams, os.Args[1:]))
}

func isWorkerFlag(arg string) bool {
	name, value, stated := strings.Cut(strings.TrimLeft(arg, "-"), "=")
	return strings.HasPrefix(arg, "-") && name == "worker" && (!stated || value == "true")
}
