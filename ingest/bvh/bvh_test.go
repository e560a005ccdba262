package bvh_test

import (
	"errors"
	"io"
	"math"
	"os"
	"strings"
	"testing"
	"testing/iotest"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/ingest/bvh"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

const tolerance = 1e-12 // metres and quaternion parts

// decode reads a file and returns what it tells the user.
func decode(t testing.TB, text string, f bvh.Format) (*bvh.Motion, []string) {
	t.Helper()
	var notices []string
	m, err := f.Decode(strings.NewReader(text), raw.Input{Name: "a.bvh", Notice: func(text, evidence string) {
		notices = append(notices, text+" ("+evidence+")")
	}})
	if err != nil {
		t.Fatal(err)
	}
	return m, notices
}

func stilts(t testing.TB) string {
	t.Helper()
	text, err := os.ReadFile("testdata/stilts.bvh")
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

func checkPlace(t *testing.T, what string, got, want r3.Vec) {
	t.Helper()
	if d := r3.Norm(r3.Sub(got, want)); !(d <= tolerance) {
		t.Errorf("%s at %v, want %v", what, got, want)
	}
}

// TestStilts works the small file out by hand: turns before moves on the root,
// six channels on a joint, one on another, none on a third, two end sites.
func TestStilts(t *testing.T) {
	m, notices := decode(t, stilts(t), bvh.Format{LengthUnit: "cm"})
	var names []string
	for _, j := range m.Skeleton.Joints {
		names = append(names, j.Name)
	}
	if d := cmp.Diff(strings.Fields("Hips LeftStilt LeftStilt_end RightStilt RightStilt_end RightStilt_end2 Lantern"), names); d != "" {
		t.Error(d)
	}
	if m.Frames() != 3 || m.Interval != 0.02 {
		t.Errorf("%d frames every %g s", m.Frames(), m.Interval)
	}
	// The root moves from its offset; the left stilt states its place.
	hips, left := m.Skeleton.Joints[0], m.Skeleton.Joints[1]
	if hips.Absolute || !left.Absolute {
		t.Errorf("absolute: %v and %v", hips.Absolute, left.Absolute)
	}
	if len(notices) != 1 || !strings.Contains(notices[0], "LeftStilt") || strings.Contains(notices[0], "Hips") {
		t.Errorf("notices: %q", notices)
	}
	at := places(m, 0)
	for i, want := range []r3.Vec{{Y: 0.9}, {X: 0.1, Y: 0.5}, {X: 0.1}, {X: -0.1, Y: 0.5}, {X: -0.1}, {X: -0.1, Z: 0.05}, {Y: 1.3}} {
		checkPlace(t, "frame 0: "+names[i], at[i], want)
	}
	// Hips at (1, 0.95, 0), turned by 90° about z: x becomes y, y becomes -x.
	at = places(m, 1)
	lower := 0.5 * math.Cos(math.Pi/6)
	for i, want := range []r3.Vec{
		{X: 1, Y: 0.95},
		{X: 1.45, Y: 1.05}, {X: 1.45, Y: 1.05, Z: -0.5}, // the stilt turns by 90° about x
		{X: 1.4, Y: 0.85}, {X: 1.4 + lower, Y: 0.85, Z: 0.25}, // by -30° about x
	} {
		checkPlace(t, "frame 1: "+names[i], at[i], want)
	}
	// Turns in the order Z, X, Y.
	turns, _ := m.Pose(2)
	want := body.Intrinsic([]body.Axis{body.Z, body.X, body.Y}, []float64{10 * math.Pi / 180, 20 * math.Pi / 180, 30 * math.Pi / 180})
	if a := body.Angle(turns[0], want); a > tolerance {
		t.Errorf("hips are turned by %v, want %v", turns[0], want)
	}
}

// TestSpellings reads the same motion from files that differ in what may
// differ.
func TestSpellings(t *testing.T) {
	plain := stilts(t)
	want, _ := decode(t, plain, bvh.Format{LengthUnit: "cm"})
	for name, change := range map[string]func(string) string{
		"CRLF":            func(s string) string { return strings.ReplaceAll(s, "\n", "\r\n") },
		"byte order mark": func(s string) string { return "\ufeff" + s },
		"upper case":      func(s string) string { return keepNames(strings.ToUpper(s)) },
		"lower case":      func(s string) string { return keepNames(strings.ToLower(s)) },
		"tabs": func(s string) string {
			return strings.ReplaceAll(strings.ReplaceAll(s, " ", " \t"), "End \tSite", "\tEnd\t\tSite ")
		},
		"braces on the line": func(s string) string {
			return strings.NewReplacer("Hips\n{", "Hips{", "Stilt\n\t{\n", "Stilt { ", "Site\n\t\t{", "Site {", "}\n\t}", "}}").Replace(s)
		},
		"blank lines": func(s string) string { return "\n \n" + strings.ReplaceAll(s, "\n", "\n\t\n\n") },
		"no colons":   func(s string) string { return strings.NewReplacer("Frames:", "Frames", "Time:", "Time").Replace(s) },
		"spaced colons": func(s string) string {
			return strings.NewReplacer("Frames: ", "FRAMES :", "Frame Time: ", " frameTime\t: \t").Replace(s)
		},
		"trailing blanks": func(s string) string { return strings.ReplaceAll(s, "\n", " \n") + "\n\n  " },
		"no last line end": func(s string) string {
			return strings.TrimRight(s, "\n")
		},
		"other numbers": func(s string) string {
			return strings.NewReplacer(" 0.02", " .2e-1", " 90", " +90.", " -40", " -4E1").Replace(s)
		},
	} {
		t.Run(name, func(t *testing.T) {
			text := change(plain)
			if text == plain {
				t.Fatal("nothing is changed")
			}
			got, _ := decode(t, text, bvh.Format{LengthUnit: "cm"})
			got.Line = want.Line
			if d := cmp.Diff(want, got); d != "" {
				t.Error(d)
			}
		})
	}
}

// keepNames puts the names of joints back.
func keepNames(s string) string {
	for _, n := range []string{"Hips", "LeftStilt", "RightStilt", "Lantern"} {
		s = strings.NewReplacer("ROOT "+strings.ToUpper(n), "ROOT "+n, "JOINT "+strings.ToUpper(n), "JOINT "+n,
			"root "+strings.ToLower(n), "root "+n, "joint "+strings.ToLower(n), "joint "+n).Replace(s)
	}
	return s
}

// TestMoves reads one joint whose OFFSET is 0 10 0, moving as given.
func TestMoves(t *testing.T) {
	for _, c := range []struct {
		name, channels, rows string
		want                 r3.Vec // of the first row
	}{
		{"added", "3 Xposition Yposition Zposition", "1 2 3\n0 0 0", r3.Vec{X: 1, Y: 12, Z: 3}},
		{"in place", "3 Xposition Yposition Zposition", "1 9 3\n0 11 0", r3.Vec{X: 1, Y: 9, Z: 3}},
		{"at rest, added", "3 Xposition Yposition Zposition", "0 0 0\n0 0 0", r3.Vec{Y: 10}},
		{"at rest, in place", "3 Xposition Yposition Zposition", "0 10 0\n0 10 0", r3.Vec{Y: 10}},
		{"just nearer to zero", "1 Yposition", "4.9\n4.9", r3.Vec{Y: 14.9}},
		{"just nearer to the offset", "1 Yposition", "5.1\n5.1", r3.Vec{Y: 5.1}},
		{"one axis beside the offset", "1 Xposition", "100\n90", r3.Vec{X: 100, Y: 10}},
		{"any order", "3 Zposition Xposition Yposition", "3 1 2\n0 0 0", r3.Vec{X: 1, Y: 12, Z: 3}},
	} {
		for _, keyword := range []string{"root", "joint"} {
			t.Run(c.name+", "+keyword, func(t *testing.T) {
				joint := "{ OFFSET 0 10 0 CHANNELS " + c.channels + " }"
				text := "HIERARCHY ROOT A " + joint
				if keyword == "joint" {
					text = "HIERARCHY ROOT R { OFFSET 0 0 0 CHANNELS 0 JOINT A " + joint + "}"
				}
				m, _ := decode(t, text+"\nMOTION\nFrames: 2\nFrame Time: 1\n"+c.rows, bvh.Format{LengthUnit: "m"})
				checkPlace(t, "A", places(m, 0)[m.Skeleton.Index("A")], c.want)
			})
		}
	}
}

func TestSeveralRoots(t *testing.T) {
	m, _ := decode(t, `HIERARCHY
ROOT Left Hand { OFFSET 0 0 0 CHANNELS 3 Xposition Yposition Zposition }
ROOT Right { OFFSET 1 0 0 CHANNELS 1 Yposition }
MOTION
Frames: 1
Frame Time: 1
1 2 3 4`, bvh.Format{LengthUnit: "m"})
	at := places(m, 0)
	checkPlace(t, m.Skeleton.Joints[0].Name, at[0], r3.Vec{X: 1, Y: 2, Z: 3})
	checkPlace(t, m.Skeleton.Joints[1].Name, at[1], r3.Vec{X: 1, Y: 4})
	if m.Skeleton.Joints[0].Name != "Left Hand" {
		t.Errorf("name %q", m.Skeleton.Joints[0].Name)
	}
}

// TestSigns turns a joint twice round; the parts of its quaternion must not
// jump.
func TestSigns(t *testing.T) {
	text := "HIERARCHY ROOT A { OFFSET 0 0 0 CHANNELS 1 Yrotation }\nMOTION\nFrames: 5\nFrame Time: 1\n0\n-170\n190\n400\n-720\n"
	m, _ := decode(t, text, bvh.Format{LengthUnit: "m"})
	for i := 1; i < 5; i++ {
		if d := quat.Abs(quat.Sub(m.Turns[i], m.Turns[i-1])); d > math.Sqrt2+tolerance {
			t.Errorf("frame %d: %v follows %v", i, m.Turns[i], m.Turns[i-1])
		}
	}
}

func TestTake(t *testing.T) {
	m, _ := decode(t, stilts(t), bvh.Format{LengthUnit: "cm"})
	take := m.Take()
	var got []string
	for _, c := range take.Layout.Columns {
		got = append(got, c.Channel.Name+" ["+c.Unit+"]")
		// The channel is what its name says when read from a table.
		parsed, unit := channels.ParseHeader(c.Channel.Name)
		if d := cmp.Diff(parsed, c.Channel); d != "" || unit != "" || c.Unit != c.Channel.Unit {
			t.Error(d)
		}
	}
	want := `Hips.pos.x [m] Hips.pos.y [m] Hips.pos.z [m]
Hips.ornt.quat_x [1] Hips.ornt.quat_y [1] Hips.ornt.quat_z [1] Hips.ornt.quat_w [1]
LeftStilt.pos.x [m] LeftStilt.pos.y [m] LeftStilt.pos.z [m]
LeftStilt.ornt.quat_x [1] LeftStilt.ornt.quat_y [1] LeftStilt.ornt.quat_z [1] LeftStilt.ornt.quat_w [1]
LeftStilt_end.pos.x [m] LeftStilt_end.pos.y [m] LeftStilt_end.pos.z [m]
RightStilt.pos.x [m] RightStilt.pos.y [m] RightStilt.pos.z [m]
RightStilt.ornt.quat_x [1] RightStilt.ornt.quat_y [1] RightStilt.ornt.quat_z [1] RightStilt.ornt.quat_w [1]
RightStilt_end.pos.x [m] RightStilt_end.pos.y [m] RightStilt_end.pos.z [m]
RightStilt_end2.pos.x [m] RightStilt_end2.pos.y [m] RightStilt_end2.pos.z [m]
Lantern.pos.x [m] Lantern.pos.y [m] Lantern.pos.z [m]`
	if d := cmp.Diff(strings.Join(strings.Fields(want), " "), strings.Join(got, " ")); d != "" {
		t.Error(d)
	}
	width := len(take.Layout.Columns)
	if !cmp.Equal(take.Time, []float64{0, 0.02, 0.04}) || take.Clock != raw.Seconds || len(take.Data) != 3*width || take.Line == 0 {
		t.Errorf("times %v, %d values, line %d", take.Time, len(take.Data), take.Line)
	}
	s := math.Sqrt(0.5)
	if d := cmp.Diff([]float64{1, 0.95, 0, 0, 0, s, s}, take.Data[width:width+7], approximately()); d != "" {
		t.Error(d)
	}
}

func approximately() cmp.Option {
	return cmp.Comparer(func(a, b float64) bool { return math.Abs(a-b) <= tolerance })
}

func TestLengthUnit(t *testing.T) {
	// A rod of the given length.
	rod := func(length string) string {
		return "HIERARCHY ROOT A { OFFSET 0 0 0 CHANNELS 1 Xrotation End Site { OFFSET 0 " + length + " 0 } }\nMOTION\nFrames: 1\nFrame Time: 1\n0"
	}
	for _, c := range []struct {
		length, unit string
		person       bool
	}{
		{"2.5", "m", true}, {"250", "cm", true}, {"2500", "mm", true}, {"100", "in", true}, {"1.2", "m", true}, {"121", "cm", true}, {"299", "cm", true},
		{"118", "in", true}, {"119", "cm", false}, {"301", "cm", false}, {"30", "cm", false}, {"0", "cm", false}, {"1e6", "cm", false},
	} {
		m, notices := decode(t, rod(c.length), bvh.Format{})
		if m.Skeleton.Unit != c.unit {
			t.Errorf("%s is read as %s, want %s", c.length, m.Skeleton.Unit, c.unit)
		}
		if len(notices) != 1 || !strings.Contains(notices[0], "read as "+c.unit) || strings.Contains(notices[0], "as a person's") != c.person {
			t.Errorf("%s: %q", c.length, notices)
		}
	}
	for unit, metres := range map[string]float64{"m": 1, "cm": 0.01, "mm": 0.001, "in": 0.0254} {
		m, notices := decode(t, rod("2"), bvh.Format{LengthUnit: unit})
		if got := m.Skeleton.Span(); math.Abs(got-2*metres) > tolerance || len(notices) != 0 {
			t.Errorf("2 %s is %g m, with %q", unit, got, notices)
		}
	}
	_, err := bvh.Format{LengthUnit: "ft"}.Decode(strings.NewReader(rod("2")), raw.Input{})
	if err == nil || !strings.Contains(err.Error(), "m, cm, mm, in") {
		t.Errorf("unit ft: %v", err)
	}
}

func TestSniff(t *testing.T) {
	for _, c := range []struct {
		head, name string
		want       bool
	}{
		{"HIERARCHY\nROOT", "a.txt", true},
		{"\ufeff \r\n\thierarchy\r\n", "-", true},
		{"anything", "Dance.BVH", true},
		{"anything", "dir/dance.bvh.gz", true},
		{"hierarchy,a\n1,2\n", "a.csv", false},
		{"anything", "some.bvh/a.csv", false},
		{"", "a", false},
	} {
		if got := (bvh.Format{}).Sniff([]byte(c.head), c.name); got != c.want {
			t.Errorf("%q %s: %v", c.head, c.name, got)
		}
	}
}

func TestStream(t *testing.T) {
	n := 0
	for take, err := range (bvh.Format{}).Read(strings.NewReader(stilts(t)), raw.Input{Name: "a.bvh"}) {
		if err != nil || len(take.Time) != 3 {
			t.Fatal(take, err)
		}
		n++
	}
	if n != 1 {
		t.Errorf("%d takes", n)
	}
	for take, err := range (bvh.Format{}).Read(strings.NewReader("HIERARCHY"), raw.Input{Name: "a.bvh"}) {
		if take != nil || err == nil {
			t.Error(take, err)
		}
	}
}

// TestReadError passes on a fault of the bytes below, and gives any other error
// a place.
func TestReadError(t *testing.T) {
	half := stilts(t)[:200]
	for _, cause := range []error{io.ErrUnexpectedEOF, &fault.Error{File: "a.bvh.gz", Problem: "is damaged"}} {
		_, err := bvh.Format{}.Decode(io.MultiReader(strings.NewReader(half), iotest.ErrReader(cause)), raw.Input{Name: "a.bvh"})
		var f *fault.Error
		if !errors.As(err, &f) || !errors.Is(err, cause) {
			t.Errorf("%v", err)
		}
	}
}
