// Package deploy_test carries out what the deployment files say, as the system
// they are for would, with folders of the test in place of the cluster's.
package deploy_test

import (
	"debug/elf"
	"encoding/json"
	"fmt"
	"log"
	"maps"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
)

// TestMain builds the command as the image does, for all tests, into the folder
// that [program] names.
func TestMain(m *testing.M) {
	dir, err := os.MkdirTemp("", "strandwise-deploy-")
	if err != nil {
		log.Fatal(err)
	}
	build := exec.Command("go", "build", "-o", filepath.Join(dir, "strandwise"), "..")
	build.Env = append(os.Environ(), "CGO_ENABLED=0")
	if out, err := build.CombinedOutput(); err != nil {
		log.Fatalf("build: %v\n%s", err, out)
	}
	os.Setenv(folder, dir)
	code := m.Run()
	os.RemoveAll(dir)
	os.Exit(code)
}

const folder = "STRANDWISE_DEPLOY_TEST"

// program returns the folder the command is in.
func program() string { return os.Getenv(folder) }

// theatre writes invented recordings and a plan, and returns their folder.
func theatre(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	var b strings.Builder
	b.WriteString("take,label,subject,time_s,left.accel.x,left.accel.y\n")
	for n := range 24 {
		for i := range 32 {
			u := float64(i) / 31 * float64(1+n%2)
			fmt.Fprintf(&b, "t%02d,cue-%d,person-%d,%.2f,%.5f,%.5f\n", n, n%2, n%3, float64(i)/50, math.Sin(6*u+float64(n)/20), math.Cos(5*u*u))
		}
	}
	for name, text := range map[string]string{
		"recordings/long.csv": b.String(),
		"plan.toml":           "recordings = [\"recordings\"]\nper_take = 3\nrepeats = 1\ntakes_per_label = [1]\ndistance = [\"euclidean-dependent\"]\nout = \"alone\"\nbuckets = 8\n",
	} {
		path := filepath.Join(dir, name)
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// run runs one command line in a folder with more in its environment.
func run(t *testing.T, dir string, env []string, line ...string) string {
	t.Helper()
	c := exec.Command(line[0], line[1:]...)
	c.Dir, c.Env = dir, append(os.Environ(), env...)
	out, err := c.CombinedOutput()
	if err != nil {
		t.Fatalf("%s: %v\n%s", strings.Join(line, " "), err, out)
	}
	return string(out)
}

// contents reads every file of a set.
func contents(t *testing.T, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	if err := filepath.WalkDir(dir, func(path string, e os.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := os.ReadFile(path)
		name, _ := filepath.Rel(dir, path)
		out[name] = string(data)
		return err
	}); err != nil {
		t.Fatal(err)
	}
	return out
}

func read(t *testing.T, name string) string {
	t.Helper()
	text, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// arguments returns the arguments of the only container of a Kubernetes file,
// which stand in the flow style that is JSON.
func arguments(t *testing.T, name string) (out []string) {
	t.Helper()
	m := regexp.MustCompile(`(?m)^ +args: (\[.*\])$`).FindAllStringSubmatch(read(t, name), -1)
	if len(m) != 1 {
		t.Fatalf("%s: %d lines of arguments, want 1", name, len(m))
	}
	if err := json.Unmarshal([]byte(m[0][1]), &out); err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	return out
}

// in puts the folders of the test in place of those of the cluster.
func in(dir string, args []string) []string {
	var out []string
	for _, a := range args {
		for from, to := range map[string]string{"/plan/": dir + "/", "/data/": dir + "/"} {
			if rest, ok := strings.CutPrefix(a, from); ok {
				a = to + rest
			}
		}
		out = append(out, a)
	}
	return out
}

// TestIndexedJob carries the Kubernetes Jobs out: each index of the first, in
// another order than theirs and one of them twice, then the second.
func TestIndexedJob(t *testing.T) {
	bin, dir := filepath.Join(program(), "strandwise"), theatre(t)
	grow, text := arguments(t, "grow.yaml"), read(t, "grow.yaml")
	for _, line := range []string{"completionMode: Indexed", "completions: 8", "parallelism: 8"} {
		if !strings.Contains(text, line+"\n") {
			t.Errorf("grow.yaml does not say %q", line)
		}
	}
	for _, i := range []int{5, 2, 7, 0, 2, 1, 6, 4, 3} {
		run(t, dir, []string{fmt.Sprintf("JOB_COMPLETION_INDEX=%d", i)}, append([]string{bin}, in(dir, grow)...)...)
	}
	run(t, dir, nil, append([]string{bin}, in(dir, arguments(t, "seal.yaml"))...)...)
	run(t, dir, nil, bin, "grow", "--plan", dir+"/plan.toml", dir+"/recordings")
	same(t, dir)
	run(t, dir, nil, bin, "verify", "set")
}

// TestArray carries the Slurm scripts out as an array of three tasks would.
func TestArray(t *testing.T) {
	bin, dir := program(), theatre(t)
	path := "PATH=" + bin + string(os.PathListSeparator) + os.Getenv("PATH")
	script := func(name string, env []string, args ...string) {
		whole, err := filepath.Abs(name)
		if err != nil {
			t.Fatal(err)
		}
		run(t, dir, append(env, path), append([]string{"bash", whole}, args...)...)
	}
	for _, id := range []int{12, 10, 11} {
		script("array.sbatch", []string{"SLURM_ARRAY_TASK_COUNT=3", "SLURM_ARRAY_TASK_MIN=10", "SLURM_CPUS_PER_TASK=2", fmt.Sprintf("SLURM_ARRAY_TASK_ID=%d", id)}, "plan.toml", "set")
	}
	script("seal.sbatch", nil, "set")
	run(t, dir, []string{path}, filepath.Join(bin, "strandwise"), "grow", "--plan", "plan.toml", "--buckets", "3")
	same(t, dir)
}

// same holds the set of the shards against that of one run.
func same(t *testing.T, dir string) {
	t.Helper()
	want, got := contents(t, filepath.Join(dir, "alone")), contents(t, filepath.Join(dir, "set"))
	if !maps.Equal(want, got) {
		t.Errorf("the set of the shards is another: it holds %d files, that of one run %d", len(got), len(want))
		for name := range want {
			if want[name] != got[name] {
				t.Errorf("%s differs or is missing", name)
			}
		}
	}
}

// TestFlagsExist: every flag that a file of the folder gives to strandwise is one
// of the command it is given to.
func TestFlagsExist(t *testing.T) {
	bin := filepath.Join(program(), "strandwise")
	files, err := filepath.Glob("*")
	if err != nil {
		t.Fatal(err)
	}
	line := regexp.MustCompile(`(?:^|\s)(?:exec )?strandwise (grow|seal|verify)\b(.*)$`)
	flag := regexp.MustCompile(`(?:^|[\s"])(--[a-z][a-z0-9-]*)`)
	known, found := map[string][]string{}, 0
	for _, file := range files {
		if strings.HasSuffix(file, ".go") {
			continue
		}
		commands := line.FindAllStringSubmatch(read(t, file), -1)
		for _, l := range strings.Split(read(t, file), "\n") {
			if m := line.FindStringSubmatch(l); m != nil {
				commands = append(commands, m)
			}
		}
		if filepath.Ext(file) == ".yaml" {
			args := arguments(t, file)
			commands = append(commands, []string{"", args[0], " " + strings.Join(args[1:], " ")})
		}
		for _, c := range commands {
			if known[c[1]] == nil {
				help := run(t, ".", nil, bin, c[1], "-h")
				for _, m := range flag.FindAllStringSubmatch(help, -1) {
					known[c[1]] = append(known[c[1]], m[1])
				}
			}
			for _, m := range flag.FindAllStringSubmatch(c[2], -1) {
				found++
				if !slices.Contains(known[c[1]], m[1]) {
					t.Errorf("%s: strandwise %s has no flag %s", file, c[1], m[1])
				}
			}
		}
	}
	if found == 0 {
		t.Error("no flag was found in any file")
	}
}

// TestImageHoldsNothingElse: the image is that of an empty one with the program,
// run by a user that is not root.
func TestImageHoldsNothingElse(t *testing.T) {
	text := read(t, "Dockerfile")
	_, last, ok := strings.Cut(text, "\nFROM scratch\n")
	if !ok || strings.Contains(last, "FROM") || strings.Contains(last, "RUN") {
		t.Error("the image is not made from an empty one")
	}
	if !strings.Contains(text, "CGO_ENABLED=0") {
		t.Error("the program is not linked statically")
	}
	if m := regexp.MustCompile(`(?m)^USER (\d+):\d+$`).FindStringSubmatch(last); m == nil || m[1] == "0" {
		t.Error("the image does not say as which user it runs, by number, or that is root")
	}
	f, err := elf.Open(filepath.Join(program(), "strandwise"))
	if err != nil {
		t.Skip("no ELF file is built here:", err)
	}
	defer f.Close()
	for _, p := range f.Progs {
		if p.Type == elf.PT_INTERP {
			t.Error("the program needs a dynamic linker")
		}
	}
}
