package chart_test

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
	"strandwise/channels/group"
	"strandwise/testdata/opendata"
)

// named makes a take of channels by their headers, grouped by name, with values
// frame-major at 50 Hz.
func named(t testing.TB, headers string, data []float64) *channels.Take {
	t.Helper()
	layout := &channels.Layout{}
	for _, h := range strings.Fields(headers) {
		c, _ := channels.ParseHeader(h)
		layout.Channels = append(layout.Channels, c)
	}
	layout, err := layout.WithGroups(group.FromNames(layout.Channels))
	if err != nil {
		t.Fatal(err)
	}
	take := &channels.Take{ID: "t", Layout: layout, Data: data}
	for f := range len(data) / len(layout.Channels) {
		take.Time = append(take.Time, 0.02*float64(f))
	}
	return take
}

// grouped makes a take like named with one group of all channels.
func grouped(t testing.TB, headers string, data []float64) *channels.Take {
	t.Helper()
	take := named(t, headers, data)
	g := channels.Group{Name: "all"}
	for i := range take.Layout.Channels {
		g.Channels = append(g.Channels, i)
	}
	layout, err := take.Layout.WithGroups([]channels.Group{g})
	if err != nil {
		t.Fatal(err)
	}
	take.Layout = layout
	return take
}

// briefly describes the parts of a chart: kind, axes and coordinates.
func briefly(parts []chart.Part) string {
	var out []string
	for _, p := range parts {
		at := strings.ReplaceAll(fmt.Sprint(p.Coordinates), " ", ",")
		out = append(out, fmt.Sprintf("%s:%s/%d%s", p.Name, p.Kind, p.Axes, at))
	}
	return strings.Join(out, " ")
}

func TestPlainParts(t *testing.T) {
	cases := []struct {
		name, headers string
		one           bool // all in one group
		want          string
	}{
		{"unknown triad", "c0 c1 c2", true, "all:free/3[0,1,2]"},
		{"unknown pair", "c0 c1", true, "all:free/2[0,1]"},
		{"four unknown", "c0 c1 c2 c3", true, "all:free/0[0,1,2,3]"},
		{"places in the plane", "hand.pos.x hand.pos.y", false, "hand.pos:free/2[0,1]"},
		{"one axis", "hand.pos.x", false, "hand.pos:free/0[0]"},
		{"two places in one group", "a.pos.x a.pos.y a.pos.z b.pos.x b.pos.y b.pos.z", true, "all:free/3[0,1,2,3,4,5]"},
		{"rates", "a.gyro.x a.gyro.y a.gyro.z a.vel.x", false, "a.gyro:rate/3[0,1,2] a.vel:rate/0[3]"},
		{"angular accelerations", "a.angacc.x a.angacc.y a.angacc.z", false, "a.angacc:linear/3[0,1,2]"},
		{"angles are no axes", "a.ornt.x a.ornt.y a.ornt.z", false, "a.ornt:free/0[0,1,2]"},
		{"not a quaternion", "a.x a.y a.z a.w", true, "all:free/0[0,1,2,3]"},
		{"kinds of one group", "a.pos.x a.pos.y a.pos.z a.vel.x a.vel.y a.vel.z flex", true, "all:free/3[0,1,2] all:rate/3[3,4,5] all:free/0[6]"},
		{"axes twice", "a.pos.x a.pos.x a.pos.y", true, "all:free/0[0,1,2]"},
		{"quaternion", "a.ornt.quat_x a.ornt.quat_y a.ornt.quat_z a.ornt.quat_w", false, "a.ornt:turn/0[0,1,2]"},
		{"accelerometer", "a.accel.x a.accel.y a.accel.z", false, "a.accel linear:linear/3[0,1,2] a.accel gravity:fixed/3[3,4,5]"},
		{"accelerometer in the plane", "a.accel.x a.accel.y", false, "a.accel:free/2[0,1]"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			make := named
			if c.one {
				make = grouped
			}
			take := make(t, c.headers, nil)
			if got := briefly(newChart(t, take, chart.Options{}).Parts()); got != c.want {
				t.Errorf("parts\n%s\nwant\n%s", got, c.want)
			}
		})
	}
}

// The axes of a vector stand as x, y, z whatever the order of the channels, and
// each channel gets its own back.
func TestAxesInAnotherOrder(t *testing.T) {
	take := named(t, "a.pos.z a.pos.x b.pos.x a.pos.y b.pos.z b.pos.y", []float64{3, 1, 4, 2, 6, 5})
	c := newChart(t, take, chart.Options{})
	p := c.Plot(take)
	for i, part := range p.Parts() {
		for k, at := range part.Coordinates {
			if want := float64(3*i + k + 1); p.Values[at] != want {
				t.Errorf("%s coordinate %d is %g, want %g", part.Name, k, p.Values[at], want)
			}
		}
	}
	if got := unchanged(c, take); !slices.Equal(got, take.Data) {
		t.Errorf("data %v, want %v", got, take.Data)
	}
}

// Layouts of which nothing is known are their own chart, bit for bit, and cost
// no copy.
func TestPlainIsIdentity(t *testing.T) {
	for _, set := range []string{"NATOPS", "Libras"} {
		take := opendata.Set(t, set)[0]
		layout, err := take.Layout.WithGroups(group.FromNames(take.Layout.Channels))
		if err != nil {
			t.Fatal(err)
		}
		take.Layout = layout
		c := newChart(t, take, chart.Options{})
		p := c.Plot(take)
		if &p.Values[0] != &take.Data[0] || c.Width() != take.Width() {
			t.Errorf("%s: plain channels are copied", set)
		}
		values := slices.Clone(p.Values)
		c.Rotate(values, body.Identity(), p)
		data := c.Take(p, take.Time, values)
		if &data[0] != &values[0] || !slices.Equal(data, take.Data) {
			t.Errorf("%s: plain values do not come back as they are", set)
		}
	}
}

// pieces are headers of which random layouts are made.
var pieces = []string{
	"c%d",
	"flex%d.jntang",
	"p%d.pos.x p%d.pos.y p%d.pos.z",
	"s%d.accel.x s%d.accel.y s%d.accel.z",
	"i%d.accel.x i%d.accel.y i%d.accel.z i%d.gyro.x i%d.gyro.y i%d.gyro.z",
	"q%d.ornt.quat_x q%d.ornt.quat_y q%d.ornt.quat_z q%d.ornt.quat_w",
	"v%d.vel.x v%d.vel.y", "m%d.magn.x m%d.magn.y m%d.magn.z",
}

// drawTake draws a take of a random layout. Its quaternions are of length one
// and turn by less than a right angle in a frame, so that their signs are known.
func drawTake(t *rapid.T, tb testing.TB) *channels.Take {
	var headers []string
	for i, piece := range rapid.SliceOfN(rapid.SampledFrom(pieces), 1, 4).Draw(t, "pieces") {
		headers = append(headers, strings.ReplaceAll(piece, "%d", fmt.Sprint(i)))
	}
	take := named(tb, strings.Join(headers, " "), nil)
	frames := rapid.IntRange(1, 12).Draw(t, "frames")
	w := take.Width()
	take.Data = rapid.SliceOfN(rapid.Float64Range(-30, 30), frames*w, frames*w).Draw(t, "data")
	for i, v := range take.Data {
		take.Data[i] = math.Round(v*1e6) / 1e6 // no sensor shows numbers without end
	}
	for f := range frames {
		take.Time = append(take.Time, 0.02*float64(f))
	}
	for i, c := range take.Layout.Channels {
		if c.Component == "quat_x" {
			q := body.Identity()
			for f := range frames {
				v := take.Data[f*w+i:]
				q = quat.Mul(q, body.Exp(r3.Scale(0.02, vec(v))))
				body.Store(v, q)
			}
		}
	}
	return take
}

func TestRoundTrip(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		take := drawTake(rt, t)
		c := newChart(t, take, chart.Options{})
		if d := farthest(t, take.Data, unchanged(c, take)); !(d <= 1e-9) {
			rt.Errorf("round trip of %v is off by %g", take.Layout.Names(), d)
		}
		// Laid out like itself it is the same again.
		p := c.Plot(take)
		if q := c.PlotLike(take, p); !slices.Equal(p.Values, q.Values) {
			rt.Errorf("laid out like itself %v differs", take.Layout.Names())
		}
	})
}

// Whatever the layout, the parts hold every coordinate once, ascending.
func TestPartsHoldEveryCoordinate(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		c := newChart(t, drawTake(rt, t), chart.Options{})
		held := make([]bool, c.Width())
		for i, p := range c.Parts() {
			if p.Axes > 0 && len(p.Coordinates)%p.Axes != 0 || p.Follows >= i {
				rt.Errorf("part %+v", p)
			}
			if !slices.IsSorted(p.Coordinates) {
				rt.Errorf("coordinates of %s do not ascend", p.Name)
			}
			for _, k := range p.Coordinates {
				if held[k] {
					rt.Errorf("coordinate %d is in two parts", k)
				}
				held[k] = true
			}
		}
		if slices.Contains(held, false) {
			rt.Errorf("a coordinate is in no part: %v", held)
		}
	})
}

// Turning there and back changes nothing.
func TestRotateThereAndBack(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		take := drawTake(rt, t)
		c := newChart(t, take, chart.Options{})
		p := c.Plot(take)
		turn := func(name string) float64 { return rapid.Float64Range(-1.5, 1.5).Draw(rt, name) }
		by := body.Exp(r3.Vec{X: turn("x"), Y: turn("y"), Z: turn("z")})
		if slices.ContainsFunc(c.Parts(), func(p chart.Part) bool { return p.Axes == 2 }) {
			by = body.About(body.Z, turn("angle")) // a plane turns by part of a rotation only
		}
		values := slices.Clone(p.Values)
		c.Rotate(values, by, p)
		c.Rotate(values, quat.Conj(by), p)
		if d := farthest(t, take.Data, c.Take(p, take.Time, values)); !(d <= 1e-9) {
			rt.Errorf("%v is off by %g", take.Layout.Names(), d)
		}
	})
}

func TestRotatePlain(t *testing.T) {
	quarter := body.About(body.Z, math.Pi/2)
	cases := []struct {
		name, headers string
		data, want    []float64 // two frames
	}{
		{"places about their mean", "a.pos.x a.pos.y a.pos.z", []float64{1, 0, 5, 3, 0, 7}, []float64{2, -1, 5, 2, 1, 7}},
		{"a plane about its mean", "a.pos.x a.pos.y", []float64{1, 0, 3, 0}, []float64{2, -1, 2, 1}},
		{"rates about zero", "a.gyro.x a.gyro.y a.gyro.z", []float64{1, 0, 5, 3, 0, 7}, []float64{0, 1, 5, 0, 3, 7}},
		{"fields about zero", "a.magn.x a.magn.y a.magn.z", []float64{1, 0, 5, 3, 0, 7}, []float64{0, 1, 5, 0, 3, 7}},
		{"angles not at all", "a.ornt.x a.ornt.y a.ornt.z", []float64{1, 0, 5, 3, 0, 7}, []float64{1, 0, 5, 3, 0, 7}},
		{"a quaternion in the world", "a.ornt.quat_x a.ornt.quat_y a.ornt.quat_z a.ornt.quat_w",
			[]float64{0, 0, 0, 1, 1, 0, 0, 0}, []float64{0, 0, math.Sqrt2 / 2, math.Sqrt2 / 2, math.Sqrt2 / 2, math.Sqrt2 / 2, 0, 0}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			take := named(t, c.headers, c.data)
			ch := newChart(t, take, chart.Options{})
			p := ch.Plot(take)
			values := slices.Clone(p.Values)
			ch.Rotate(values, quarter, p)
			if d := farthest(t, c.want, ch.Take(p, take.Time, values)); !(d <= 1e-12) {
				t.Errorf("off by %g", d)
			}
		})
	}
}

func TestPanics(t *testing.T) {
	take := named(t, "a.pos.x a.pos.y", []float64{1, 2, 3, 4})
	c := newChart(t, take, chart.Options{})
	other := named(t, "a.pos.x", []float64{1, 2})
	for name, f := range map[string]func(){
		"chart: take has another number of channels": func() { c.Plot(other) },
		"chart: values do not fit the clock":         func() { c.Take(c.Plot(take), take.Time, []float64{1}) },
	} {
		func() {
			defer func() {
				if got := recover(); got != name {
					t.Errorf("panic %v, want %s", got, name)
				}
			}()
			f()
		}()
	}
}
