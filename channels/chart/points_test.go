package chart_test

import (
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
)

const armAndHead = "shoulder.pos.x shoulder.pos.y shoulder.pos.z elbow.pos.x elbow.pos.y elbow.pos.z " +
	"wrist.pos.x wrist.pos.y wrist.pos.z head.pos.x head.pos.y head.pos.z"

// swungArm makes a take of an arm of 0.3 m and 0.25 m that swings about a
// shoulder that moves, and of a head that does what it likes.
func swungArm(t testing.TB, frames int) *channels.Take {
	t.Helper()
	var data []float64
	for f := range frames {
		x := 0.04 * float64(f)
		shoulder := r3.Vec{X: 0.1 * math.Sin(x), Z: 1.4 + 0.05*math.Cos(2*x)}
		upper := body.Rotate(body.About(body.Y, math.Sin(x)), r3.Vec{X: 0.3})
		fore := body.Rotate(body.About(body.Z, 0.7*math.Cos(1.3*x)), r3.Vec{Y: 0.25})
		elbow := r3.Add(shoulder, upper)
		wrist := r3.Add(elbow, fore)
		for _, v := range []r3.Vec{shoulder, elbow, wrist, {X: math.Sin(3 * x), Y: x, Z: math.Cos(x)}} {
			data = append(data, v.X, v.Y, v.Z)
		}
	}
	return named(t, armAndHead, data)
}

var armBones = []chart.Bone{{Point: "elbow", Parent: "shoulder"}, {Point: "wrist", Parent: "elbow"}}

func TestFoundBonesAreKept(t *testing.T) {
	take := swungArm(t, 150)
	bones := chart.FindBones(take.Layout, []*channels.Take{take})
	want := []chart.Bone{{Point: "wrist", Parent: "elbow"}, {Point: "shoulder", Parent: "elbow"}}
	if d := cmp.Diff(want, bones); d != "" {
		t.Fatalf("bones (-want +got):\n%s", d)
	}
	c := newChart(t, take, chart.Options{Bones: bones})
	v := vary(c, take, change{gain: 1.3, tempo: 1.1, warp: 0.3})
	if d := r3.Norm(r3.Sub(vec(v.Data), vec(take.Data))); d < 1e-3 {
		t.Errorf("the shoulder did not move: %g m", d)
	}
	upper, fore := 0.0, 0.0
	for f := range v.Time {
		row := v.Frame(f)
		upper = math.Max(upper, math.Abs(r3.Norm(r3.Sub(vec(row[3:]), vec(row)))/0.3-1))
		fore = math.Max(fore, math.Abs(r3.Norm(r3.Sub(vec(row[6:]), vec(row[3:])))/0.25-1))
	}
	const most = 0.005 // of the length
	if !(upper <= most && fore <= most) {
		t.Errorf("bones are off their length by %.2g and %.2g of it", upper, fore)
	}
}

// Bones that are not quite constant, as of markers on skin, come back as they
// were.
func TestPointsRoundTrip(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		take := swungArm(t, rapid.IntRange(1, 20).Draw(rt, "frames"))
		noise := rapid.SliceOfN(rapid.Float64Range(-0.5, 0.5), len(take.Data), len(take.Data)).Draw(rt, "noise")
		for i := range take.Data {
			take.Data[i] += noise[i]
		}
		c := newChart(t, take, chart.Options{Bones: armBones})
		if d := farthest(t, take.Data, unchanged(c, take)); !(d <= 1e-9) {
			rt.Errorf("round trip is off by %g", d)
		}
	})
}

func TestPointParts(t *testing.T) {
	const want = "shoulder.pos:free/3[0,1,2] elbow.pos from shoulder:free/3[3,4,5] elbow.pos length:fixed/0[6] " +
		"wrist.pos from elbow:free/3[7,8,9] wrist.pos length:fixed/0[10] head.pos:free/3[11,12,13]"
	take := swungArm(t, 3)
	if got := briefly(newChart(t, take, chart.Options{Bones: armBones}).Parts()); got != want {
		t.Errorf("parts\n%s\nwant\n%s", got, want)
	}
}

// A point on its parent has no direction to stretch, and stays there.
func TestPointOnItsParent(t *testing.T) {
	take := named(t, armAndHead, make([]float64, 24))
	c := newChart(t, take, chart.Options{Bones: armBones})
	if d := farthest(t, take.Data, unchanged(c, take)); d != 0 {
		t.Errorf("off by %g", d)
	}
}

func TestFaultyBones(t *testing.T) {
	cases := []struct {
		bones []chart.Bone
		want  string
	}{
		{[]chart.Bone{{Point: "elbow", Parent: "hip"}}, "bones: point hip has not one channel POS x, y and z each"},
		{[]chart.Bone{{Point: "elbow", Parent: "wrist"}, {Point: "elbow", Parent: "head"}}, "bones: point elbow hangs from both wrist and head"},
		{[]chart.Bone{{Point: "elbow", Parent: "wrist"}, {Point: "wrist", Parent: "elbow"}}, "bones: bones go round in a circle"},
		{[]chart.Bone{{Point: "elbow", Parent: "elbow"}}, "bones: bones go round in a circle"},
	}
	take := swungArm(t, 3)
	for _, c := range cases {
		_, err := chart.New(take.Layout, nil, chart.Options{Bones: c.bones})
		if err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("error %v, want %s", err, c.want)
		}
	}
}
