package chart_test

import (
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
	"strandwise/channels/group"
	"strandwise/ingest/bvh"
	"strandwise/ingest/raw"
	"strandwise/testdata/opendata"
)

// openTakes reads the open BVH files.
func openTakes(t testing.TB) []*channels.Take {
	t.Helper()
	files, err := filepath.Glob(filepath.Join(opendata.Path(t, "bvh"), "*.bvh"))
	if err != nil || len(files) == 0 {
		t.Fatalf("no open files: %v", err)
	}
	var out []*channels.Take
	for _, path := range files {
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, bvhTake(t, filepath.Base(path), string(text)))
	}
	return out
}

// bvhTake reads a BVH file as a take grouped by names.
func bvhTake(t testing.TB, name, text string) *channels.Take {
	t.Helper()
	m, err := bvh.Format{}.Decode(strings.NewReader(text), raw.Input{Name: name})
	if err != nil {
		t.Fatal(err)
	}
	r := m.Take()
	list := make([]channels.Channel, len(r.Layout.Columns))
	for i, c := range r.Layout.Columns {
		list[i] = c.Channel
	}
	layout, err := (&channels.Layout{Channels: list}).WithGroups(group.FromNames(list))
	if err != nil {
		t.Fatal(err)
	}
	return &channels.Take{ID: name, Layout: layout, Skeleton: r.Skeleton, Time: r.Time, Data: r.Data}
}

// only returns the take with the channels whose names hold a word.
func only(t testing.TB, take *channels.Take, word string) *channels.Take {
	t.Helper()
	var list []channels.Channel
	var from []int
	for i, c := range take.Layout.Channels {
		if strings.Contains(c.Name, word) {
			list, from = append(list, c), append(from, i)
		}
	}
	layout, err := (&channels.Layout{Channels: list}).WithGroups(group.FromNames(list))
	if err != nil {
		t.Fatal(err)
	}
	out := *take
	out.Layout, out.Data = layout, nil
	for f := range take.Time {
		for _, i := range from {
			out.Data = append(out.Data, take.Frame(f)[i])
		}
	}
	return &out
}

// worstBone returns how far any bone is from its length in the skeleton, as a
// share of that length, for bones longer than a tenth of a millimetre.
func worstBone(take *channels.Take) float64 {
	worst := 0.0
	for _, b := range take.Skeleton.Bones() {
		if b.Length < 1e-4 {
			continue
		}
		tip, top := place(take, b.Joint), place(take, b.Parent)
		for k := 0; k < len(tip); k += 3 {
			length := r3.Norm(r3.Sub(vec(tip[k:]), vec(top[k:])))
			worst = math.Max(worst, math.Abs(length/b.Length-1))
		}
	}
	return worst
}

// place returns the places of a joint, frames × 3.
func place(take *channels.Take, joint int) []float64 {
	return triad(take, take.Skeleton.Joints[joint].Name+".pos")
}

// standing is a stretch in which a foot stands still.
type standing struct {
	joint int
	body.Interval
}

// standings lists the stretches in which the feet of a take stand still: the
// two last joints of its legs.
func standings(take *channels.Take) []standing {
	var parent []int
	places := make([]float64, 3*take.Frames()*len(take.Skeleton.Joints))
	for i, j := range take.Skeleton.Joints {
		parent = append(parent, j.Parent)
		for k, v := range place(take, i) {
			places[(k/3*len(take.Skeleton.Joints)+i)*3+k%3] = v
		}
	}
	still := body.StillnessOf(take.Skeleton.Span())
	var out []standing
	for _, leg := range body.Legs(parent, places, body.Up(places, len(parent))) {
		for _, foot := range leg[max(0, len(leg)-2):] {
			name := strings.ToLower(take.Skeleton.Joints[foot].Name)
			if strings.Contains(name, "wrist") {
				continue
			}
			for _, s := range still.Still(take.Time, place(take, foot)) {
				out = append(out, standing{foot, s})
			}
		}
	}
	return out
}

// strays returns how far a still foot of a varied take strays from where it
// stands in the source at the instant shown, and how far from its middle it
// strays in the source itself, in metres.
func (v varied) strays(source *channels.Take, s standing) (from, own float64) {
	shown := v.shown[bearing(source)]
	want, got := place(source, s.joint), place(v.Take, s.joint)
	var middle r3.Vec
	for f := s.From; f < s.To; f++ {
		middle = r3.Add(middle, r3.Scale(1/float64(s.To-s.From), vec(want[3*f:])))
	}
	for f := s.From; f < s.To; f++ {
		own = math.Max(own, r3.Norm(r3.Sub(vec(want[3*f:]), middle)))
	}
	for f, at := range shown {
		i, exact := slices.BinarySearch(source.Time, at)
		if at < source.Time[s.From] || at > source.Time[s.To-1] {
			continue
		}
		there := vec(want[3*i:])
		if !exact {
			u := (at - source.Time[i-1]) / (source.Time[i] - source.Time[i-1])
			there = r3.Add(r3.Scale(1-u, vec(want[3*i-3:])), r3.Scale(u, there))
		}
		from = math.Max(from, r3.Norm(r3.Sub(vec(got[3*f:]), there)))
	}
	return from, own
}

// bearing returns the limb whose timing the root has.
func bearing(take *channels.Take) string {
	root := take.Layout.Index(take.Skeleton.Joints[0].Name + ".pos.x")
	for _, g := range take.Layout.Groups {
		if slices.Contains(g.Channels, root) {
			return g.Limb
		}
	}
	return ""
}

const stillness = 0.001 // metres a still foot may stray

func TestOpenSkeletons(t *testing.T) {
	const tolerance = 1e-9
	for _, take := range openTakes(t) {
		t.Run(take.ID, func(t *testing.T) {
			c := newChart(t, take, chart.Options{})
			if d := farthest(t, take.Data, unchanged(c, take)); !(d <= tolerance) {
				t.Errorf("round trip is off by %g", d)
			}
			feet := standings(take)
			bone, stray, own := 0.0, 0.0, 0.0
			for seed := range uint64(3) {
				v := vary(c, take, change{gain: 1.2, warp: 0.3, tempo: 1.1, seed: seed})
				bone = math.Max(bone, worstBone(v.Take))
				for _, s := range feet {
					a, b := v.strays(take, s)
					stray, own = math.Max(stray, a), math.Max(own, b)
				}
			}
			if !(bone <= tolerance) {
				t.Errorf("a bone is off its length by %g of it", bone)
			}
			if !(stray <= stillness) {
				t.Errorf("a still foot strays by %.2g mm", 1000*stray)
			}
			t.Logf("bones within %.1g of their length; in %d stretches a still foot strays by %.2g mm at most (%.2g mm from its middle in the source)",
				bone, len(feet), 1000*stray, 1000*own)
		})
	}
}

func TestOpenPlaces(t *testing.T) {
	for _, whole := range openTakes(t) {
		t.Run(whole.ID, func(t *testing.T) {
			take := only(t, whole, ".pos.")
			c := newChart(t, take, chart.Options{})
			if d := farthest(t, take.Data, unchanged(c, take)); !(d <= 1e-9) {
				t.Errorf("round trip is off by %g", d)
			}
			v := vary(c, take, change{gain: 1.2, warp: 0.3, tempo: 1.1, seed: 1})
			bone, stray := worstBone(v.Take), 0.0
			for _, s := range standings(take) {
				a, _ := v.strays(take, s)
				stray = math.Max(stray, a)
			}
			if !(bone <= 0.005) {
				t.Errorf("a bone is off its length by %g of it", bone)
			}
			if !(stray <= stillness) {
				t.Errorf("a still foot strays by %.2g mm", 1000*stray)
			}
			t.Logf("bones within %.1g of their length; a still foot strays by %.2g mm at most", bone, 1000*stray)
		})
	}
}
