package chart_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
	"strandwise/ingest/puppets"
)

// puppetTakes returns every nth take of the invented theatre.
func puppetTakes(t testing.TB, n int) []*channels.Take {
	t.Helper()
	var out []*channels.Take
	i := 0
	for take, err := range puppets.Takes(1) {
		if err != nil {
			t.Fatal(err)
		}
		if i%n == 0 {
			out = append(out, take)
		}
		i++
	}
	return out
}

func TestInertialParts(t *testing.T) {
	take := puppetTakes(t, 120)[0]
	type brief struct {
		Name, Limb     string
		Kind           string
		Group, Follows int
		Scaled, Mix    bool
		Axes, First    int
	}
	var got []brief
	for _, p := range newChart(t, take, chart.Options{}).Parts() {
		got = append(got, brief{p.Name, p.Limb, p.Kind.String(), p.Group, p.Follows, p.Scaled, p.Mix, p.Axes, p.Coordinates[0]})
	}
	want := []brief{
		{"left_wrist.accel linear", "left_arm", "linear", 0, -1, true, true, 3, 0},
		{"left_wrist.gyro", "left_arm", "rate", 1, -1, true, true, 3, 3},
		{"left_wrist.gyro of gravity", "left_arm", "rate", 1, 1, true, true, 3, 6},
		{"left_wrist.accel gravity", "left_arm", "fixed", 0, -1, false, true, 3, 9},
		{"right_wrist.accel linear", "right_arm", "linear", 2, -1, true, true, 3, 12},
		{"right_wrist.gyro", "right_arm", "rate", 3, -1, true, true, 3, 15},
		{"right_wrist.gyro of gravity", "right_arm", "rate", 3, 5, true, true, 3, 18},
		{"right_wrist.accel gravity", "right_arm", "fixed", 2, -1, false, true, 3, 21},
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Errorf("parts (-want +got):\n%s", d)
	}
}

func TestPuppetsRoundTrip(t *testing.T) {
	for _, take := range puppetTakes(t, 7) {
		c := newChart(t, take, chart.Options{})
		if d := farthest(t, take.Data, unchanged(c, take)); !(d <= 1e-9) {
			t.Errorf("%s: round trip is off by %g", take.ID, d)
		}
	}
}

// mismatch returns the root mean square angle in radians by which the plain
// integral of a wrist's gyroscope leaves the direction of gravity that
// accelerometer and gyroscope together show, starting from it.
func mismatch(take *channels.Take, wrist string) float64 {
	gyro := triad(take, wrist+".gyro")
	g := body.SeparateGravity(take.Time, triad(take, wrist+".accel"), gyro)
	plain := body.IntegrateDirection(nil, g.Direction[:3], gyro, take.Time)
	sum := 0.0
	for k := 0; k < len(plain); k += 3 {
		a, b := vec(plain[k:]), vec(g.Direction[k:])
		angle := math.Atan2(r3.Norm(r3.Cross(a, b)), r3.Dot(a, b))
		sum += angle * angle
	}
	return math.Sqrt(sum / float64(take.Frames()))
}

// Whatever is done to a wristband, its gyroscope and accelerometer stay one
// body: the plain integral of the gyroscope leaves gravity no faster than in the
// recording, and at rest the accelerometer shows as much gravity.
func TestVariedWristbands(t *testing.T) {
	cases := []struct {
		name string
		change
	}{
		{"other times", change{gain: 1, tempo: 1, warp: 0.2}},
		{"stronger", change{gain: 1.2, tempo: 1}},
		{"weaker", change{gain: 0.8, tempo: 1}},
		{"faster", change{gain: 1, tempo: 1.2}},
		{"slower", change{gain: 1, tempo: 0.8}},
		{"turned", change{gain: 1, tempo: 1, turn: r3.Vec{X: 0.2, Y: -0.1, Z: 0.3}}},
		{"all", change{gain: 1.2, tempo: 0.8, warp: 0.2, turn: r3.Vec{X: -0.3, Y: 0.2}}},
	}
	const mostMismatch = 1.5 // of the recordings', in the mean
	takes := puppetTakes(t, 10)
	for _, x := range cases {
		var before, after, spread float64
		var off []float64 // how far gravity at rest is from the recording's
		for i, take := range takes {
			x.seed = uint64(i)
			v := vary(newChart(t, take, chart.Options{}), take, x.change)
			for _, wrist := range []string{"left_wrist", "right_wrist"} {
				before += mismatch(take, wrist)
				after += mismatch(v.Take, wrist)
				a, b := gravityOf(take, wrist), gravityOf(v.Take, wrist)
				off = append(off, math.Abs(b.Magnitude-a.Magnitude))
				spread += a.Spread
			}
		}
		n := float64(len(off))
		slices.Sort(off)
		median, most := off[len(off)/2], off[len(off)-1]
		if !(after <= mostMismatch*before) {
			t.Errorf("%s: the gyroscope leaves gravity by %.2g rad, %.2g rad before", x.name, after/n, before/n)
		}
		if !(median <= spread/n) {
			t.Errorf("%s: gravity at rest is off by %.3g m/s² in the median, more than the spread of %.3g m/s²", x.name, median, spread/n)
		}
		t.Logf("%-11s gyroscope leaves gravity by %.2f° (%.2f° recorded); gravity at rest off by %.3f m/s² in the median, %.3f at most (spread %.3f)",
			x.name, after/n*180/math.Pi, before/n*180/math.Pi, median, most, spread/n)
	}
}

func gravityOf(take *channels.Take, wrist string) body.Gravity {
	return body.SeparateGravity(take.Time, triad(take, wrist+".accel"), triad(take, wrist+".gyro"))
}

// A sensor that turns with nothing to accelerate it shows gravity alone: turned
// half as far, gravity swings half as far and keeps its length.
func TestGravitySwingsWithTheRate(t *testing.T) {
	const g, swing, frames = channels.StandardGravity, 0.8, 201 // swing in rad
	var data []float64
	for f := range frames {
		x := 0.02 * float64(f)
		angle, rate := swing*(1-math.Cos(x))/2, swing*math.Sin(x)/2
		up := body.Rotate(body.About(body.X, -angle), r3.Vec{Z: g})
		data = append(data, up.X, up.Y, up.Z, rate, 0, 0)
	}
	take := named(t, "s.accel.x s.accel.y s.accel.z s.gyro.x s.gyro.y s.gyro.z", data)
	half := vary(newChart(t, take, chart.Options{}), take, change{gain: 0.5, tempo: 2})
	for f, x := range half.Time {
		angle := swing * (1 - math.Cos(2*x)) / 4
		want := body.Rotate(body.About(body.X, -angle), r3.Vec{Z: g})
		if d := r3.Norm(r3.Sub(vec(half.Frame(f)), want)); !(d <= 0.02*g*swing) {
			t.Fatalf("at %g s the accelerometer is off by %.3g m/s²", x, d)
		}
	}
}

// Without a gyroscope gravity keeps its length too.
func TestAccelerometerAlone(t *testing.T) {
	for _, whole := range puppetTakes(t, 30) {
		take := only(t, whole, ".accel.")
		c := newChart(t, take, chart.Options{})
		if d := farthest(t, take.Data, unchanged(c, take)); !(d <= 1e-9) {
			t.Errorf("%s: round trip is off by %g", take.ID, d)
		}
		v := vary(c, take, change{gain: 0, tempo: 1, warp: 0.3, turn: r3.Vec{X: 1}}) // gravity is left
		level := body.SeparateGravity(take.Time, triad(take, "left_wrist.accel"), nil).Magnitude
		for f := range v.Time {
			if d := r3.Norm(vec(v.Frame(f))) - level; !(math.Abs(d) <= 1e-9) {
				t.Fatalf("%s: gravity is off by %g m/s²", take.ID, d)
			}
		}
	}
}

// Numbers that show no gravity are varied about their mean, as plain ones are.
func TestAccelerationWithoutGravity(t *testing.T) {
	take := named(t, "s.accel.x s.accel.y s.accel.z s.gyro.x s.gyro.y s.gyro.z", []float64{
		0.1, 0, 0.9, 1, 0, 0,
		0.3, 0.2, 0.9, 2, 0, 0,
		0.2, 0.1, 0.9, 3, 1, 0,
	})
	c := newChart(t, take, chart.Options{})
	v := vary(c, take, change{gain: 2, tempo: 1})
	want := []float64{0, -0.1, 0.9, 2, 0, 0, 0.4, 0.3, 0.9, 4, 0, 0, 0.2, 0.1, 0.9, 6, 2, 0}
	if d := farthest(t, want, v.Data); !(d <= 1e-12) {
		t.Errorf("data %v, want %v", v.Data, want)
	}
	// A take that does show gravity is laid out like it when asked.
	other := take.Clone()
	for i := 0; i < len(other.Data); i += 6 {
		other.Data[i+2] = 9.8
	}
	p := c.PlotLike(other, c.Plot(take))
	if d := farthest(t, other.Data, c.Take(p, other.Time, p.Values)); !(d <= 1e-12) {
		t.Errorf("round trip is off by %g", d)
	}
	if follows := p.Values[6:9]; !slices.Equal(follows, []float64{0, 0, 0}) {
		t.Errorf("gravity follows %v, want none", follows)
	}
}

// Axes without names are told by their groups, gyroscopes by the limb.
func TestSensorsWithoutNames(t *testing.T) {
	layout := &channels.Layout{}
	for i := range 12 {
		q := channels.Acceleration
		if i%6 >= 3 {
			q = channels.AngularRate
		}
		layout.Channels = append(layout.Channels, channels.Channel{Name: fmt.Sprint("c", i), TrackedPoint: fmt.Sprint("c", i), Quantity: q, Unit: q.SI()})
	}
	groups := []channels.Group{
		{Name: "a", Limb: "left", Channels: []int{0, 1, 2}}, {Name: "b", Limb: "left", Channels: []int{3, 4, 5}},
		{Name: "c", Limb: "right", Channels: []int{6, 7, 8}}, {Name: "d", Limb: "back", Channels: []int{9, 10, 11}},
	}
	layout, err := layout.WithGroups(groups)
	if err != nil {
		t.Fatal(err)
	}
	c, err := chart.New(layout, nil, chart.Options{})
	if err != nil {
		t.Fatal(err)
	}
	const want = "a linear:linear/3[0,1,2] b:rate/3[3,4,5] b of gravity:rate/3[6,7,8] a gravity:fixed/3[9,10,11] " +
		"c linear:linear/3[12,13,14] c gravity:fixed/3[15,16,17] d:rate/3[18,19,20]"
	if got := briefly(c.Parts()); got != want {
		t.Errorf("parts\n%s\nwant\n%s", got, want)
	}
}
