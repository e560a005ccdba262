package export_test

import (
	"errors"
	"fmt"
	"io/fs"
	"maps"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/export"
)

// tree lists what a folder holds: every file with its content, and every
// folder, by the name inside it.
func tree(t testing.TB, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	err := fs.WalkDir(os.DirFS(dir), ".", func(name string, e fs.DirEntry, err error) error {
		if err != nil || name == "." {
			return err
		}
		if e.IsDir() {
			out[name+"/"] = ""
			return nil
		}
		data, err := os.ReadFile(filepath.Join(dir, name))
		out[name] = string(data)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// put writes a file with its folders.
func put(t testing.TB, path, text string) {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
}

const plan = "unfinished/plan.json"

// left returns what a run that was killed left of a set of these options: the
// plan, and an empty lock.
func left(t testing.TB, o export.Options) map[string]string {
	t.Helper()
	dir := t.TempDir()
	w, err := export.Create(dir, wristband(t), o)
	if err != nil {
		t.Fatal(err)
	}
	defer w.Discard()
	out := map[string]string{}
	for name, text := range tree(t, dir) {
		if !strings.HasSuffix(name, "/") {
			out[name] = text
		}
	}
	return out
}

// with returns the files and some more.
func with(files map[string]string, more ...string) map[string]string {
	out := maps.Clone(files)
	for i := 0; i < len(more); i += 2 {
		out[more[i]] = more[i+1]
	}
	return out
}

// TestCreateRefuses: what stands in the way is named, and stays as it was.
func TestCreateRefuses(t *testing.T) {
	killed := left(t, export.Options{})
	for _, tc := range []struct {
		name  string
		files map[string]string
		want  string
	}{
		{"a set", map[string]string{"manifest.json": "{}"}, "already holds a set; choose another folder or remove it"},
		{"a set with a plan", with(killed, "manifest.json", "{}"), "already holds a set"},
		{"a file", map[string]string{"notes.txt": "mine"}, "notes.txt"},
		{"a hidden file", map[string]string{".keep": ""}, ".keep"},
		{"a folder", map[string]string{"pictures/a.png": "x"}, "pictures"},
		{"many files", map[string]string{"a": "", "b": "", "c": "", "d": "", "e": "", "f": "", "g": ""}, "a, b, c, d, e and 2 more"},
		{"tables without a plan", map[string]string{"takes/split=train/part-00000.parquet": "x"}, "takes"},
		{"a plan of another program", map[string]string{plan: "something else"}, "plan.json was not written by this version"},
		{"a plan of another version", map[string]string{plan: "{}"}, "plan.json was not written by this version"},
		{"a file in the plan's folder", with(killed, "unfinished/notes.txt", "mine"), "unfinished/notes.txt"},
		{"a file named as the plan's folder", map[string]string{"unfinished": "mine"}, "unfinished"},
		{"an unfinished set and a file", with(killed, "notes.txt", "mine", "takes/split=train/part-00000.parquet", "x"), "notes.txt"},
		{"an unfinished set and a table's file", with(killed, "takes/split=train/mine.parquet", "x"), "takes/split=train/mine.parquet"},
		{"an unfinished set and another split", with(killed, "takes/split=mine/part-00000.parquet", "x"), "takes/split=mine"},
		{"an attachment not recorded", with(killed, "score.json", "x"), "score.json"},
		{"a damaged record", with(killed, "unfinished/attached-score.json", "{"), "attached-score.json"},
	} {
		t.Run(tc.name, func(t *testing.T) {
			dir := t.TempDir()
			for name, text := range tc.files {
				put(t, filepath.Join(dir, name), text)
			}
			before := tree(t, dir)
			_, err := export.Create(dir, wristband(t), export.Options{})
			if err == nil || !strings.Contains(err.Error(), tc.want) || !strings.Contains(err.Error(), dir) {
				t.Errorf("error %v, want one with %q and the folder", err, tc.want)
			}
			if vacant := export.Vacant(dir); vacant == nil {
				t.Error("Vacant finds nothing in the way")
			}
			if diff := cmp.Diff(before, tree(t, dir)); diff != "" {
				t.Errorf("the folder changed (-before +after):\n%s", diff)
			}
		})
	}
}

// TestCreateBeginsAgain: what an unfinished set left without finishing it is
// removed.
func TestCreateBeginsAgain(t *testing.T) {
	l, takes := wristband(t), troupe(wristband(t), 2)
	clean := t.TempDir()
	write(t, clean, l, bucketed(), takes)
	want := tree(t, clean)
	killed := left(t, bucketed())
	for name, files := range map[string]map[string]string{
		"nothing":         {},
		"a lock":          {"unfinished/lock": ""},
		"half a plan":     {"unfinished/lock": "", "unfinished/plan.json.0123abcd.partial": "{"},
		"a plan":          killed,
		"parts":           with(killed, "takes/split=train/part-00000.parquet", "old", "frames/split=test/part-00002_00007.parquet.0123abcd.partial", "old"),
		"an attachment":   with(killed, "unfinished/attached-report.html", `{"path":"report.html","bytes":4}`, "report.html", "old"),
		"half a one":      with(killed, "unfinished/attached-score.json", `{"path":"score.json","bytes":4}`, "score.json.0123abcd.partial", "ol"),
		"half a manifest": with(killed, "manifest.json.0123abcd.partial", "{"),
		"lost parts":      with(killed, "unfinished/bucket-00001.json", `{"files":[{"path":"takes/split=train/part-00001.parquet","bytes":4}]}`),
		"half a bucket":   with(killed, "unfinished/bucket-00001.json.0123abcd.partial", `{`),
	} {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			for name, text := range files {
				put(t, filepath.Join(dir, name), text)
			}
			if err := export.Vacant(dir); err != nil {
				t.Errorf("Vacant: %v", err)
			}
			write(t, dir, l, bucketed(), takes)
			if diff := cmp.Diff(want, tree(t, dir)); diff != "" {
				t.Errorf("the set is not that of an empty folder (-want +got):\n%s", diff)
			}
		})
	}
}

// TestCreateRefusesAnotherPlan: every difference is told by its key, and the
// unfinished set stays.
func TestCreateRefusesAnotherPlan(t *testing.T) {
	l := wristband(t)
	dir := t.TempDir()
	for name, text := range left(t, bucketed()) {
		put(t, filepath.Join(dir, name), text)
	}
	before := tree(t, dir)
	for want, change := range map[string]func(*export.Options){
		"plan.reach was 1 and is now 2":                  func(o *export.Options) { o.Plan = []byte(`{"reach": 2, "labels": ["curtain", "spotlight"]}`) },
		`seed was "42" and is now "43"`:                  func(o *export.Options) { o.Seed = 43 },
		`program_version was "0.1.0" and is now "0.2.0"`: func(o *export.Options) { o.Version = "0.2.0" },
		"buckets was 3 and is now 4":                     func(o *export.Options) { o.Buckets = 4 },
		`recordings.0.sha256 was "00ff" and is now "00fe"`: func(o *export.Options) {
			o.Recordings = []export.Recording{{Path: "recordings/ada.csv", Bytes: 1200, SHA256: "00fe"}}
		},
		`tables was ["takes","frames"] and is now ["takes"]`:           func(o *export.Options) { o.Tables = nil },
		"file_bytes was 10240 and is now 30; row_group_bytes was 4096": func(o *export.Options) { o.FileBytes, o.RowGroupBytes = 30, 8 },
	} {
		o := bucketed()
		change(&o)
		_, err := export.Create(dir, l, o)
		if err == nil || !strings.Contains(err.Error(), want) || !strings.Contains(err.Error(), "unfinished set of another plan") {
			t.Errorf("error %v, want one with %q", err, want)
		}
		if diff := cmp.Diff(before, tree(t, dir)); diff != "" {
			t.Errorf("the folder changed (-before +after):\n%s", diff)
		}
	}
}

func TestCreateMakesFolders(t *testing.T) {
	root := t.TempDir()
	dir := filepath.Join(root, "a", "b", "set")
	if err := export.Vacant(dir); err != nil {
		t.Errorf("Vacant: %v", err)
	}
	w, err := export.Create(dir, wristband(t), export.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if err := w.Discard(); err != nil {
		t.Fatal(err)
	}
	if left := tree(t, root); len(left) > 0 {
		t.Errorf("Discard left %v", left)
	}
	if err := w.Discard(); err != nil {
		t.Errorf("a second Discard: %v", err)
	}
	if err := w.Add(troupe(wristband(t), 0)[0]); err == nil {
		t.Error("Add after Discard: no error")
	}
}

// TestCreateThroughLink: a link to a folder is looked into.
func TestCreateThroughLink(t *testing.T) {
	root := t.TempDir()
	put(t, filepath.Join(root, "real", "notes.txt"), "mine")
	link := filepath.Join(root, "link")
	if err := os.Symlink(filepath.Join(root, "real"), link); err != nil {
		t.Skipf("this system makes no links: %v", err)
	}
	if _, err := export.Create(link, wristband(t), export.Options{}); err == nil || !strings.Contains(err.Error(), "notes.txt") {
		t.Errorf("error %v, want one that names notes.txt", err)
	}
}

func TestCreateNamesTheCause(t *testing.T) {
	root := t.TempDir()
	put(t, filepath.Join(root, "file"), "")
	for _, dir := range []string{filepath.Join(root, "file"), filepath.Join(root, "file", "set")} {
		_, err := export.Create(dir, wristband(t), export.Options{})
		if err == nil || !strings.Contains(err.Error(), filepath.Join(root, "file")) {
			t.Errorf("%s: error %v, want one that names the file", dir, err)
		}
		if err := export.Vacant(dir); err == nil {
			t.Errorf("%s: Vacant finds nothing in the way", dir)
		}
	}
}

func TestCreateInFolderThatCannotBeWritten(t *testing.T) {
	if os.Geteuid() == 0 {
		t.Skip("the superuser may write everywhere")
	}
	dir := t.TempDir()
	if err := os.Chmod(dir, 0o555); err != nil {
		t.Fatal(err)
	}
	for _, path := range []string{dir, filepath.Join(dir, "set")} {
		_, err := export.Create(path, wristband(t), export.Options{})
		if !errors.Is(err, fs.ErrPermission) || !strings.Contains(err.Error(), path) {
			t.Errorf("%s: error %v, want one that names it and the cause", path, err)
		}
	}
}

func TestOptionsAreChecked(t *testing.T) {
	for _, tc := range []struct {
		options export.Options
		want    []string
	}{
		{export.Options{Tables: []export.Table{"rows"}}, []string{`unknown table "rows"; legal tables are takes, frames and windows`}},
		{export.Options{RowGroupBytes: -1, FileBytes: -5}, []string{"row groups of -1 bytes", "files of -5 bytes"}},
		{export.Options{RowGroupBytes: 2 << 30}, []string{"legal are 1 to 1073741824"}},
		{export.Options{Plan: []byte("{")}, []string{"plan is not valid JSON"}},
	} {
		dir := filepath.Join(t.TempDir(), "set")
		_, err := export.Create(dir, wristband(t), tc.options)
		for _, want := range tc.want {
			if err == nil || !strings.Contains(err.Error(), want) {
				t.Errorf("error %v, want one with %q", err, want)
			}
		}
		if _, err := os.Stat(dir); !errors.Is(err, fs.ErrNotExist) {
			t.Error("the folder was made")
		}
	}
}

func TestChannelNamesAreChecked(t *testing.T) {
	for _, tc := range []struct {
		names []string
		want  string
	}{
		{nil, "at least one channel"},
		{[]string{"x", ""}, `channel name ""`},
		{[]string{"x\xff"}, "not UTF-8"},
		{[]string{"x", "y", "x"}, "channels x and x"},
		{[]string{"label", "label_channel"}, "would share the column label_channel"},
	} {
		l := &channels.Layout{}
		for _, name := range tc.names {
			l.Channels = append(l.Channels, channels.Channel{Name: name})
		}
		if _, err := export.Create(t.TempDir(), l, export.Options{}); err == nil || !strings.Contains(err.Error(), tc.want) {
			t.Errorf("channels %q: error %v, want one with %q", tc.names, err, tc.want)
		}
	}
}

// TestAddRefuses: a take that cannot stand in a set is named with the reason,
// and the set is the same as without it.
func TestAddRefuses(t *testing.T) {
	l := wristband(t)
	good := troupe(l, 1)
	clean := t.TempDir()
	write(t, clean, l, both(), good)
	large := int64(1) << 40
	for _, tc := range []struct {
		name  string
		spoil func(*channels.Take)
		want  string
	}{
		{"no id", func(t *channels.Take) { t.ID = "" }, "without an id"},
		{"no layout", func(t *channels.Take) { t.Layout = nil }, "channels are not those of the set"},
		{"another layout", func(t *channels.Take) { t.Layout = wide(6) }, "channels are not those of the set"},
		{"no frames", func(t *channels.Take) { t.Time, t.Data = nil, nil }, "0 frames"},
		{"a value short", func(t *channels.Take) { t.Data = t.Data[1:] }, "119 values for 20 frames of 6 channels"},
		{"a split", func(t *channels.Take) { t.Split = "spare" }, `unknown split "spare"`},
		{"text", func(t *channels.Take) { t.Label = "\xff" }, "not UTF-8"},
		{"time back", func(t *channels.Take) { t.Time[3] = t.Time[2] }, "frame 3: time"},
		{"time unknown", func(t *channels.Take) { t.Time[19] = math.NaN() }, "frame 19: time"},
		{"time too fine", func(t *channels.Take) { t.Time[3] = t.Time[2] + 1e-12 }, "which 32-bit floats cannot tell"},
		{"not a number", func(t *channels.Take) { t.Data[6*4+2] = math.NaN() }, "frame 4: channel left_wrist.accel.z: NaN is not a 32-bit float"},
		{"too large", func(t *channels.Take) { t.Data[3] = -1e39 }, "frame 0: channel left_wrist.gyro.x: -1e+39 is not"},
		{"made for testing", func(t *channels.Take) { t.Split, t.Made = channels.Test, &channels.Making{Source: "a"} }, "a synthetic take cannot be in the split test"},
		{"without a source", func(t *channels.Take) { t.Made = &channels.Making{} }, "needs a source take"},
		{"a source", func(t *channels.Take) { t.Made = &channels.Making{Source: "\xff"} }, "not UTF-8"},
		{"a draw", func(t *channels.Take) { t.Made = &channels.Making{Source: "a", Draw: int(large)} }, "draw 1099511627776"},
		{"a parameter", func(t *channels.Take) {
			t.Made = &channels.Making{Source: "a", Parameters: map[string]float64{"reach": math.Inf(1)}}
		}, `parameter "reach" is +Inf`},
	} {
		t.Run(tc.name, func(t *testing.T) {
			dir := t.TempDir()
			w, err := export.Create(dir, l, both())
			if err != nil {
				t.Fatal(err)
			}
			defer w.Discard()
			bad := troupe(l, 0)[0]
			tc.spoil(bad)
			if err := w.Add(bad); err == nil || !strings.Contains(err.Error(), tc.want) || !strings.Contains(err.Error(), "take "+bad.ID) {
				t.Errorf("error %v, want one with %q and the take", err, tc.want)
			}
			if _, err := fill(w, good); err != nil {
				t.Fatal(err)
			}
			if diff := cmp.Diff(tree(t, clean), tree(t, dir)); diff != "" {
				t.Errorf("the refused take left a trace (-without +with):\n%s", diff)
			}
		})
	}
}

// TestAddCopies: the caller may change a take once it is added.
func TestAddCopies(t *testing.T) {
	l := wristband(t)
	want, dir := t.TempDir(), t.TempDir()
	write(t, want, l, both(), troupe(l, 3))
	w, err := export.Create(dir, l, both())
	if err != nil {
		t.Fatal(err)
	}
	for _, take := range troupe(l, 3) {
		if err := w.Add(take); err != nil {
			t.Fatal(err)
		}
		clear(take.Data)
		clear(take.Time)
		take.Label, take.ID = "changed", "changed"
		if take.Made != nil {
			clear(take.Made.Parameters)
			*take.Made = channels.Making{}
		}
	}
	if _, err := fill(w, nil); err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(tree(t, want), tree(t, dir)); diff != "" {
		t.Errorf("the set changed with the takes (-want +got):\n%s", diff)
	}
}

func TestAttachRefuses(t *testing.T) {
	w, err := export.Create(t.TempDir(), wristband(t), export.Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer w.Discard()
	if err := w.Attach("score.json", nil); err != nil {
		t.Fatal(err)
	}
	for name, want := range map[string]string{
		"": "plain file name", ".": "plain file name", "..": "plain file name", ".hidden": "plain file name", "a/b": "plain file name", `a\b`: "plain file name",
		"manifest.json": "the set itself", "unfinished": "the set itself", "takes": "the set itself", "frames": "the set itself", "x.0123abcd.partial": "the set itself",
		"score.json": "attached already", "Score.json": "attached already",
	} {
		if err := w.Attach(name, nil); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("attach %q: error %v, want one with %q", name, err, want)
		}
	}
}

func TestSealRefusesEmptySet(t *testing.T) {
	root := t.TempDir()
	w, err := export.Create(filepath.Join(root, "set"), wristband(t), export.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if _, err := w.Seal(); err == nil || !strings.Contains(err.Error(), "no take was added") {
		t.Errorf("error %v, want one that says no take was added", err)
	}
	if err := w.Discard(); err != nil {
		t.Fatal(err)
	}
	if left := tree(t, root); len(left) > 0 {
		t.Errorf("Discard left %v", left)
	}
}

func TestSealedSetStays(t *testing.T) {
	dir := t.TempDir()
	w, err := export.Create(dir, wristband(t), export.Options{})
	writeTo(t, w, err, troupe(wristband(t), 1))
	before := tree(t, dir)
	for name, f := range map[string]func() error{
		"Add":    func() error { return w.Add(troupe(wristband(t), 0)[0]) },
		"Attach": func() error { return w.Attach("more.json", nil) },
		"Seal":   func() error { _, err := w.Seal(); return err },
	} {
		if err := f(); err == nil || !strings.Contains(err.Error(), "sealed already") {
			t.Errorf("%s after Seal: error %v, want one that says the set is sealed", name, err)
		}
	}
	if err := w.Discard(); err != nil {
		t.Errorf("Discard after Seal: %v", err)
	}
	if diff := cmp.Diff(before, tree(t, dir)); diff != "" {
		t.Errorf("the sealed set changed (-before +after):\n%s", diff)
	}
}

// TestTwoWriters: a folder in which a set is being written is not taken over.
func TestTwoWriters(t *testing.T) {
	dir, l := t.TempDir(), wristband(t)
	w, err := export.Create(dir, l, both())
	if err != nil {
		t.Fatal(err)
	}
	if err := w.Add(troupe(l, 0)[0]); err != nil {
		t.Fatal(err)
	}
	if _, err := export.Create(dir, l, both()); err == nil {
		t.Skip("this system has no file locks") // the second writer now owns the folder
	} else if !strings.Contains(err.Error(), "another process is writing this set") {
		t.Errorf("error %v, want one that says who is in the way", err)
	}
	if _, err := fill(w, troupe(l, 1)[1:]); err != nil {
		t.Fatalf("the first writer was disturbed: %v", err)
	}
	if v, err := export.Verify(dir); err != nil || !v.Sound() {
		t.Errorf("verify: %v, %v", v, err)
	}
}

func TestParseTable(t *testing.T) {
	for _, want := range export.AllTables() {
		if got, err := export.ParseTable(string(want)); got != want || err != nil {
			t.Errorf("%s: %v, %v", want, got, err)
		}
	}
	for _, text := range []string{"", "Takes", "window"} {
		if _, err := export.ParseTable(text); err == nil || !strings.Contains(err.Error(), fmt.Sprintf("%q; legal tables are takes, frames and windows", text)) {
			t.Errorf("%q: error %v", text, err)
		}
	}
}

// FuzzPlan: whatever the plan and a record of an unfinished set say, a file that
// they do not name is not touched, and a folder that Create accepts ends as a
// sound set.
func FuzzPlan(f *testing.F) {
	killed := left(f, export.Options{})[plan]
	const record = `{"path":"report.html","bytes":12}`
	f.Add([]byte(killed), []byte(record))
	f.Add([]byte(killed), []byte(`{"path":"../mine.txt","bytes":4}`))
	f.Add([]byte(killed[:9]), []byte(record))
	f.Add([]byte(strings.Replace(killed, `"buckets":1`, `"buckets":2`, 1)), []byte(record))
	f.Add([]byte("something else"), []byte(nil))
	f.Fuzz(func(t *testing.T, planned, attached []byte) {
		root := t.TempDir()
		dir := filepath.Join(root, "set")
		put(t, filepath.Join(root, "mine.txt"), "mine")
		put(t, filepath.Join(dir, plan), string(planned))
		put(t, filepath.Join(dir, "unfinished", "attached-report.html"), string(attached))
		put(t, filepath.Join(dir, "report.html"), "perhaps mine")
		w, err := export.CreateOn(&export.Disk{}, dir, wristband(t), export.Options{})
		files := tree(t, root)
		if files["mine.txt"] != "mine" {
			t.Error("a file outside the set was touched")
		}
		if err != nil {
			if files["set/report.html"] != "perhaps mine" || files["set/"+plan] != string(planned) {
				t.Errorf("Create refused (%v), yet changed the folder: %v", err, files)
			}
			return
		}
		if text := strings.ToLower(string(attached)); files["set/report.html"] == "" && !strings.Contains(text, "report.html") && !strings.Contains(text, `\u`) {
			t.Error("a file that no record names was removed")
		}
		w.Discard()
	})
}
