package main

import (
	"context"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"

	"github.com/apache/beam/sdks/v2/go/pkg/beam"
	"github.com/spf13/cobra"

	"strandwise/cmd/internal/job"
)

// Streams are what the command writes.
type Streams struct {
	Out io.Writer // results
	Err io.Writer // progress, notices and faults
}

// Exit codes, those of strandwise.
const (
	exitDone  = 0
	exitFault = 1
	exitUsage = 2
)

// options are what the command line says beside the plan.
type options struct {
	file   string // of the plan
	shards int
	runner string
	work   string
	asJSON bool
}

// Run runs one command line. Faults come back as errors; see [ExitCode].
func Run(ctx context.Context, s Streams, args []string) error {
	plan, o := job.NewPlan(), options{}
	mistake := true // cobra's own errors are about the command line
	c := &cobra.Command{
		Use:   "strandwise-beam [RECORDING …] --out PLACE",
		Short: "Carry out the plan of strandwise grow on a runner of Apache Beam",
		Long: `Strandwise-beam makes the set that strandwise grow makes of the same plan, byte
for byte, on a distributed engine. Recordings and the set may lie in folders that
all machines share, or in object storage: s3://BUCKET/NAME, gs://BUCKET/NAME,
azblob://CONTAINER/NAME.

The runner is prism, which is built in and runs on this machine, unless --runner
universal names the job service of another engine by --endpoint. A run that
failed or was killed goes on from its finished buckets when it is started again.

Exit codes: 0 done; 1 the recordings, the place to write to or the engine have a
fault, named on standard error; 2 wrong usage.`,
		Example: `  strandwise-beam --plan plan.toml --out /shared/set --buckets 64
  strandwise-beam --plan plan.toml --out s3://lab/sets/theatre s3://lab/recordings \
    --runner universal --endpoint jobs.cluster:8099 --environment_type LOOPBACK`,
		Version:       job.Version(),
		SilenceErrors: true,
		SilenceUsage:  true,
		RunE: func(c *cobra.Command, args []string) error {
			mistake = false
			if err := plan.Load(o.file, c.Flags(), args); err != nil {
				return err
			}
			return grow(c.Context(), s, plan, o)
		},
	}
	plan.ReadFlags(c.Flags())
	plan.MakeFlags(c.Flags())
	plan.ScoreFlags(c.Flags())
	plan.WriteFlags(c.Flags())
	plan.WorkFlags(c.Flags())
	c.Flags().StringVar(&o.file, "plan", "", "plan file (TOML); its keys are the flags with underscores, and flags win")
	c.Flags().BoolVar(&o.asJSON, "json", false, "print one JSON object")
	c.Flags().IntVar(&o.shards, "shards", 0, "pieces of work that are handed out; 0 for one a bucket, up to 1024")
	c.Flags().StringVar(&o.work, "work", "", "folder or address for what the processes tell each other, removed at the end (default beside --out)")
	c.Flags().StringVar(&o.runner, "runner", "prism", "prism, which is built in, or universal, a job service at --endpoint")
	beamFlags(c)
	c.SetOut(s.Out)
	c.SetErr(s.Err)
	c.SetArgs(args)
	err := c.ExecuteContext(ctx)
	if err != nil && mistake {
		return &job.UsageError{Problem: fmt.Sprintf("%v; 'strandwise-beam -h' lists the flags", err)}
	}
	return err
}

// beamFlags adds the flags of Beam, and shows the few that a user needs.
func beamFlags(c *cobra.Command) {
	shown := map[string]string{
		"endpoint":           "address of the job service, host:port",
		"environment_type":   "where workers run: LOOPBACK (in this process), DOCKER, PROCESS or EXTERNAL (default: what the runner takes)",
		"environment_config": "what the environment needs, such as the image of its containers",
		"worker_binary":      "program the workers run (default: this one)",
		"job_name":           "name of the job",
		"parallelism":        "workers at a time, for engines that ask",
	}
	flag.CommandLine.VisitAll(func(f *flag.Flag) {
		if c.Flags().Lookup(f.Name) != nil {
			return
		}
		c.Flags().AddGoFlag(f)
		added := c.Flags().Lookup(f.Name)
		if usage, ok := shown[f.Name]; ok {
			added.Usage = usage
		} else {
			added.Hidden = true
		}
	})
}

// begin readies Beam for this process.
func begin(o options) error {
	if f := flag.Lookup("worker_binary"); f.Value.String() == "" {
		self, err := os.Executable()
		if err != nil {
			return err
		}
		if err := f.Value.Set(self); err != nil {
			return err
		}
	}
	switch o.runner {
	case "prism":
	case "universal":
		if flag.Lookup("endpoint").Value.String() == "" {
			return &job.UsageError{Where: "--endpoint", Problem: "where is the job service? say it as host:port"}
		}
	default:
		return &job.UsageError{Where: "--runner", Problem: fmt.Sprintf("unknown runner %q; legal are prism and universal", o.runner)}
	}
	if o.shards < 0 {
		return &job.UsageError{Where: "--shards", Problem: fmt.Sprintf("%d is impossible; it must be 0 or more", o.shards)}
	}
	if !beam.Initialized() {
		beam.Init()
	}
	return nil
}

// ExitCode prints an error, if there is one, and returns the exit code of the
// process.
func ExitCode(s Streams, err error) int {
	var usage *job.UsageError
	switch {
	case err == nil:
		return exitDone
	case errors.As(err, &usage):
		fmt.Fprintf(s.Err, "strandwise-beam: %v\n", err)
		return exitUsage
	case errors.Is(err, context.Canceled):
		fmt.Fprintln(s.Err, "strandwise-beam: interrupted; the same command goes on from the finished buckets")
		return exitFault
	}
	fmt.Fprintf(s.Err, "strandwise-beam: %v\n", err)
	return exitFault
}

func printJSON(w io.Writer, v any) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(v)
}
