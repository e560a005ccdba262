package job_test

import (
	"errors"
	"strings"
	"testing"

	"github.com/spf13/pflag"

	"strandwise/cmd/internal/job"
)

// TestShardOfAnArrayJob: the environment of an array job says which shard to
// write, and flags win.
func TestShardOfAnArrayJob(t *testing.T) {
	const slurm = "SLURM_ARRAY_TASK_COUNT=4 SLURM_ARRAY_TASK_MIN=10 SLURM_ARRAY_TASK_STEP=5 SLURM_ARRAY_TASK_ID="
	for _, tc := range []struct {
		environment, flags string
		want               job.Shard // none when of none
		notice, fault      string
	}{
		{"", "", job.Shard{}, "", ""},
		{"", "--shards 3 --shard 1", job.Shard{Index: 1, Of: 3}, "", ""},
		{"", "--shards 3", job.Shard{}, "", "--shard: which of the 3 shards is this run to write? legal are 0 to 2"},
		{"", "--shard 1", job.Shard{}, "", "--shard: this is shard 1 of how many?"},
		{"", "--shards 3 --shard 3", job.Shard{}, "", "--shard: 3 is no shard of 3; legal are 0 to 2"},
		{"", "--shards -1", job.Shard{}, "", "--shards: -1 is impossible"},
		{"JOB_COMPLETION_INDEX=2", "--shards 3", job.Shard{Index: 2, Of: 3}, "as JOB_COMPLETION_INDEX says", ""},
		{"JOB_COMPLETION_INDEX=2", "--shards 3 --shard 0", job.Shard{Of: 3}, "", ""},
		{"JOB_COMPLETION_INDEX=2", "", job.Shard{}, "", "JOB_COMPLETION_INDEX: this is shard 2 of how many?"},
		{"JOB_COMPLETION_INDEX=2", "--shards 0", job.Shard{}, "", ""},
		{"JOB_COMPLETION_INDEX=two", "--shards 3", job.Shard{}, "", `JOB_COMPLETION_INDEX: "two" is no number`},
		{slurm + "10", "", job.Shard{Of: 4}, "writing shard 0 of 4, as SLURM_ARRAY_TASK_ID says", ""},
		{slurm + "25", "", job.Shard{Index: 3, Of: 4}, "writing shard 3 of 4", ""},
		{slurm + "25", "--shards 8", job.Shard{Index: 3, Of: 8}, "writing shard 3 of 8", ""},
		{slurm + "25", "--shards 0", job.Shard{}, "", ""},
		{slurm + "12", "", job.Shard{}, "", "not in equal steps"},
		{slurm + "30", "", job.Shard{}, "", "4 is no shard of 4"},
		{slurm + "x", "", job.Shard{}, "", `SLURM_ARRAY_TASK_ID: "x" is no number`},
	} {
		environment := map[string]string{}
		for _, pair := range strings.Fields(tc.environment) {
			name, value, _ := strings.Cut(pair, "=")
			environment[name] = value
		}
		p, f := job.NewPlan(), pflag.NewFlagSet("grow", pflag.ContinueOnError)
		p.ShardFlags(f)
		if err := f.Parse(strings.Fields(tc.flags)); err != nil {
			t.Fatal(err)
		}
		notice, err := p.LoadShard(f, func(name string) string { return environment[name] })
		var usage *job.UsageError
		if tc.fault != "" && (!errors.As(err, &usage) || !strings.Contains(err.Error(), tc.fault)) || tc.fault == "" && err != nil {
			t.Errorf("%q %q: error %v, want %q", tc.environment, tc.flags, err, tc.fault)
		}
		if got := p.Shard(); got == nil && tc.want.Of > 0 || got != nil && *got != tc.want {
			t.Errorf("%q %q: shard %v, want %v", tc.environment, tc.flags, got, tc.want)
		}
		if (notice == "") != (tc.notice == "") || !strings.Contains(notice, tc.notice) {
			t.Errorf("%q %q: notice %q, want %q", tc.environment, tc.flags, notice, tc.notice)
		}
	}
}
