package look

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/export"
)

// TestEveryTakeIsRead holds the index and the signals of every take, in every
// order of looking, against what was written.
func TestEveryTakeIsRead(t *testing.T) {
	takes := troupe(puppets(t), 9, 4, 30, 7, 120)
	for name, o := range map[string]export.Options{"small files": small(), "one file": {}} {
		t.Run(name, func(t *testing.T) {
			s := open(t, write(t, o, takes))
			if s.Takes() != len(takes) {
				t.Fatalf("%d takes, want %d", s.Takes(), len(takes))
			}
			for _, want := range append(takes, takes[0], takes[20], takes[3]) {
				checkTake(t, s, want)
			}
		})
	}
}

func checkTake(t *testing.T, s *Set, want *channels.Take) {
	t.Helper()
	n := s.numberOf(want.ID)
	if n < 0 {
		t.Fatalf("no take %s", want.ID)
	}
	r, x := &s.takes.rows[n], s.takes
	got := []any{x.labels.texts[r.label], x.subjects.texts[r.subject], x.sessions.texts[r.session], r.origin(), r.test, int(r.frames)}
	if diff := cmp.Diff([]any{want.Label, want.Subject, want.Session, string(want.Origin()), want.Split == channels.Test, want.Frames()}, got); diff != "" {
		t.Errorf("take %s (-want +got):\n%s", want.ID, diff)
	}
	m, err := s.motion(r)
	if err != nil {
		t.Fatal(err)
	}
	for i := range want.Time {
		if m.time[i] != float32(want.Time[i]-want.Time[0]) {
			t.Fatalf("take %s: frame %d is at %v", want.ID, i, m.time[i])
		}
		for c, v := range want.Frame(i) {
			if m.channels[c][i] != float32(v) {
				t.Fatalf("take %s: frame %d, channel %d: %v, want %v", want.ID, i, c, m.channels[c][i], v)
			}
		}
	}
	checkMaking(t, s, r, want)
}

func checkMaking(t *testing.T, s *Set, r *row, want *channels.Take) {
	t.Helper()
	m, err := s.making(r)
	if err != nil {
		t.Fatal(err)
	}
	if want.Made == nil {
		if r.source != -1 || r.rank != -1 || m.parameters != nil {
			t.Errorf("take %s, recorded, has source %d, rank %d and parameters %v", want.ID, r.source, r.rank, m.parameters)
		}
		return
	}
	if s.takes.rows[r.source].id != want.Made.Source || int(r.rank) != want.Made.Rank || int(r.draw) != want.Made.Draw {
		t.Errorf("take %s: source %d, rank %d, draw %d", want.ID, r.source, r.rank, r.draw)
	}
	if diff := cmp.Diff(making{want.Made.Source, want.Made.Method, want.Made.Parameters}, m, cmp.AllowUnexported(making{})); diff != "" {
		t.Errorf("take %s (-want +got):\n%s", want.ID, diff)
	}
	for g, name := range s.takes.gates {
		if got := s.takes.values[g][s.numberOf(want.ID)]; got != float32(want.Made.Parameters["gate_"+name]) {
			t.Errorf("take %s: gate %s is %v", want.ID, name, got)
		}
	}
}

// TestLargeRowGroups reads takes one by one from a row group too large to be kept.
func TestLargeRowGroups(t *testing.T) {
	l := puppets(t)
	long := groupValues/8/3 + 1000 // three of these are more than is kept
	takes := troupe(l, 3, 0, long, long+77, long+5)
	for _, take := range takes {
		take.Split = channels.Train
	}
	s := open(t, write(t, export.Options{RowGroupBytes: 1 << 30}, takes))
	for _, n := range []int{1, 2, 0} {
		checkTake(t, s, takes[n])
	}
	if len(s.groups.held) != 0 {
		t.Error("a row group that is too large is kept")
	}
}

func TestThinned(t *testing.T) {
	s := signals{time: []float32{0, 1, 2, 3, 4}, channels: [][]float32{{5, 6, 7, 8, 9}}}
	want := signals{time: []float32{0, 2, 4}, channels: [][]float32{{5, 7, 9}}}
	if diff := cmp.Diff(want, s.thin(2), cmp.AllowUnexported(signals{})); diff != "" {
		t.Errorf("(-want +got):\n%s", diff)
	}
}

func TestWhatIsNoSet(t *testing.T) {
	dir := t.TempDir()
	file := filepath.Join(dir, "file")
	if err := os.WriteFile(file, nil, 0o666); err != nil {
		t.Fatal(err)
	}
	takes := troupe(puppets(t), 4, 2, 20)
	gone := write(t, export.Options{}, takes)
	if err := os.Remove(filepath.Join(gone, "takes", "split=train", "part-00000.parquet")); err != nil {
		t.Fatal(err)
	}
	cut := write(t, export.Options{}, takes)
	if err := os.Truncate(filepath.Join(cut, "takes", "split=train", "part-00000.parquet"), 5000); err != nil {
		t.Fatal(err)
	}
	broken := write(t, export.Options{}, takes)
	overwrite(t, filepath.Join(broken, "takes", "split=train", "part-00000.parquet"))
	for _, tc := range []struct{ name, dir, says string }{
		{"nothing", filepath.Join(dir, "none"), "no such file"},
		{"a file", file, "is a file, not the folder of a set"},
		{"an empty folder", dir, "holds no finished set"},
		{"a file missing", gone, "part-00000.parquet"},
		{"a file cut short", cut, "holds 5000 bytes, the manifest says"},
		{"a broken file", broken, "part-00000.parquet: cannot be read as Parquet"},
	} {
		t.Run(tc.name, func(t *testing.T) {
			s, err := Open(tc.dir)
			if err == nil {
				s.Close()
				t.Fatal("it was opened")
			}
			if !strings.Contains(err.Error(), tc.says) {
				t.Errorf("error %v, want one that says %q", err, tc.says)
			}
		})
	}
}

// overwrite overwrites the footer of a file.
func overwrite(t *testing.T, path string) {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	for i := len(data) - 600; i < len(data)-8; i++ {
		data[i] ^= 0x5a
	}
	if err := os.WriteFile(path, data, 0o666); err != nil {
		t.Fatal(err)
	}
}

// TestOnlyFrames: a manifest can name the table frames alone, and then there is
// nothing to look at.
func TestOnlyFrames(t *testing.T) {
	dir := write(t, export.Options{Tables: []export.Table{export.Takes, export.Frames}}, troupe(puppets(t), 4, 2, 20))
	m, err := export.ReadManifest(dir)
	if err != nil {
		t.Fatal(err)
	}
	var frames []export.File
	for _, f := range m.Files {
		if strings.HasPrefix(f.Path, "frames/") {
			frames = append(frames, f)
		}
	}
	m.Files = frames
	s := &Set{manifest: m, dir: dir}
	if err := s.open(); err == nil || !strings.Contains(err.Error(), "holds no table takes, only frames") {
		t.Errorf("error %v", err)
	}
}

func TestFigureOfASkeleton(t *testing.T) {
	l := puppets(t)
	takes := troupe(l, 2, 1, 40)
	skeleton := &body.Skeleton{Joints: []body.Joint{
		{Name: "left_hand", Parent: -1}, {Name: "elbow", Parent: 0}, {Name: "right_hand", Parent: 0},
	}}
	takes[0].Skeleton, takes[1].Skeleton = skeleton, skeleton
	s := open(t, write(t, small(), takes))
	for _, n := range []int{0, 1} {
		f, err := s.figureOf(s.numberOf(takes[n].ID))
		if err != nil {
			t.Fatal(err)
		}
		want := &figure{
			Points: []figurePoint{{"left_hand", []int{0, 1, 2}}, {"right_hand", []int{3, 4, 5}}}, Bones: [][2]int{{0, 1}}, Up: [3]float64{0, 1, 0},
		}
		if diff := cmp.Diff(want, f); diff != "" {
			t.Errorf("take %d (-want +got):\n%s", n, diff)
		}
	}
	f, err := s.figureOf(s.numberOf(takes[2].ID)) // of no skeleton: hands that move apart
	if err != nil || len(f.Bones) > 0 {
		t.Errorf("bones %v, error %v", f.Bones, err)
	}
}

// TestFoundBones: points that keep their distance are joined, for the synthetic
// takes as for their source.
func TestFoundBones(t *testing.T) {
	l := puppets(t)
	takes := troupe(l, 2, 1, 60)
	for i := range takes[0].Time {
		frame := takes[0].Frame(i)
		for c := range 3 {
			frame[3+c] = frame[c] + 0.3
		}
	}
	s := open(t, write(t, small(), takes))
	for _, n := range []int{1, 0} {
		f, err := s.figureOf(s.numberOf(takes[n].ID))
		if err != nil || len(f.Bones) != 1 {
			t.Errorf("take %d: bones %v, error %v", n, f.Bones, err)
		}
	}
}

func TestPointsOfLayouts(t *testing.T) {
	at := func(point, axis string, q channels.Quantity) channels.Channel {
		return channels.Channel{Name: point + "." + q.Word() + "." + axis, TrackedPoint: point, Quantity: q, Component: axis}
	}
	all := func(list ...channels.Channel) *channels.Layout {
		l := &channels.Layout{Channels: list}
		group := channels.Group{Name: "all"}
		for i := range list {
			group.Channels = append(group.Channels, i)
		}
		l, err := l.WithGroups([]channels.Group{group})
		if err != nil {
			t.Fatal(err)
		}
		return l
	}
	for _, tc := range []struct {
		name   string
		layout *channels.Layout
		points []figurePoint
		plane  bool
	}{
		{"no positions", all(at("a", "x", channels.Acceleration), at("a", "y", channels.Acceleration), at("a", "z", channels.Acceleration)), nil, false},
		{"a plane", all(at("a", "y", channels.Position), at("a", "x", channels.Position)), []figurePoint{{"a", []int{1, 0}}}, true},
		{"one axis", all(at("a", "x", channels.Position)), nil, false},
		{"one point whole", all(at("a", "x", channels.Position), at("b", "z", channels.Position), at("b", "y", channels.Position), at("b", "x", channels.Position)), []figurePoint{{"b", []int{3, 2, 1}}}, false},
	} {
		points, plane := pointsOf(tc.layout)
		if diff := cmp.Diff(tc.points, points); diff != "" || plane != tc.plane {
			t.Errorf("%s: plane %v (-want +got):\n%s", tc.name, plane, diff)
		}
	}
}
