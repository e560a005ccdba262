package main

import (
	_ "embed"
	"fmt"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"strandwise/cmd/internal/job"
	"strandwise/ingest/puppets"
)

//go:embed theatre.toml
var theatrePlan []byte

func newDemo(s Streams) *cobra.Command {
	into, seed, asJSON := "lantern-street", uint64(1), false
	c := &cobra.Command{
		Use:   "demo",
		Short: "Write invented recordings and a plan, and run the whole job on them",
		Long: `Demo writes the recordings of the Lantern Street Puppet Theatre, where two
wristbands cue lights and sound: six two-handed cues, four puppeteers, five takes
each. All of it is invented. It then grows and scores them as its plan says.`,
		Example: "  strandwise demo --into lantern-street",
		Args:    cobra.NoArgs,
		RunE: command(func(c *cobra.Command, _ []string) error {
			if err := vacant(into); err != nil {
				return err
			}
			files, err := writeTheatre(into, seed)
			if err != nil {
				return err
			}
			plan := job.NewPlan()
			if err := plan.Load(filepath.Join(into, "plan.toml"), new(pflag.FlagSet), nil); err != nil {
				return err
			}
			if !asJSON {
				fmt.Fprintf(s.Out, "wrote %d invented recordings to %s, and the plan %s\n",
					files, filepath.Join(into, "recordings"), filepath.Join(into, "plan.toml"))
			}
			if err := grow(c, s, plan, asJSON); err != nil {
				return err
			}
			if !asJSON {
				fmt.Fprintf(s.Out, next, into)
			}
			return nil
		}),
	}
	c.Flags().StringVar(&into, "into", into, "folder to write the recordings, the plan and the set into; must not exist or be empty")
	c.Flags().Uint64Var(&seed, "seed", seed, "seed of the invented recordings")
	c.Flags().BoolVar(&asJSON, "json", false, "print one JSON object")
	return c
}

// next tells what to try after the demo.
const next = `
What to try next:
  strandwise verify %[1]s/set                     holds the set against its manifest
  strandwise score --plan %[1]s/plan.toml         the score again, without writing a set
  edit %[1]s/plan.toml, then
  strandwise grow --plan %[1]s/plan.toml --out another-set
(strandwise is "go run ./cmd/strandwise" until "go install ./cmd/strandwise")
`

// vacant refuses a folder that holds something.
func vacant(dir string) error {
	entries, err := os.ReadDir(dir)
	if err == nil && len(entries) > 0 {
		return fmt.Errorf("%s already holds something; remove it, or choose another folder with --into", dir)
	}
	if err != nil && !os.IsNotExist(err) {
		return err
	}
	return nil
}

// writeTheatre writes the invented recordings and their plan, and returns the
// number of recordings.
func writeTheatre(dir string, seed uint64) (int, error) {
	files, err := puppets.WriteCSV(filepath.Join(dir, "recordings"), seed)
	if err != nil {
		return 0, err
	}
	return len(files), os.WriteFile(filepath.Join(dir, "plan.toml"), theatrePlan, 0o666)
}
