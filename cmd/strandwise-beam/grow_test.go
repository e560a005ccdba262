package main

import (
	"fmt"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"
)

// TestTheDemoIsTheSame: the recordings of the demo, a file for each take, give on
// the built-in prism the files that strandwise grow gives. Names are hidden and
// people held out, which workers must be told.
func TestTheDemoIsTheSame(t *testing.T) {
	dir, flags := theatre(t)
	salt := filepath.Join(dir, "salt")
	if err := os.WriteFile(salt, []byte("this is random enough for a test\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	flags = append(flags, "--per-take", "3", "--tables", "takes,frames,windows", "--window-int16", "--buckets", "6",
		"--hold-out", "0.25", "--hide-subjects", "--subject-salt", salt, "--out")
	alone(t, append(flags, filepath.Join(dir, "alone"))...)
	done := must(t, nil, append(flags, filepath.Join(dir, "apart"), "--shards", "4")...)
	same(t, sums(t, filepath.Join(dir, "alone")), sums(t, filepath.Join(dir, "apart")))
	if done.Shards != 4 {
		t.Errorf("%d shards, want 4", done.Shards)
	}
	// Metrics show progress. Prism may lose those of a bundle that ends as the job
	// does; what was made is counted by the manifest.
	for name, most := range map[string]int64{"takes made": 270, "takes recorded": 120, "buckets": 6} {
		if n := done.Metrics[name]; n < 1 || n > most {
			t.Errorf("metric %s is %d, want 1 to %d", name, n, most)
		}
	}
	if done.Metrics["bytes"] == 0 {
		t.Error("the metrics count no bytes")
	}
	left, err := filepath.Glob(filepath.Join(dir, "*"))
	if err != nil || len(left) != 4 {
		t.Errorf("beside recordings, salt and two sets there is something: %v (%v)", left, err)
	}
}

// TestPrismServer: a prism that was started by itself, with workers in the
// process of the command, makes of the demo's recordings and of an open set of
// two long files what strandwise grow makes; and so does the built-in one of the
// latter.
func TestPrismServer(t *testing.T) {
	endpoint := prism(t)
	data := os.Getenv("STRANDWISE_DATA")
	if data == "" {
		data = filepath.Join("..", "..", "..", "shared", "data")
	}
	data = filepath.Join(data, "sets", "NATOPS")
	dir, demo := theatre(t)
	server := []string{"--runner", "universal", "--endpoint", endpoint, "--environment_type", "LOOPBACK"}
	for name, in := range map[string][]string{
		"demo":   append(demo, "--per-take", "2"),
		"NATOPS": append([]string{filepath.Join(data, "train.csv"), filepath.Join(data, "test.csv"), "--rate", "20", "--per-take", "2", "--seed", "7"}, quick...),
	} {
		t.Run(name, func(t *testing.T) {
			if _, err := os.Stat(in[0]); err != nil {
				t.Skipf("no open data (%v); STRANDWISE_DATA names their folder", err)
			}
			flags := append(in, "--buckets", "5", "--out")
			alone(t, append(flags, filepath.Join(dir, name))...)
			want := sums(t, filepath.Join(dir, name))
			must(t, nil, append(append(flags, filepath.Join(dir, name+"-server")), server...)...)
			same(t, want, sums(t, filepath.Join(dir, name+"-server")))
			if name == "NATOPS" {
				must(t, nil, append(flags, filepath.Join(dir, name+"-inside"))...)
				same(t, want, sums(t, filepath.Join(dir, name+"-inside")))
			}
		})
	}
}

// prism starts prism as a server and returns its address.
func prism(t *testing.T) string {
	t.Helper()
	free, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	_, port, _ := net.SplitHostPort(free.Addr().String())
	free.Close()
	server := exec.Command(program("prism"), "--job_port", port, "--serve_http=false", "--log_level", "error")
	if err := server.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		server.Process.Kill()
		server.Wait()
	})
	endpoint := net.JoinHostPort("localhost", port)
	for t.Context().Err() == nil {
		if c, err := net.Dial("tcp", endpoint); err == nil {
			c.Close()
			break
		}
		time.Sleep(50 * time.Millisecond)
	}
	return endpoint
}

// TestKilledAndTwoAtOnce: a worker that is killed in the middle of a shard, then
// two whole jobs at once into the same folder, leave the set that one undisturbed
// run makes.
func TestKilledAndTwoAtOnce(t *testing.T) {
	dir := t.TempDir()
	flags := append([]string{long(t, dir, 48), "--per-take", "48", "--buckets", "8", "--tables", "takes,frames", "--out"}, quick...)
	at := func(name string, more ...string) []string {
		args := append([]string{}, flags[:len(flags)-len(quick)]...)
		return append(append(append(args, filepath.Join(dir, name)), quick...), more...)
	}
	alone(t, at("alone")...)
	set := filepath.Join(dir, "set")
	killed := exec.Command(program("strandwise-beam"), at("set", "--shards", "2")...)
	if err := killed.Start(); err != nil {
		t.Fatal(err)
	}
	ended := make(chan error, 1)
	go func() { ended <- killed.Wait() }()
	for {
		finished, err := filepath.Glob(filepath.Join(set, "unfinished", "bucket-*.json"))
		if err != nil {
			t.Fatal(err)
		}
		if len(finished) > 0 {
			break
		}
		select {
		case err := <-ended:
			t.Fatalf("the run ended before it was killed: %v", err)
		case <-time.After(time.Millisecond):
		}
	}
	killed.Process.Kill()
	<-ended
	if _, err := os.Stat(filepath.Join(set, "manifest.json")); err == nil {
		t.Fatal("the set was sealed before the run was killed")
	}
	var both sync.WaitGroup
	outcomes := make([]outcome, 2)
	for i := range outcomes {
		both.Go(func() { outcomes[i] = beamed(t, nil, at("set", "--shards", fmt.Sprint(2+i))...) })
	}
	both.Wait()
	done := 0
	for _, o := range outcomes {
		switch {
		case o.code == exitDone:
			done++
		case o.code == exitFault && strings.Contains(o.err, "already holds a set"): // it began when the other had ended
		default:
			t.Errorf("exit code %d\n%s", o.code, o.err)
		}
	}
	if done == 0 {
		t.Error("neither run made the set")
	}
	same(t, sums(t, filepath.Join(dir, "alone")), sums(t, set))
}

// TestWrongUsage is told before anything is read or written.
func TestWrongUsage(t *testing.T) {
	dir := t.TempDir()
	csv, out := long(t, dir, 4), filepath.Join(dir, "set")
	for _, tc := range []struct{ args, want string }{
		{"--plan", "flag needs an argument"},
		{csv, "--out"},
		{csv + " --out " + out + " --runner abacus", "legal are prism and universal"},
		{csv + " --out " + out + " --runner universal", "--endpoint"},
		{csv + " --out " + out + " --shards -1", "--shards: -1 is impossible"},
		{csv + " --out ftp://somewhere/set", "s3://…, gs://… or azblob://…"},
		{csv + " --out s3:///set", "names no bucket"},
		{"- --out " + out, "standard input cannot be read by several processes"},
		{"s3://lab/in " + csv + " --out " + out, "all must lie in one kind of place"},
		{"--out " + out, "no recordings"},
	} {
		o := beamed(t, nil, strings.Fields(tc.args)...)
		if o.code != exitUsage || !strings.Contains(o.err, tc.want) {
			t.Errorf("%s: exit code %d, want %d and %q in\n%s", tc.args, o.code, exitUsage, tc.want, o.err)
		}
	}
	if _, err := os.Stat(out); err == nil {
		t.Error("something was written")
	}
}
