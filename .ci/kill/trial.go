package main

import (
	"bytes"
	"crypto/sha256"
	"errors"
	"fmt"
	"io/fs"
	"maps"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"time"
)

// nobody is a user without rights, as whom runs are made where this one has
// them: the superuser may write into a read-only folder.
const nobody = 65534

// trial is one recording and the set that a run left alone makes of it.
type trial struct {
	program, dir, recording string
	random                  *rand.Rand
	user                    *syscall.Credential // as whom runs are made, nil for this user
	want                    map[string]string   // SHA-256 of each file
	took                    time.Duration
	writing                 time.Duration // of it, writing the set
}

// disturbance is something that happens to a run.
type disturbance interface {
	// folder makes the folder in which the run works.
	folder(dir string) error
	// strike does it; the run may end by itself at any time.
	strike(dir string, run *exec.Cmd) error
	// lift undoes it, so that the next run can do its work.
	lift(dir string) error
	// done takes the folder away.
	done(dir string) error
}

// prepare writes the recording and lets one run finish.
func (t *trial) prepare() error {
	t.recording = filepath.Join(t.dir, "long.csv")
	if err := os.WriteFile(t.recording, recording(), 0o644); err != nil {
		return err
	}
	if err := t.stepDown(); err != nil {
		return err
	}
	room := filepath.Join(t.dir, "whole")
	if err := makeRoom(room); err != nil {
		return err
	}
	// Measured once, so that runs are mostly about writing.
	measured, err := exec.Command(t.program, "measure", t.recording, "--json").Output()
	if err != nil {
		return fmt.Errorf("measure: %w", err)
	}
	if err := os.WriteFile(t.variation(), measured, 0o644); err != nil {
		return err
	}
	begin := time.Now()
	run, said := t.command(room)
	if err := run.Start(); err != nil {
		return err
	}
	ended := make(chan error, 1)
	go func() { ended <- run.Wait() }()
	await(filepath.Join(room, "set", "takes"), ended)
	before := time.Since(begin)
	if err := <-ended; err != nil {
		return fmt.Errorf("a run left alone: %w\n%s", err, said)
	}
	t.took = time.Since(begin)
	t.writing = t.took - before
	if t.want, err = sums(filepath.Join(room, "set")); err == nil {
		fmt.Printf("a run left alone: %d files in %v, the last %v writing\n", len(t.want), t.took.Round(time.Millisecond), t.writing.Round(time.Millisecond))
	}
	return err
}

func (t *trial) variation() string { return filepath.Join(t.dir, "variation.json") }

// stepDown has the runs made as nobody, with a program that nobody may run, where
// this user may do that and the folder is one that everybody may enter.
func (t *trial) stepDown() error {
	if err := os.Chmod(t.dir, 0o755); err != nil {
		return err
	}
	for dir := t.dir; ; dir = filepath.Dir(dir) {
		info, err := os.Stat(dir)
		if err != nil {
			return err
		}
		if os.Geteuid() != 0 || info.Mode()&0o001 == 0 {
			return nil
		}
		if dir == filepath.Dir(dir) {
			break
		}
	}
	program, err := os.ReadFile(t.program)
	if err != nil {
		return err
	}
	t.program = filepath.Join(t.dir, "program")
	t.user = &syscall.Credential{Uid: nobody, Gid: nobody}
	return os.WriteFile(t.program, program, 0o755)
}

// recording returns invented takes: 32 of two channels.
func recording() []byte {
	var b bytes.Buffer
	b.WriteString("take,label,subject,time_s,left.accel.x,left.accel.y\n")
	for n := range 32 {
		for i := range 48 {
			u := float64(i) / 47 * float64(1+n%2)
			fmt.Fprintf(&b, "t%03d,cue-%d,person-%d,%.2f,%.5f,%.5f\n", n, n%2, n%4, float64(i)/50, math.Sin(6*u+float64(n)/30), math.Cos(5*u*u))
		}
	}
	return b.Bytes()
}

// makeRoom makes a folder that nobody may write into.
func makeRoom(dir string) error {
	if err := os.Mkdir(dir, 0o777); err != nil {
		return err
	}
	return os.Chmod(dir, 0o777)
}

// command returns one run of grow and what it says.
func (t *trial) command(room string) (*exec.Cmd, *bytes.Buffer) {
	run := exec.Command(t.program, "grow", t.recording, "--variation", t.variation(), "--per-take", "192", "--buckets", "8", "--tables", "takes,frames",
		"--distance", "euclidean-dependent", "--takes-per-label", "1", "--repeats", "1", "--out", filepath.Join(room, "set"))
	said := &bytes.Buffer{}
	run.Stdout, run.Stderr = said, said
	run.Env = append(os.Environ(), "TMPDIR="+room)
	run.SysProcAttr = &syscall.SysProcAttr{Credential: t.user}
	return run, said
}

// disturb does something to so many runs, and reports how they ended.
func (t *trial) disturb(name string, times int, d disturbance) error {
	ends := map[string]int{}
	for i := range times {
		room := filepath.Join(t.dir, fmt.Sprintf("%T%d", d, i))
		if err := d.folder(room); err != nil {
			fmt.Printf("%s: not done here: %v\n", name, err)
			return nil
		}
		end, err := t.one(room, d)
		if err != nil {
			return fmt.Errorf("run %d: %w", i, err)
		}
		ends[end]++
		if err := d.done(room); err != nil {
			return err
		}
	}
	fmt.Printf("%s %d times: %d sets were whole, %d unfinished ones were gone on with, %d were begun anew\n", name, times, ends["whole"], ends["resumed"], ends["anew"])
	return nil
}

// one disturbs runs in one folder until one is left alone, and holds the set
// against that of a run that always was.
func (t *trial) one(room string, d disturbance) (end string, err error) {
	set := filepath.Join(room, "set")
	for strikes := 1; ; strikes++ {
		run, said := t.command(room)
		if err := t.strike(run, room, d); err != nil {
			return "", fmt.Errorf("%w\n%s", err, said)
		}
		if err := d.lift(room); err != nil {
			return "", err
		}
		if _, err := os.Lstat(filepath.Join(set, "manifest.json")); err == nil {
			return "whole", t.check(set, true)
		}
		if strikes == 3 || t.random.IntN(3) > 0 {
			break
		}
	}
	run, said := t.command(room)
	if err := run.Run(); err != nil {
		return "", fmt.Errorf("the next run: %w\n%s", err, said)
	}
	end = "anew"
	if strings.Contains(said.String(), "going on with the unfinished set") {
		end = "resumed"
	}
	return end, t.check(set, false)
}

// strike starts a run and disturbs it at a random moment: mostly while the set is
// being written, sometimes before.
func (t *trial) strike(run *exec.Cmd, room string, d disturbance) error {
	if err := run.Start(); err != nil {
		return err
	}
	ended := make(chan error, 1)
	go func() { ended <- run.Wait() }()
	within := t.took
	if t.random.IntN(4) > 0 {
		within = t.writing
		await(filepath.Join(room, "set", "takes"), ended)
	}
	time.Sleep(time.Duration(1.1 * t.random.Float64() * float64(within)))
	if len(ended) > 0 { // too late: runs are quicker than the one that was timed
		t.took, t.writing = t.took*9/10, t.writing*9/10
	}
	if err := d.strike(room, run); err != nil {
		return errors.Join(err, run.Process.Kill(), <-ended)
	}
	var failed *exec.ExitError
	if err := <-ended; err != nil && !errors.As(err, &failed) {
		return err
	}
	if code := run.ProcessState.ExitCode(); code > 1 {
		return fmt.Errorf("exit code %d", code)
	}
	return nil
}

// await waits until there is a folder, or a run has ended.
func await(dir string, ended chan error) {
	for {
		if _, err := os.Stat(dir); err == nil {
			return
		}
		select {
		case err := <-ended:
			ended <- err
			return
		case <-time.After(time.Millisecond):
		}
	}
}

// check holds a set against that of a run left alone. A run that was stopped in
// its last step may leave something of the folder of an unfinished set, which
// verify must not mind.
func (t *trial) check(set string, struck bool) error {
	if out, err := exec.Command(t.program, "verify", set).CombinedOutput(); err != nil {
		return fmt.Errorf("verify: %w\n%s", err, out)
	}
	got, err := sums(set)
	if err != nil {
		return err
	}
	if struck {
		maps.DeleteFunc(got, func(name, _ string) bool { return strings.HasPrefix(name, "unfinished/") })
	}
	if !maps.Equal(t.want, got) {
		return fmt.Errorf("the set is another:\n%v\nwant\n%v", got, t.want)
	}
	return nil
}

// sums returns the SHA-256 of every file in a folder, by name.
func sums(dir string) (map[string]string, error) {
	out := map[string]string{}
	err := fs.WalkDir(os.DirFS(dir), ".", func(name string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := os.ReadFile(filepath.Join(dir, name))
		out[name] = fmt.Sprintf("%x", sha256.Sum256(data))
		return err
	})
	return out, err
}
