package bvh_test

import (
	"bytes"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/ingest/bvh"
	"strandwise/ingest/raw"
	"strandwise/testdata/opendata"
)

// openFiles lists the open BVH files.
func openFiles(t testing.TB) []string {
	t.Helper()
	files, err := filepath.Glob(filepath.Join(opendata.Path(t, "bvh"), "*.bvh"))
	if err != nil || len(files) == 0 {
		t.Fatalf("no open files: %v", err)
	}
	return files
}

func decodeFile(t testing.TB, path, unit string) *bvh.Motion {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	m, err := bvh.Format{LengthUnit: unit}.Decode(f, raw.Input{Name: filepath.Base(path)})
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// readLines decodes a file with one JSON document on each line.
func readLines[T any](t *testing.T, path string) []T {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	var out []T
	for d := json.NewDecoder(bytes.NewReader(text)); d.More(); {
		var x T
		if err := d.Decode(&x); err != nil {
			t.Fatal(err)
		}
		out = append(out, x)
	}
	return out
}

// places returns the places of all joints in the world in frame i, in metres.
func places(m *bvh.Motion, i int) []r3.Vec {
	turns, moves := m.Pose(i)
	return body.NewKinematics(m.Skeleton).Forward(nil, turns, moves)
}

// TestOpenWorld holds the places of joints in the world against those found by
// the BVHLoader of three.js 0.187, a second program agreeing to 1e-5.
func TestOpenWorld(t *testing.T) {
	const tolerance = 1e-4 // of the file's unit of length
	for _, want := range readLines[struct {
		File   string
		Frames int
		Joints []string
		At     map[string][][3]float64
	}](t, filepath.Join(opendata.Path(t, "bvh"), "world.jsonl")) {
		t.Run(want.File, func(t *testing.T) {
			m := decodeFile(t, filepath.Join(opendata.Path(t, "bvh"), want.File), "m")
			if m.Frames() != want.Frames {
				t.Errorf("%d frames, want %d", m.Frames(), want.Frames)
			}
			var joints []int
			for i, j := range m.Skeleton.Joints {
				if !j.End {
					joints = append(joints, i)
				}
			}
			if len(joints) != len(want.Joints) {
				t.Fatalf("%d joints, want %d", len(joints), len(want.Joints))
			}
			worst := 0.0
			for frame, at := range want.At {
				n, err := strconv.Atoi(frame)
				if err != nil || len(at) != len(joints) {
					t.Fatalf("frame %q of %d places", frame, len(at))
				}
				got := places(m, n)
				for k, i := range joints {
					if name := m.Skeleton.Joints[i].Name; name != want.Joints[k] {
						t.Errorf("joint %d is %s, want %s", k, name, want.Joints[k])
					}
					d := r3.Norm(r3.Sub(got[i], r3.Vec{X: at[k][0], Y: at[k][1], Z: at[k][2]}))
					worst = math.Max(worst, d)
				}
			}
			if !(worst <= tolerance) {
				t.Errorf("a joint is %g units from where it should be", worst)
			}
			t.Logf("%d places within %.2g units", len(want.At)*len(joints), worst)
		})
	}
}

// TestOpenInfo holds joints, end sites, channels and clock against what the
// BVHLoader of three.js 0.187 and the header say.
func TestOpenInfo(t *testing.T) {
	for _, want := range readLines[struct {
		File    string
		Threejs struct {
			Bones, Endsites, Joints, Frames int
			LastTime                        float64
			Root                            string
		}
		Header struct {
			Frames, Channels int
			FrameTime        float64
		}
	}](t, filepath.Join(opendata.Path(t, "bvh"), "info.jsonl")) {
		t.Run(want.File, func(t *testing.T) {
			m := decodeFile(t, filepath.Join(opendata.Path(t, "bvh"), want.File), "")
			ends, columns := 0, 0
			for _, j := range m.Skeleton.Joints {
				columns += len(j.Freedoms)
				if j.End {
					ends++
				}
			}
			n := len(m.Skeleton.Joints)
			if n != want.Threejs.Bones || ends != want.Threejs.Endsites || n-ends != want.Threejs.Joints || m.Skeleton.Joints[0].Name != want.Threejs.Root {
				t.Errorf("%d joints and %d end sites under %s, want %+v", n-ends, ends, m.Skeleton.Joints[0].Name, want.Threejs)
			}
			if m.Frames() != want.Header.Frames || columns != want.Header.Channels || m.Interval != want.Header.FrameTime {
				t.Errorf("%d frames of %d channels every %g s, want %+v", m.Frames(), columns, m.Interval, want.Header)
			}
			take := m.Take()
			// The time is stated to six decimals.
			if last := take.Time[len(take.Time)-1]; math.Abs(last-want.Threejs.LastTime) > 0.5e-6 {
				t.Errorf("last frame at %g s, want %g s", last, want.Threejs.LastTime)
			}
		})
	}
}

// TestOpenRoundTrip goes from BVH to a take in single precision, as Parquet
// holds it, and back, with the skeleton as JSON.
func TestOpenRoundTrip(t *testing.T) {
	const tolerance = 1e-6 // of the skeleton's height
	for _, path := range openFiles(t) {
		t.Run(filepath.Base(path), func(t *testing.T) {
			m := decodeFile(t, path, "")
			back := throughTake(t, m)
			var file bytes.Buffer
			if err := bvh.Write(&file, back); err != nil {
				t.Fatal(err)
			}
			again, err := bvh.Format{LengthUnit: m.Skeleton.Unit}.Decode(&file, raw.Input{Name: "again.bvh"})
			if err != nil {
				t.Fatal(err)
			}
			sameChannels(t, m.Skeleton, again.Skeleton)
			height := m.Skeleton.Span() / 1.5
			if worst := farthest(m, again); !(worst <= tolerance*height) {
				t.Errorf("a joint strays by %g of the height", worst/height)
			} else {
				t.Logf("within %.2g of the height", worst/height)
			}
		})
	}
}

// throughTake returns the motion of the take of a motion, both kept as they
// would be in a file: values in single precision, the skeleton as JSON.
func throughTake(t *testing.T, m *bvh.Motion) *bvh.Motion {
	t.Helper()
	take := heldTake(m.Take())
	for i, v := range take.Data {
		take.Data[i] = float64(float32(v))
	}
	for i, v := range take.Time {
		take.Time[i] = float64(float32(v))
	}
	document, err := json.Marshal(m.Skeleton)
	if err != nil {
		t.Fatal(err)
	}
	var s body.Skeleton
	if err := json.Unmarshal(document, &s); err != nil {
		t.Fatal(err)
	}
	back, err := bvh.FromTake(take, &s)
	if err != nil {
		t.Fatal(err)
	}
	return back
}

// heldTake returns a raw take as one of the run.
func heldTake(r *raw.Take) *channels.Take {
	l := &channels.Layout{}
	for _, c := range r.Layout.Columns {
		l.Channels = append(l.Channels, c.Channel)
	}
	return &channels.Take{ID: "t", Layout: l, Time: r.Time, Data: r.Data}
}

// sameChannels checks that joints have the same names and channel orders.
func sameChannels(t *testing.T, want, got *body.Skeleton) {
	t.Helper()
	if len(want.Joints) != len(got.Joints) {
		t.Fatalf("%d joints, want %d", len(got.Joints), len(want.Joints))
	}
	for i, j := range want.Joints {
		k := got.Joints[i]
		if j.Name != k.Name || j.Parent != k.Parent || len(j.Freedoms) != len(k.Freedoms) {
			t.Errorf("joint %d is %+v, want %+v", i, k, j)
			continue
		}
		for n := range j.Freedoms {
			if j.Freedoms[n] != k.Freedoms[n] {
				t.Errorf("joint %s has %v, want %v", j.Name, k.Freedoms, j.Freedoms)
			}
		}
	}
}

// farthest returns the largest distance in metres between the places of a
// joint in two motions.
func farthest(a, b *bvh.Motion) float64 {
	worst := 0.0
	if a.Frames() != b.Frames() {
		return math.Inf(1)
	}
	for i := range a.Frames() {
		p, q := places(a, i), places(b, i)
		for k := range p {
			worst = math.Max(worst, r3.Norm(r3.Sub(p[k], q[k])))
		}
	}
	return worst
}
