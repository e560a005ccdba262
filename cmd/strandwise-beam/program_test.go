package main

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"log"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/spf13/pflag"

	"strandwise/cmd/internal/job"
	"strandwise/ingest/puppets"
)

const folder = "STRANDWISE_BEAM_TEST"

// TestMain builds the command, and prism as a server, into the folder that
// [program] names: each run is a process of its own, as for users, because the
// flags of Beam are those of the process.
func TestMain(m *testing.M) {
	dir, err := os.MkdirTemp("", "strandwise-beam-test-")
	if err != nil {
		log.Fatal(err)
	}
	for name, of := range map[string]string{"strandwise-beam": ".", "prism": "github.com/apache/beam/sdks/v2/go/cmd/prism"} {
		if out, err := exec.Command("go", "build", "-o", filepath.Join(dir, name), of).CombinedOutput(); err != nil {
			log.Fatalf("build %s: %v\n%s", name, err, out)
		}
	}
	os.Setenv(folder, dir)
	code := m.Run()
	os.RemoveAll(dir)
	os.Exit(code)
}

func program(name string) string { return filepath.Join(os.Getenv(folder), name) }

// outcome is what a process said.
type outcome struct {
	code     int
	out, err string
}

// beamed runs the command with more in its environment.
func beamed(t *testing.T, env []string, args ...string) outcome {
	t.Helper()
	c := exec.CommandContext(t.Context(), program("strandwise-beam"), args...)
	var out, err bytes.Buffer
	c.Stdout, c.Stderr, c.Env = &out, &err, append(os.Environ(), env...)
	failed := c.Run()
	if exit := (*exec.ExitError)(nil); failed != nil && !errors.As(failed, &exit) {
		t.Fatal(failed)
	}
	return outcome{c.ProcessState.ExitCode(), out.String(), err.String()}
}

// must runs a command line that has to succeed and returns what it prints as JSON.
func must(t *testing.T, env []string, args ...string) (done struct {
	Shards  int
	Metrics map[string]int64
}) {
	t.Helper()
	o := beamed(t, env, append(args, "--json")...)
	if o.code != exitDone {
		t.Fatalf("strandwise-beam %s: exit code %d\n%s%s", strings.Join(args, " "), o.code, o.out, o.err)
	}
	if err := json.Unmarshal([]byte(o.out), &done); err != nil {
		t.Fatal(err)
	}
	return done
}

// alone carries the same command line out as strandwise grow does.
func alone(t *testing.T, args ...string) {
	t.Helper()
	plan, file := job.NewPlan(), ""
	f := pflag.NewFlagSet("grow", pflag.ContinueOnError)
	plan.ReadFlags(f)
	plan.MakeFlags(f)
	plan.ScoreFlags(f)
	plan.WriteFlags(f)
	plan.WorkFlags(f)
	f.StringVar(&file, "plan", "", "")
	if err := f.Parse(args); err != nil {
		t.Fatal(err)
	}
	if err := plan.Load(file, f, f.Args()); err != nil {
		t.Fatal(err)
	}
	if _, err := plan.Grow(context.Background(), nil, job.Version(), &stages{w: new(bytes.Buffer)}, func(string) {}); err != nil {
		t.Fatal(err)
	}
}

// sums returns the SHA-256 of every file in a folder, by name.
func sums(t *testing.T, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	err := fs.WalkDir(os.DirFS(dir), ".", func(name string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := os.ReadFile(filepath.Join(dir, name))
		out[name] = fmt.Sprintf("%x", sha256.Sum256(data))
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// same holds a set against the one that it should be.
func same(t *testing.T, want, got map[string]string) {
	t.Helper()
	if want["manifest.json"] == "" {
		t.Error("there is no manifest")
	}
	for name := range want {
		if got[name] != want[name] {
			t.Errorf("%s differs or is missing", name)
		}
	}
	for name := range got {
		if want[name] == "" {
			t.Errorf("%s is one too many", name)
		}
	}
}

// quick are flags that keep the score short.
var quick = []string{"--takes-per-label", "1", "--repeats", "1", "--distance", "euclidean-dependent", "--reject=false"}

// theatre writes the recordings of the demo and returns their folder and flags
// that read them.
func theatre(t *testing.T) (dir string, flags []string) {
	t.Helper()
	dir = t.TempDir()
	if _, err := puppets.WriteCSV(filepath.Join(dir, "recordings"), 1); err != nil {
		t.Fatal(err)
	}
	return dir, append([]string{filepath.Join(dir, "recordings"), "--pattern", "{subject}/{label}_{session}_{take}.csv"}, quick...)
}

// long writes one recording of many short takes and returns its path.
func long(t *testing.T, dir string, takes int) string {
	t.Helper()
	var b bytes.Buffer
	b.WriteString("take,label,subject,time_s,left.accel.x,left.accel.y\n")
	for n := range takes {
		for i := range 48 {
			u := float64(i) / 47 * float64(1+n%2)
			fmt.Fprintf(&b, "t%03d,cue-%d,person-%d,%.2f,%.5f,%.5f\n", n, n%2, n%4, float64(i)/50, math.Sin(6*u+float64(n)/30), math.Cos(5*u*u))
		}
	}
	path := filepath.Join(dir, "long.csv")
	if err := os.WriteFile(path, b.Bytes(), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}
