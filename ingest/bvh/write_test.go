package bvh_test

import (
	"bytes"
	"errors"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels/body"
	"strandwise/ingest/bvh"
)

func written(t testing.TB, m *bvh.Motion) string {
	t.Helper()
	var b bytes.Buffer
	if err := bvh.Write(&b, m); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// TestWriteSame writes what was read, number by number: the golden file is the
// file itself.
func TestWriteSame(t *testing.T) {
	text := stilts(t)
	for _, unit := range bvh.LengthUnits() {
		m, _ := decode(t, text, bvh.Format{LengthUnit: unit})
		if d := cmp.Diff(text, written(t, m)); d != "" {
			t.Errorf("%s: %s", unit, d)
		}
	}
}

// hinge is a motion of one root and a knee with the given channels.
func hinge(freedoms []body.Freedom, turns ...quat.Number) *bvh.Motion {
	s := &body.Skeleton{Unit: "m", Joints: []body.Joint{
		{Name: "Hips", Parent: -1, Freedoms: []body.Freedom{}},
		{Name: "Knee", Parent: 0, Offset: r3.Vec{Y: -0.4}, Freedoms: freedoms},
		{Name: "Knee_end", Parent: 1, Offset: r3.Vec{Y: -0.4}, End: true},
	}}
	m := &bvh.Motion{Skeleton: s, Interval: 0.01}
	for _, q := range turns {
		m.Turns = append(m.Turns, body.Identity(), q, body.Identity())
		m.Moves = append(m.Moves, r3.Vec{})
	}
	return m
}

// TestWriteChannels checks when a joint keeps its channels.
func TestWriteChannels(t *testing.T) {
	bent, twisted := body.About(body.X, 1), body.Turn(body.About(body.X, 1), body.Z, 0.01)
	for _, c := range []struct {
		name     string
		freedoms []body.Freedom
		turn     quat.Number
		want     string
	}{
		{"one axis", []body.Freedom{body.TurnX}, bent, "CHANNELS 1 Xrotation\n"},
		{"one axis, twisted", []body.Freedom{body.TurnX}, twisted, "CHANNELS 3 Zrotation Xrotation Yrotation\n"},
		{"two axes", []body.Freedom{body.TurnX, body.TurnZ}, twisted, "CHANNELS 2 Xrotation Zrotation\n"},
		{"two axes, other order", []body.Freedom{body.TurnZ, body.TurnX}, twisted, "CHANNELS 3 Zrotation Xrotation Yrotation\n"},
		{"first is last", []body.Freedom{body.TurnY, body.TurnX, body.TurnY}, twisted, "CHANNELS 3 Yrotation Xrotation Yrotation\n"},
		{"one axis twice", []body.Freedom{body.TurnX, body.TurnX}, bent, "CHANNELS 3 Zrotation Xrotation Yrotation\n"},
		{"four turns", []body.Freedom{body.TurnX, body.TurnY, body.TurnZ, body.TurnX}, bent, "CHANNELS 3 Zrotation Xrotation Yrotation\n"},
		{"none, still", []body.Freedom{}, body.Identity(), "CHANNELS 0\n"},
		{"none, bent", []body.Freedom{}, bent, "CHANNELS 3 Zrotation Xrotation Yrotation\n"},
		{"not stated", nil, bent, "CHANNELS 3 Zrotation Xrotation Yrotation\n"},
	} {
		t.Run(c.name, func(t *testing.T) {
			m := hinge(c.freedoms, c.turn, c.turn)
			text := written(t, m)
			if !strings.Contains(text, "\t\t"+c.want) {
				t.Errorf("want %s in\n%s", c.want, text)
			}
			if strings.Contains(text, "CHANNELS 0\n\tJOINT Knee\n\t{\n\t\tOFFSET 0 -0.4 0\n\t\tCHANNELS 0") {
				return // nothing moves, which is no motion
			}
			again, _ := decode(t, text, bvh.Format{LengthUnit: "m"})
			if d := farthest(m, again); d > 1e-9 {
				t.Errorf("strays by %g m:\n%s", d, text)
			}
		})
	}
}

// TestWriteRootMoves gives a root that has no channel for it a place.
func TestWriteRootMoves(t *testing.T) {
	m := hinge([]body.Freedom{body.TurnX}, body.Identity(), body.Identity())
	m.Moves[1] = r3.Vec{X: 0.5}
	text := written(t, m)
	if !strings.Contains(text, "CHANNELS 3 Xposition Yposition Zposition\n\tJOINT") || !strings.Contains(text, "\n0 0 0 0\n0.5 0 0 0\n") {
		t.Error(text)
	}
	m.Skeleton.Joints[0].Freedoms = nil
	if text := written(t, m); !strings.Contains(text, "CHANNELS 6 Xposition Yposition Zposition Zrotation Xrotation Yrotation\n\tJOINT") {
		t.Error(text)
	}
}

// TestWriteAbsolute keeps places where they are when moves that are added come
// to lie near the offset, so that a reader would take them for places.
func TestWriteAbsolute(t *testing.T) {
	m, _ := decode(t, "HIERARCHY ROOT A { OFFSET 0 1 0 CHANNELS 3 Xposition Yposition Zposition }\nMOTION\nFrames: 2\nFrame Time: 1\n0 0.1 0\n0 0 0", bvh.Format{LengthUnit: "m"})
	for i := range m.Moves {
		m.Moves[i].Y += 0.9
	}
	again, _ := decode(t, written(t, m), bvh.Format{LengthUnit: "m"})
	if d := farthest(m, again); d > 1e-9 {
		t.Errorf("strays by %g m", d)
	}
}

// TestWriteAngles goes on beyond 180 degrees rather than jump.
func TestWriteAngles(t *testing.T) {
	var turns []quat.Number
	for a := 150; a <= 400; a += 50 {
		turns = append(turns, body.About(body.X, float64(a)*math.Pi/180))
	}
	text := written(t, hinge([]body.Freedom{body.TurnX}, turns...))
	if !strings.HasSuffix(text, "\n150\n200\n250\n300\n350\n400\n") {
		t.Error(text)
	}
}

// TestWriteOrder writes a skeleton whose joints are not listed limb by limb.
func TestWriteOrder(t *testing.T) {
	s := &body.Skeleton{Unit: "m", Joints: []body.Joint{
		{Name: "A", Parent: -1},
		{Name: "B", Parent: 0, Offset: r3.Vec{X: 1}},
		{Name: "C", Parent: 0, Offset: r3.Vec{Y: 1}},
		{Name: "B1", Parent: 1, Offset: r3.Vec{Z: 1}},
	}}
	m := &bvh.Motion{Skeleton: s, Interval: 1, Moves: []r3.Vec{{X: 5}}, Turns: []quat.Number{
		body.Identity(), body.About(body.X, 1), body.About(body.Y, 2), body.About(body.Z, 3),
	}}
	again, _ := decode(t, written(t, m), bvh.Format{LengthUnit: "m"})
	for i, j := range s.Joints {
		k := again.Skeleton.Index(j.Name)
		if d := r3.Norm(r3.Sub(places(again, 0)[k], places(m, 0)[i])); d > 1e-9 {
			t.Errorf("%s strays by %g m", j.Name, d)
		}
		if a := body.Angle(m.Turns[i], again.Turns[k]); a > 1e-9 {
			t.Errorf("%s is turned %g rad away", j.Name, a)
		}
	}
}

func TestWriteErrors(t *testing.T) {
	for _, c := range []struct {
		change func(m *bvh.Motion)
		want   string
	}{
		{func(m *bvh.Motion) { m.Skeleton.Joints[1].Name = "" }, "no name"},
		{func(m *bvh.Motion) { m.Skeleton.Joints[1].Name = "a{b" }, "cannot be written"},
		{func(m *bvh.Motion) { m.Skeleton.Joints[1].Name = "a\nb" }, "cannot be written"},
		{func(m *bvh.Motion) { m.Skeleton.Joints[1].Name = " a" }, "cannot be written"},
		{func(m *bvh.Motion) { m.Skeleton.Unit = "ft" }, "m, cm, mm, in"},
		{func(m *bvh.Motion) { m.Interval = 0 }, "interval of 0 s"},
		{func(m *bvh.Motion) { m.Turns = m.Turns[:5] }, "not those of"},
		{func(m *bvh.Motion) { m.Turns, m.Moves = nil, nil }, "not those of"},
	} {
		m := hinge(nil, body.Identity(), body.Identity())
		c.change(m)
		if err := bvh.Write(&bytes.Buffer{}, m); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%v, want %q", err, c.want)
		}
	}
	if err := bvh.Write(failing{}, hinge(nil, body.Identity())); !errors.Is(err, errFull) {
		t.Errorf("%v", err)
	}
}

var errFull = errors.New("disk is full")

type failing struct{}

func (failing) Write([]byte) (int, error) { return 0, errFull }

// TestFromTake checks what a take must have.
func TestFromTake(t *testing.T) {
	m, _ := decode(t, stilts(t), bvh.Format{LengthUnit: "cm"})
	s := m.Skeleton
	quatAt := 3 // of the hips, after their place
	for _, c := range []struct {
		name   string
		change func(time, data []float64, names []string)
		want   string
	}{
		{"whole", func(time, data []float64, names []string) {}, ""},
		{"twice as long a quaternion", func(time, data []float64, names []string) {
			for i := range 4 {
				data[quatAt+i] *= 2
			}
		}, ""},
		{"place that is not needed", func(time, data []float64, names []string) { names[len(names)-1] = "other" }, ""},
		{"no turn", func(time, data []float64, names []string) { names[quatAt+3] = "other" }, "no channel Hips.ornt.quat_w"},
		{"no place", func(time, data []float64, names []string) { names[1] = "other" }, "no channel Hips.pos.y"},
		{"turn without direction", func(time, data []float64, names []string) { clear(data[quatAt : quatAt+4]) }, "frame 0: Hips.ornt is no rotation"},
		{"turn that is no number", func(time, data []float64, names []string) { data[quatAt] = math.NaN() }, "is no rotation"},
		{"uneven clock", func(time, data []float64, names []string) { time[1] += 0.001 }, "frame 1 is 0.001 s off an even clock"},
		{"clock of rounded times", func(time, data []float64, names []string) { time[1] += 0.0001 }, ""},
		{"clock that stands", func(time, data []float64, names []string) { clear(time) }, "its clock goes from 0 s to 0 s"},
		{"clock that is no number", func(time, data []float64, names []string) { time[1] = math.NaN() }, "frame 1 is NaN s off"},
	} {
		t.Run(c.name, func(t *testing.T) {
			take := heldTake(m.Take())
			names := take.Layout.Names()
			c.change(take.Time, take.Data, names)
			for i, n := range names {
				take.Layout.Channels[i].Name = n
			}
			got, err := bvh.FromTake(take, s)
			switch {
			case c.want != "":
				if err == nil || !strings.Contains(err.Error(), c.want) || !strings.Contains(err.Error(), "take t") {
					t.Errorf("%v, want %q", err, c.want)
				}
			case err != nil:
				t.Error(err)
			default:
				if d := farthest(m, got); d > tolerance {
					t.Errorf("strays by %g m", d)
				}
			}
		})
	}
	one := heldTake(m.Take())
	one.Time = one.Time[:1]
	if _, err := bvh.FromTake(one, s); err == nil || !strings.Contains(err.Error(), "single frame") {
		t.Errorf("%v", err)
	}
	if _, err := bvh.FromTake(one, &body.Skeleton{}); err == nil {
		t.Error("an empty skeleton is taken")
	}
}

// TestMadeTake writes a take whose turns and places were changed apart from one
// another, as a made take's may be: bones keep their length, the roots their
// place.
func TestMadeTake(t *testing.T) {
	m, _ := decode(t, stilts(t), bvh.Format{LengthUnit: "cm"})
	rapid.Check(t, func(r *rapid.T) {
		take := heldTake(m.Take())
		noise := rand.New(rand.NewPCG(rapid.Uint64().Draw(r, "seed"), 0))
		for i := range take.Data {
			take.Data[i] += 0.1 * noise.NormFloat64()
		}
		back, err := bvh.FromTake(take, m.Skeleton)
		if err != nil {
			r.Fatal(err)
		}
		again, _ := decode(t, written(t, back), bvh.Format{LengthUnit: "cm"})
		if d := farthest(back, again); d > 1e-9 {
			r.Fatalf("strays by %g m", d)
		}
		for i := range again.Frames() {
			at := places(again, i)
			frame := take.Frame(i)
			if d := r3.Norm(r3.Sub(at[0], r3.Vec{X: frame[0], Y: frame[1], Z: frame[2]})); d > 1e-9 {
				r.Fatalf("the root strays by %g m", d)
			}
			for _, b := range m.Skeleton.Bones() {
				if d := math.Abs(r3.Norm(r3.Sub(at[b.Joint], at[b.Parent])) - b.Length); d > 1e-9 {
					r.Fatalf("a bone is %g m off its length", d)
				}
			}
		}
	})
}
