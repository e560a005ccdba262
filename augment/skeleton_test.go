package augment_test

import (
	"math"
	"path/filepath"
	"testing"

	"strandwise/augment"
	"strandwise/channels"
	"strandwise/ingest"
	"strandwise/testdata/opendata"
)

// Growing keeps every bone of the open motion files at its length, to 1e-9 of
// it.
func TestGrowingKeepsBones(t *testing.T) {
	dir := opendata.Path(t, "bvh")
	files, err := filepath.Glob(filepath.Join(dir, "*.bvh"))
	if err != nil || len(files) == 0 {
		t.Fatalf("%d files, %v", len(files), err)
	}
	for _, file := range files {
		r, err := ingest.Open(ingest.Options{Paths: []string{file}, Label: "move", LengthUnit: "cm"})
		if err != nil {
			t.Fatal(err)
		}
		for take, err := range r.Takes() {
			if err != nil {
				t.Fatal(err)
			}
			for _, made := range draws(t, take, 3) {
				off, bone, seen := boneError(made)
				if seen == 0 {
					t.Errorf("%s: no bone has places at both ends", filepath.Base(file))
				}
				if off > 1e-9 {
					t.Errorf("%s: %s: bone %s is off by %.2g of its length", filepath.Base(file), made.ID, bone, off)
				}
			}
		}
		r.Close()
	}
}

func draws(t *testing.T, take *channels.Take, n int) []*channels.Take {
	s := source(t, augment.Default(), 1, take)
	out := make([]*channels.Take, n)
	for k := range out {
		out[k] = s.Draw(k)
	}
	return out
}

// boneError returns the largest relative deviation of a bone of the take's
// skeleton from its length, over the frames, the bone, and how many bones were
// looked at.
func boneError(t *channels.Take) (worst float64, bone string, seen int) {
	place := func(frame []float64, joint string) (p [3]float64) {
		for k, axis := range []string{"x", "y", "z"} {
			p[k] = frame[t.Layout.Index(joint+".pos."+axis)]
		}
		return p
	}
	for _, b := range t.Skeleton.Bones() {
		if b.Length == 0 {
			continue
		}
		joint, parent := t.Skeleton.Joints[b.Joint].Name, t.Skeleton.Joints[b.Parent].Name
		if t.Layout.Index(joint+".pos.x") < 0 || t.Layout.Index(parent+".pos.x") < 0 {
			continue
		}
		seen++
		for i := range t.Frames() {
			p, q := place(t.Frame(i), joint), place(t.Frame(i), parent)
			length := math.Sqrt((p[0]-q[0])*(p[0]-q[0]) + (p[1]-q[1])*(p[1]-q[1]) + (p[2]-q[2])*(p[2]-q[2]))
			if off := math.Abs(length-b.Length) / b.Length; off > worst || math.IsNaN(off) {
				worst, bone = off, joint
			}
		}
	}
	return worst, bone, seen
}
