package job

import (
	"errors"
	"fmt"
	"strconv"

	"github.com/spf13/pflag"

	"strandwise/export"
)

// Shard is one of several parts of a set that are written apart, by array jobs
// on a cluster, and sealed together.
type Shard struct {
	Index int `json:"index"` // from 0
	Of    int `json:"of"`
}

// ShardFlags adds the flags that say which shard of a set to write.
func (p *Plan) ShardFlags(f *pflag.FlagSet) {
	f.Int("shard", 0, "number of the shard to write, from 0 (default $JOB_COMPLETION_INDEX, or from $SLURM_ARRAY_TASK_ID)")
	f.Int("shards", 0, "number of shards the set is written in, each by its own run; 0 for one run (default $SLURM_ARRAY_TASK_COUNT)")
}

// LoadShard finds out which shard to write: from the flags, else from what the
// system that started the process as one of an array of jobs says in its
// environment. The notice tells of the latter.
func (p *Plan) LoadShard(f *pflag.FlagSet, env func(string) string) (notice string, err error) {
	of, err := f.GetInt("shards")
	if err != nil {
		return "", err
	}
	array, err := slurm(env)
	if err != nil {
		return "", err
	}
	index, source := -1, "--shard"
	switch {
	case f.Changed("shard"):
		index, err = f.GetInt("shard")
	case array != nil:
		index, source = array.Index, "SLURM_ARRAY_TASK_ID"
	case env("JOB_COMPLETION_INDEX") != "":
		index, source, err = 0, "JOB_COMPLETION_INDEX", nil
		if index, err = strconv.Atoi(env("JOB_COMPLETION_INDEX")); err != nil {
			return "", &UsageError{Where: source, Problem: fmt.Sprintf("%q is no number", env("JOB_COMPLETION_INDEX"))}
		}
	}
	if err != nil {
		return "", err
	}
	if !f.Changed("shards") && array != nil {
		of = array.Of
	}
	return p.setShard(index, of, source, f.Changed("shards"))
}

func (p *Plan) setShard(index, of int, source string, stated bool) (notice string, err error) {
	switch {
	case of < 0:
		return "", &UsageError{Where: "--shards", Problem: fmt.Sprintf("%d is impossible; it must be 0 or more", of)}
	case of == 0 && stated, of == 0 && index < 0:
		return "", nil
	case of == 0:
		return "", &UsageError{Where: source, Problem: fmt.Sprintf("this is shard %d of how many? say it by --shards, or write the whole set by --shards 0", index)}
	case index < 0 && source == "--shard":
		return "", &UsageError{Where: "--shard", Problem: fmt.Sprintf("which of the %d shards is this run to write? legal are 0 to %d", of, of-1)}
	case index < 0 || index >= of:
		return "", &UsageError{Where: source, Problem: fmt.Sprintf("%d is no shard of %d; legal are 0 to %d", index, of, of-1)}
	}
	p.shard = &Shard{Index: index, Of: of}
	if source != "--shard" {
		notice = fmt.Sprintf("writing shard %d of %d, as %s says; --shards 0 writes the whole set", index, of, source)
	}
	return notice, nil
}

// Shard returns the shard to write, nil for the whole set.
func (p *Plan) Shard() *Shard { return p.shard }

// slurm returns the shard of a task of a Slurm job array, nil outside of one.
// The tasks of an array are numbered from a smallest number in equal steps.
func slurm(env func(string) string) (*Shard, error) {
	if env("SLURM_ARRAY_TASK_ID") == "" || env("SLURM_ARRAY_TASK_COUNT") == "" {
		return nil, nil
	}
	number := map[string]int{"SLURM_ARRAY_TASK_MIN": 0, "SLURM_ARRAY_TASK_STEP": 1}
	for _, name := range []string{"SLURM_ARRAY_TASK_ID", "SLURM_ARRAY_TASK_COUNT", "SLURM_ARRAY_TASK_MIN", "SLURM_ARRAY_TASK_STEP"} {
		text := env(name)
		if text == "" {
			continue
		}
		n, err := strconv.Atoi(text)
		if err != nil {
			return nil, &UsageError{Where: name, Problem: fmt.Sprintf("%q is no number", text)}
		}
		number[name] = n
	}
	steps := number["SLURM_ARRAY_TASK_ID"] - number["SLURM_ARRAY_TASK_MIN"]
	step := number["SLURM_ARRAY_TASK_STEP"]
	if step < 1 || steps%step != 0 {
		return nil, &UsageError{Where: "SLURM_ARRAY_TASK_ID", Problem: "tasks whose numbers are not in equal steps cannot be told which shard they are; say it by --shard"}
	}
	return &Shard{Index: steps / step, Of: number["SLURM_ARRAY_TASK_COUNT"]}, nil
}

// scores reports whether this run scores the set and writes what is about all
// of it: one run of the whole set, or the first shard.
func (p *Plan) scores() bool { return p.shard == nil || p.shard.Index == 0 }

// UnfinishedError is a failure that left part of a set finished.
type UnfinishedError struct {
	Err      error
	Out      string
	Finished int // buckets
	Of       int // buckets this run is to make
}

// Error gives the failure and how to go on.
func (e *UnfinishedError) Error() string { return fmt.Sprintf("%v\n%s", e.Err, e.GoOn()) }

// GoOn tells how to go on from what is finished.
func (e *UnfinishedError) GoOn() string {
	return fmt.Sprintf("%d of %d buckets are finished in %s; the same command goes on from there", e.Finished, e.Of, e.Out)
}

// Unwrap returns the failure.
func (e *UnfinishedError) Unwrap() error { return e.Err }

// leave closes a set after a failure, and tells what is kept of it.
func (g *growing) leave(w *export.Writer, failure error) error {
	todo, counting := w.Todo()
	kept, err := w.Close()
	failure = errors.Join(failure, counting, err)
	if !kept {
		return failure
	}
	own := g.ownBuckets(w)
	return &UnfinishedError{Err: failure, Out: g.plan.Out, Finished: own - len(todo), Of: own}
}

// ownBuckets returns the number of buckets that are this run's to make.
func (g *growing) ownBuckets(w *export.Writer) int {
	if s := g.plan.shard; s != nil {
		return (w.Buckets() - s.Index + s.Of - 1) / s.Of
	}
	return w.Buckets()
}
