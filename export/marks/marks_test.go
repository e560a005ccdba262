package marks_test

import (
	"fmt"
	"maps"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/export/marks"
)

// noon is the time at which every mark of the tests is made.
func noon() time.Time { return time.Date(2026, 3, 1, 12, 0, 0, 0, time.UTC) }

func open(t rapid.TB, dir string) *marks.Log {
	t.Helper()
	l, err := marks.Open(dir, "pim", noon)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func set(t rapid.TB, l *marks.Log, take string, m marks.Mark) {
	t.Helper()
	if err := l.Set(take, m); err != nil {
		t.Fatal(err)
	}
}

// contents reads the file of marks of a folder.
func contents(t rapid.TB, dir string) string {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(dir, marks.Name))
	if err != nil {
		t.Fatal(err)
	}
	return string(data)
}

func checkMarks(t rapid.TB, dir string, want map[string]marks.Mark) {
	t.Helper()
	got, err := marks.Read(dir)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Fatalf("marks (-want +got):\n%s", diff)
	}
}

func TestTheFile(t *testing.T) {
	dir := t.TempDir()
	l := open(t, dir)
	if _, err := os.Stat(filepath.Join(dir, marks.Name)); !os.IsNotExist(err) {
		t.Errorf("opening a log made a file: %v", err)
	}
	set(t, l, "bow-1~3", marks.Drop)
	set(t, l, "bow-1~3", marks.Drop) // no news
	set(t, l, `the "great", bow`, marks.Keep)
	if _, _, ok, err := l.Undo(); !ok || err != nil {
		t.Fatalf("undo: %v, %v", ok, err)
	}
	want := `time,take,mark,undo,by
2026-03-01T12:00:00Z,bow-1~3,drop,,pim
2026-03-01T12:00:00Z,"the ""great"", bow",keep,,pim
2026-03-01T12:00:00Z,"the ""great"", bow",none,undo,pim
`
	if diff := cmp.Diff(want, contents(t, dir)); diff != "" {
		t.Errorf("file (-want +got):\n%s", diff)
	}
	checkMarks(t, dir, map[string]marks.Mark{"bow-1~3": marks.Drop})
}

func TestUndoGoesBackBeyondARestart(t *testing.T) {
	dir := t.TempDir()
	l := open(t, dir)
	set(t, l, "a", marks.Drop)
	set(t, l, "b", marks.Keep)
	set(t, l, "a", marks.Keep)
	l = open(t, dir)
	for _, want := range []struct {
		take string
		mark marks.Mark
	}{{"a", marks.Drop}, {"b", marks.None}, {"a", marks.None}} {
		take, m, ok, err := l.Undo()
		if err != nil || !ok || take != want.take || m != want.mark {
			t.Fatalf("undo gave %s of %s, %v, %v; want %s of %s", m, take, ok, err, want.mark, want.take)
		}
		l = open(t, dir)
	}
	if _, _, ok, err := l.Undo(); ok || err != nil {
		t.Errorf("there was nothing to undo, yet: %v, %v", ok, err)
	}
	checkMarks(t, dir, map[string]marks.Mark{})
}

func TestNobodyMarked(t *testing.T) { checkMarks(t, t.TempDir(), map[string]marks.Mark{}) }

// TestTornAnywhere cuts the file at every byte, as a crash may: every mark whose
// line end was written is there, nothing is refused, and marking goes on.
func TestTornAnywhere(t *testing.T) {
	dir := t.TempDir()
	l := open(t, dir)
	ids := []string{"a", `b "c"`, "d,e", "ünder"}
	for _, id := range ids {
		set(t, l, id, marks.Drop)
	}
	whole := contents(t, dir)
	for cut := range len(whole) {
		dir := t.TempDir()
		if err := os.WriteFile(filepath.Join(dir, marks.Name), []byte(whole[:cut]), 0o666); err != nil {
			t.Fatal(err)
		}
		want := map[string]marks.Mark{}
		for _, id := range ids[:max(0, strings.Count(whole[:cut], "\n")-1)] {
			want[id] = marks.Drop
		}
		got, err := marks.Read(dir)
		if err != nil {
			t.Fatalf("cut at byte %d: %v", cut, err)
		}
		for id := range want {
			if got[id] != marks.Drop {
				t.Fatalf("cut at byte %d: the mark of %s is lost", cut, id)
			}
		}
		if len(got) > len(want)+1 {
			t.Fatalf("cut at byte %d: marks from nowhere: %v", cut, got)
		}
		got["later"] = marks.Keep
		set(t, open(t, dir), "later", marks.Keep)
		checkMarks(t, dir, got)
	}
}

func TestFaultsNameTheLine(t *testing.T) {
	for _, tc := range []struct{ name, text, says string }{
		{"another file", "id,colour\n", "line 1: the first line is not time,take,mark,undo,by"},
		{"unknown mark", "time,take,mark,undo,by\nt,a,drop,,\nt,a,maybe,,\n", `line 3: unknown mark "maybe"; legal marks are drop, keep and none`},
		{"too few fields", "time,take,mark,undo,by\nt,a\nt,a,drop,,\n", "line 2: wrong number of fields"},
		{"a quote left open", "time,take,mark,undo,by\nt,\"a,drop,,\nt,b,drop,,\n", "line 2: "},
		{"undo", "time,take,mark,undo,by\nt,a,drop,yes,\n", `line 2: the column undo holds "yes"`},
		{"no take", "time,take,mark,undo,by\nt,,drop,,\n", "line 2: no take is named"},
	} {
		t.Run(tc.name, func(t *testing.T) {
			dir := t.TempDir()
			if err := os.WriteFile(filepath.Join(dir, marks.Name), []byte(tc.text), 0o666); err != nil {
				t.Fatal(err)
			}
			_, err := marks.Read(dir)
			if err == nil || !strings.Contains(err.Error(), tc.says) || !strings.Contains(err.Error(), marks.Name) {
				t.Errorf("error %v, want one that names the file and says %q", err, tc.says)
			}
			if _, err := marks.Open(dir, "", noon); err == nil {
				t.Error("a log was opened on a file that cannot be read")
			}
			if contents(t, dir) != tc.text {
				t.Error("the file was changed")
			}
		})
	}
}

// TestEditedByHand: a spreadsheet's line ends and mark of UTF-8, and no line end
// at the end.
func TestEditedByHand(t *testing.T) {
	dir := t.TempDir()
	text := "\ufefftime,take,mark,undo,by\r\nt,a,drop,,\r\n\r\nt,b,keep,,\r\nt,c,drop,,ann"
	if err := os.WriteFile(filepath.Join(dir, marks.Name), []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	want := map[string]marks.Mark{"a": marks.Drop, "b": marks.Keep, "c": marks.Drop}
	checkMarks(t, dir, want)
	set(t, open(t, dir), "d", marks.Keep)
	want["d"] = marks.Keep
	checkMarks(t, dir, want)
}

func TestWhatCannotBeMarked(t *testing.T) {
	l := open(t, t.TempDir())
	if err := l.Set("a\nb", marks.Drop); err == nil {
		t.Error("a take with a line break in its id was marked")
	}
	if err := l.Set("a", "maybe"); err == nil {
		t.Error("a take was marked maybe")
	}
}

// TestTwoAtOnce: what another log adds to the file is kept, and counts.
func TestTwoAtOnce(t *testing.T) {
	dir := t.TempDir()
	one, two := open(t, dir), open(t, dir)
	set(t, one, "a", marks.Drop)
	set(t, two, "b", marks.Keep)
	set(t, one, "b", marks.Drop)
	set(t, two, "c", marks.Keep)
	want := map[string]marks.Mark{"a": marks.Drop, "b": marks.Drop, "c": marks.Keep}
	checkMarks(t, dir, want)
	if diff := cmp.Diff(want, two.All()); diff != "" {
		t.Errorf("the second log (-want +got):\n%s", diff)
	}
}

// TestAnyOrder marks and takes back at random and holds the file, read again
// after every step, against a plain list.
func TestAnyOrder(t *testing.T) {
	parent, n := t.TempDir(), 0
	rapid.Check(t, func(t *rapid.T) {
		n++
		dir := filepath.Join(parent, fmt.Sprint(n))
		if err := os.Mkdir(dir, 0o777); err != nil {
			t.Fatal(err)
		}
		l := open(t, dir)
		states := []map[string]marks.Mark{{}}
		id := rapid.StringOfN(rapid.RuneFrom([]rune(`ab",; é'~`+"\u202e")), 1, 3, -1)
		for range rapid.IntRange(0, 12).Draw(t, "steps") {
			if rapid.IntRange(0, 3).Draw(t, "undo") == 0 {
				_, _, ok, err := l.Undo()
				if err != nil || ok != (len(states) > 1) {
					t.Fatalf("undo: %v, %v after %d marks", ok, err, len(states)-1)
				}
				if ok {
					states = states[:len(states)-1]
				}
			} else {
				now := maps.Clone(states[len(states)-1])
				take, m := id.Draw(t, "take"), rapid.SampledFrom([]marks.Mark{marks.Drop, marks.Keep, marks.None}).Draw(t, "mark")
				before := l.Of(take)
				set(t, l, take, m)
				if delete(now, take); m != marks.None {
					now[take] = m
				}
				if m != before {
					states = append(states, now)
				}
			}
			if rapid.Bool().Draw(t, "restart") {
				l = open(t, dir)
			}
			if l.Undoable() != len(states)-1 {
				t.Fatalf("%d marks can be taken back, want %d", l.Undoable(), len(states)-1)
			}
			checkMarks(t, dir, states[len(states)-1])
		}
	})
}

// FuzzRead reads any bytes as a file of marks. What is read without an error
// can be added to.
func FuzzRead(f *testing.F) {
	f.Add([]byte("time,take,mark,undo,by\nt,a,drop,,\nt,a,none,undo,\n"))
	f.Add([]byte("time,take,mark,undo,by\r\nt,\"a \"\"b\"\"\",keep,,x"))
	f.Add([]byte("time,ta"))
	f.Add([]byte("\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		dir := t.TempDir()
		if err := os.WriteFile(filepath.Join(dir, marks.Name), data, 0o666); err != nil {
			t.Fatal(err)
		}
		want, err := marks.Read(dir)
		if err != nil {
			return
		}
		set(t, open(t, dir), "later", marks.Drop)
		want["later"] = marks.Drop
		checkMarks(t, dir, want)
	})
}

func ExampleRead() {
	dir, err := os.MkdirTemp("", "set")
	if err != nil {
		panic(err)
	}
	defer os.RemoveAll(dir)
	l, err := marks.Open(dir, "pim", time.Now)
	if err != nil {
		panic(err)
	}
	if err := l.Set("bow-1~3", marks.Drop); err != nil {
		panic(err)
	}
	m, err := marks.Read(dir)
	fmt.Println(m, err)
	// Output: map[bow-1~3:drop] <nil>
}
