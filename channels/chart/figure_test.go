package chart_test

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
)

// figure is a standing figure 1.5 m long that sways on its still feet, swings
// an arm and lifts its toes.
const figure = `HIERARCHY
ROOT Hips
{
	OFFSET 0 0 0
	CHANNELS 6 Xposition Yposition Zposition Zrotation Xrotation Yrotation
	JOINT Chest
	{
		OFFSET 0 0.4 0
		CHANNELS 3 Zrotation Xrotation Yrotation
		JOINT LeftArm
		{
			OFFSET 0.2 0.1 0
			CHANNELS 3 Zrotation Xrotation Yrotation
			End Site
			{
				OFFSET 0.6 0 0
			}
		}
		JOINT RightArm
		{
			OFFSET -0.2 0.1 0
			CHANNELS 3 Zrotation Xrotation Yrotation
			End Site
			{
				OFFSET -0.6 0 0
			}
		}
	}
	JOINT LeftLeg
	{
		OFFSET 0.1 0 0
		CHANNELS 3 Zrotation Xrotation Yrotation
		JOINT LeftFoot
		{
			OFFSET 0 -0.9 0
			CHANNELS 3 Zrotation Xrotation Yrotation
			End Site
			{
				OFFSET 0 0 0.2
			}
		}
	}
	JOINT RightLeg
	{
		OFFSET -0.1 0 0
		CHANNELS 3 Zrotation Xrotation Yrotation
		JOINT RightFoot
		{
			OFFSET 0 -0.9 0
			CHANNELS 3 Zrotation Xrotation Yrotation
			End Site
			{
				OFFSET 0 0 0.2
			}
		}
	}
}
`

// standingFigure moves the figure for two seconds at 50 Hz. Its hips stay, so
// that only the lifted toes of the left foot leave the ground when lift is not
// 0, in rad.
func standingFigure(t testing.TB, lift float64) *channels.Take {
	t.Helper()
	const frames = 100
	var b strings.Builder
	for f := range frames {
		u := float64(f) / (frames - 1)
		swing, toes := 60*math.Sin(2*math.Pi*u), lift*180/math.Pi*math.Abs(math.Sin(12*math.Pi*u))
		fmt.Fprintf(&b, "0.3 0.9 -0.2 0 0 0  0 %g %g  %g %g 0  %g 0 10  0 0 0  0 %g 0  0 0 0  0 0 0\n",
			swing/6, swing/3, swing, swing/2, -swing/2, -toes)
	}
	return bvhTake(t, "figure", figureText(frames, b.String()))
}

func figureText(frames int, lines string) string {
	return fmt.Sprintf("%sMOTION\nFrames: %d\nFrame Time: 0.02\n%s", figure, frames, lines)
}

// Whatever the pose, a skeleton comes back as it was. Joints turn by less than
// half a turn from frame to frame, so that the signs of quaternions are known.
func TestPosesRoundTrip(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		frames := rapid.IntRange(1, 4).Draw(rt, "frames")
		pose := rapid.SliceOfN(rapid.IntRange(-180, 180), 27, 27).Draw(rt, "pose")
		var b strings.Builder
		for range frames {
			for i, v := range rapid.SliceOfN(rapid.IntRange(-25, 25), 27, 27).Draw(rt, "frame") {
				fmt.Fprintf(&b, "%d ", pose[i]+v)
			}
			b.WriteString("\n")
		}
		take := bvhTake(t, "pose", figureText(frames, b.String()))
		c := newChart(t, take, chart.Options{})
		if d := farthest(t, take.Data, unchanged(c, take)); !(d <= 1e-9) {
			rt.Errorf("round trip is off by %g", d)
		}
	})
}

// fixed lists the parts that may not be varied, with their limbs.
func fixed(parts []chart.Part) string {
	var out []string
	for _, p := range parts {
		if p.Kind == chart.Fixed {
			out = append(out, p.Name+"@"+p.Limb)
		}
	}
	slices.Sort(out)
	return strings.Join(out, " ")
}

func TestStillFeetBear(t *testing.T) {
	const legs = "Hips.ornt@Hips Hips.pos@Hips LeftLeg.ornt@Hips RightFoot.ornt@Hips RightLeg.ornt@Hips"
	cases := []struct {
		name string
		lift float64
		o    chart.Options
		want string
	}{
		{"both stand", 0, chart.Options{}, "Hips.ornt@Hips Hips.pos@Hips LeftFoot.ornt@Hips LeftLeg.ornt@Hips RightFoot.ornt@Hips RightLeg.ornt@Hips"},
		{"toes are lifted from a standing ankle", 1, chart.Options{}, legs},
		{"feet are free", 0, chart.Options{FreeFeet: true}, ""},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			take := standingFigure(t, c.lift)
			ch := newChart(t, take, c.o)
			if got := fixed(ch.Plot(take).Parts()); got != c.want {
				t.Errorf("fixed %s\nwant %s", got, c.want)
			}
			for _, p := range ch.Plot(take).Parts() {
				if p.Mix != (p.Kind != chart.Fixed) {
					t.Errorf("%s is %s and may be mixed: %t", p.Name, p.Kind, p.Mix)
				}
			}
			if got := fixed(ch.Parts()); got != "" {
				t.Errorf("in general %s are fixed", got)
			}
		})
	}
}

// A standing body turns about the upright only, as a whole.
func TestStandingBodyTurnsUpright(t *testing.T) {
	for name, take := range map[string]*channels.Take{
		"turns and places": standingFigure(t, 0),
		"places":           only(t, standingFigure(t, 0), ".pos."),
	} {
		c := newChart(t, take, chart.Options{})
		v := vary(c, take, change{gain: 1, tempo: 1, turn: r3.Vec{X: 0.2, Y: 0.5, Z: -0.3}})
		by := body.Exp(r3.Vec{X: 0.2, Y: 0.5, Z: -0.3})
		angle := 2 * math.Atan2(by.Jmag, by.Real)
		hips := vec(place(take, 0))
		for i := range take.Skeleton.Joints {
			was, is := place(take, i), place(v.Take, i)
			for k := 0; k < len(was); k += 3 {
				want := r3.Add(hips, body.Rotate(body.About(body.Y, angle), r3.Sub(vec(was[k:]), hips)))
				if d := r3.Norm(r3.Sub(vec(is[k:]), want)); !(d <= 1e-9) {
					t.Fatalf("%s: joint %d is off by %g m", name, i, d)
				}
			}
		}
	}
}

// A body without a still foot turns about any axis, as a whole.
func TestFreeBodyTurns(t *testing.T) {
	take := standingFigure(t, 0)
	turn := r3.Vec{X: 0.2, Y: 0.5, Z: -0.3}
	for name, take := range map[string]*channels.Take{"turns and places": take, "places": only(t, take, ".pos.")} {
		v := vary(newChart(t, take, chart.Options{FreeFeet: true}), take, change{gain: 1, tempo: 1, turn: turn})
		hips := vec(place(take, 0))
		for i := range take.Skeleton.Joints {
			want := r3.Add(hips, body.Rotate(body.Exp(turn), r3.Sub(vec(place(take, i)), hips)))
			if d := r3.Norm(r3.Sub(vec(place(v.Take, i)), want)); !(d <= 1e-9) {
				t.Fatalf("%s: joint %d is off by %g m", name, i, d)
			}
		}
	}
}

// Layouts with some of the channels of a skeleton keep whole what is there.
func TestSomeChannelsOfASkeleton(t *testing.T) {
	take := standingFigure(t, 0)
	cases := []struct {
		name, word string
		want       string
	}{
		{"turns alone", ".ornt.", "turn 8"},
		{"places alone", ".pos.", "free 12 fixed 11"},
		{"all but the place of the root", "t", "free 11 turn 8 fixed 8"},
		{"an arm and no root", "LeftArm", "free 2 turn 1 fixed 1"},
		{"the root", "Hips", "free 1 turn 1"},
		{"legs without turns of the hips", "Leg", "free 2 turn 2"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			some := only(t, take, c.word)
			ch := newChart(t, some, chart.Options{FreeFeet: true})
			count := map[chart.Kind]int{}
			for _, p := range ch.Parts() {
				count[p.Kind]++
			}
			var got []string
			for k := chart.Free; k <= chart.Fixed; k++ {
				if count[k] > 0 {
					got = append(got, fmt.Sprintf("%s %d", k, count[k]))
				}
			}
			if s := strings.Join(got, " "); c.want != "" && s != c.want {
				t.Errorf("parts: %s, want %s", s, c.want)
			}
			if d := farthest(t, some.Data, unchanged(ch, some)); !(d <= 1e-9) {
				t.Errorf("round trip is off by %g", d)
			}
		})
	}
}

// A joint that moves in the frame of its parent, as a slider does, comes back
// where it was, and varies there.
func TestMovingJoint(t *testing.T) {
	const slider = `HIERARCHY
ROOT Base
{
	OFFSET 0 0 0
	CHANNELS 6 Xposition Yposition Zposition Zrotation Xrotation Yrotation
	JOINT Carriage
	{
		OFFSET 1 0 0
		CHANNELS 4 Xposition Yposition Zposition Zrotation
		End Site
		{
			OFFSET 0 0.7 0
		}
	}
}
MOTION
Frames: 3
Frame Time: 0.02
0 0 0 10 20 30  0.1 0 0 5
0 0 1 20 20 30  0.2 0 0 15
0 1 1 30 20 30  0.3 0 0 25
`
	take := bvhTake(t, "slider", slider)
	c := newChart(t, take, chart.Options{Bones: []chart.Bone{{Point: "Carriage", Parent: "Base"}}}) // which the skeleton knows better
	const want = "Base.ornt:turn/0[0,1,2] Base.pos:free/3[3,4,5] Carriage.ornt:turn/0[6,7,8] Carriage.pos:free/0[9,10,11]"
	if got := briefly(c.Parts()); got != want {
		t.Errorf("parts\n%s\nwant\n%s", got, want)
	}
	if d := farthest(t, take.Data, unchanged(c, take)); !(d <= 1e-9) {
		t.Errorf("round trip is off by %g", d)
	}
	v := vary(c, take, change{gain: 2, tempo: 1})
	for f, want := range []float64{1, 1.2, 1.4} { // of 1.1, 1.2 and 1.3
		apart := r3.Norm(r3.Sub(vec(place(v.Take, 1)[3*f:]), vec(place(v.Take, 0)[3*f:])))
		if !(math.Abs(apart-want) <= 1e-9) {
			t.Errorf("frame %d: the carriage is %g m from its base, want %g m", f, apart, want)
		}
	}
	if d := worstBone(v.Take); !(d <= 1e-9) {
		t.Errorf("a bone is off its length by %g of it", d)
	}
}
