package bids_test

import (
	"flag"
	"maps"
	"os"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/ingest/bids"
	"strandwise/ingest/raw"
)

var update = flag.Bool("update", false, "rewrite the golden files")

// TestTheatre reads every file of an invented data set.
func TestTheatre(t *testing.T) {
	s := onDisk(t, "testdata/theatre")
	var got strings.Builder
	for _, name := range slices.Sorted(maps.Keys(s)) {
		if !(bids.Format{}).Sniff([]byte(s[name]), name) {
			t.Errorf("%s is not known", name)
		}
		takes, notices, err := s.read(name)
		if err != nil {
			t.Fatal(err)
		}
		if wanted := strings.HasSuffix(name, "_motion.tsv"); wanted != (len(takes) == 1) || len(takes) > 1 {
			t.Errorf("%s holds %d takes", name, len(takes))
		}
		got.WriteString(name + "\n")
		for _, n := range notices {
			got.WriteString("  notice: " + n + "\n")
		}
		for _, x := range takes {
			got.WriteString(described(x))
		}
	}
	const golden = "testdata/theatre.golden"
	if *update {
		if err := os.WriteFile(golden, []byte(got.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(got.String(), "\n")); d != "" {
		t.Error(d)
	}
}

func TestSniff(t *testing.T) {
	const numbers, header = "1.5\t-2\tn/a\n", "left.x\tleft.y\n1\t2\n"
	wide := strings.Repeat("1.5\t", raw.SniffSize/4-1) + "-1.e" // a row that goes on behind the head
	for name, c := range map[string]struct {
		head string
		want bool
	}{
		"a/b/sub-01_task-wave_tracksys-imu_motion.tsv":                {numbers, true},
		"sub-01_ses-2_task-wave_tracksys-imu_acq-a_run-01_motion.tsv": {numbers, true},
		"sub-01_task-wave_tracksys-imu_motion.tsv.gz":                 {numbers, true},
		"sub-01_task-wave_tracksys-imu_motion.tsv.zst":                {numbers, true},
		"sub-1_task-wave_tracksys-imu_motion.tsv":                     {header, true}, // to say what is wrong with it
		"sub-2_task-wave_tracksys-imu_motion.tsv":                     {"", true},
		"sub-01_motion.tsv":                                           {numbers, true},
		"sub-07_motion.tsv":                                           {wide, true},
		"sub-08_motion.tsv":                                           {"1.5\t-1.e", false},
		"sub-02_motion.tsv":                                           {header, false},
		"sub-03_motion.tsv":                                           {"", false},
		"sub-04_motion.tsv":                                           {"\"open\n", false},
		"sub-05_motion.tsv":                                           {"\xff", false},
		"sub-06_task-wave_tracksys-imu_motion.tsv":                    {"1\x00", false},
		"task-wave_motion.tsv":                                        {numbers, false}, // of nobody
		"sub-01_sub-02_motion.tsv":                                    {numbers, false},
		"sub-_motion.tsv":                                             {numbers, false},
		"sub-a b_motion.tsv":                                          {numbers, false},
		"sub-\xff_motion.tsv":                                         {numbers, false},
		"mood-good_motion.tsv":                                        {numbers, false},
		"sub-01_motion":                                               {numbers, false},
		"sub-01_motion.csv":                                           {numbers, false},
		"sub-01":                                                      {numbers, false},
		"motion.tsv":                                                  {numbers, false},
		"left.tsv":                                                    {header, false},
		"-":                                                           {numbers, false},

		"sub-01_task-wave_events.tsv":         {"onset\tduration\n", true},
		"task-wave_tracksys-imu_channels.tsv": {"name\n", true},
		"sub-01_scans.tsv":                    {"filename\n", true},
		"task-wave_motion.json":               {"{}", true},
		"task-wave_events.json":               {"{}", true},
		"sub-01_task-wave_physio.tsv.gz":      {numbers, true},
		"sub-01_task-wave_eeg.json":           {"{}", true},
		"sub-01_task-wave_eeg.edf":            {"0", false},
		"run-1_left.tsv":                      {header, false},
		"dataset_description.json":            {`{"Name": "x", "BIDSVersion": "1.10.0"}`, true},
		"participants.tsv":                    {"participant_id\n", true},
		"channels.tsv":                        {"name\ttracked_point\n", true},
		"motion.json":                         {`{"SamplingFrequency": 50}`, true},
		"recordings/motion.json":              {`{"ax": [1, 2]}`, false},
		"recordings/channels.tsv":             {header, false},
		"recordings/participants.tsv":         {header, false},
		"recordings/dataset_description.json": {"{}", false},
	} {
		if got := (bids.Format{}).Sniff([]byte(c.head), name); got != c.want {
			t.Errorf("%s: %v, want %v", name, got, c.want)
		}
	}
}

// TestOtherFiles reads what is no motion: nothing, with a notice where data
// are passed over.
func TestOtherFiles(t *testing.T) {
	if d := cmp.Diff([]string{".tsv"}, (bids.Format{}).Extensions()); d != "" {
		t.Error(d)
	}
	for name, want := range map[string][]string{
		"sub-01_task-wave_channels.tsv":   nil,
		"dataset_description.json":        nil,
		"sub-01_task-wave_motion.json":    nil,
		"sub-01_task-wave_physio.tsv.gz":  {"is a BIDS file of another kind (physio) and is left out ()"},
		"sub-01_task-wave_electrodes.tsv": {"is a BIDS file of another kind (electrodes) and is left out ()"},
	} {
		takes, notices, err := set{}.read(name)
		if d := cmp.Diff(want, notices); d != "" || len(takes) > 0 || err != nil {
			t.Errorf("%s: %d takes, %v\n%s", name, len(takes), err, d)
		}
	}
}
