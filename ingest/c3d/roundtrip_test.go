package c3d_test

import (
	"bytes"
	"fmt"
	"math"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/ingest/c3d"
)

var orders = []c3d.Order{c3d.Intel, c3d.DEC, c3d.MIPS}

// small draws a number that every float format stores exactly.
func small(t *rapid.T, name string) float64 {
	return float64(rapid.IntRange(-1<<20, 1<<20).Draw(t, name)) / 64
}

// drawRecording draws any recording the writer can write.
func drawRecording(t *rapid.T) *recording {
	r := &recording{
		order:    rapid.SampledFrom(orders).Draw(t, "order"),
		float:    rapid.Bool().Draw(t, "float"),
		unit:     rapid.SampledFrom([]string{"mm", "m", "cm", ""}).Draw(t, "unit"),
		scale:    float64(rapid.IntRange(1, 1<<20).Draw(t, "scale")) / (1 << 16),
		rate:     float64(rapid.IntRange(1, 1<<20).Draw(t, "rate")) / 256,
		first:    rapid.IntRange(0, 3000).Draw(t, "first"),
		frames:   rapid.IntRange(1, 30).Draw(t, "frames"),
		genScale: float64(rapid.IntRange(1, 1<<10).Draw(t, "gen")) / 256,
		unsigned: rapid.Bool().Draw(t, "unsigned"),
		bits:     rapid.SampledFrom([]int{12, 14, 16}).Draw(t, "bits"),
	}
	label := rapid.StringMatching(`[A-Z][A-Za-z0-9_:]{0,12}`)
	r.labels = rapid.SliceOfNDistinct(label, 0, 6, rapid.ID[string]).Draw(t, "labels")
	least := 0
	if len(r.labels) == 0 {
		least = 1
	}
	for _, l := range rapid.SliceOfNDistinct(label, least, 4, rapid.ID[string]).Draw(t, "channels") {
		c := channel{label: l, unit: rapid.SampledFrom([]string{"V", "N", "g", ""}).Draw(t, "unit"), scale: small(t, "scale")}
		c.offset = float64(rapid.IntRange(-100, 4096).Draw(t, "offset"))
		if r.unsigned {
			c.offset += 32000
		}
		r.channels = append(r.channels, c)
	}
	if len(r.channels) > 0 {
		r.perFrame = rapid.IntRange(1, 5).Draw(t, "per frame")
	}
	r.drawData(t)
	r.drawEvents(t)
	return r
}

func (r *recording) drawData(t *rapid.T) {
	stored := rapid.IntRange(-32767, 32767)
	for range r.frames * len(r.labels) {
		p := []float64{math.NaN(), math.NaN(), math.NaN()}
		if rapid.IntRange(0, 4).Draw(t, "missing") > 0 {
			for i := range p {
				p[i] = float64(stored.Draw(t, "coordinate"))
				if r.float {
					p[i] *= r.scale / 16
					p[i] = float64(float32(p[i]))
				}
			}
		}
		r.xyz = append(r.xyz, p...)
	}
	if r.unsigned {
		stored = rapid.IntRange(0, 65535)
	}
	for range r.frames * r.perFrame * len(r.channels) {
		r.stored = append(r.stored, float64(stored.Draw(t, "sample")))
	}
}

func (r *recording) drawEvents(t *rapid.T) {
	for range rapid.IntRange(0, 3).Draw(t, "header events") {
		r.events = append(r.events, c3d.Event{Time: math.Abs(small(t, "time")), Label: rapid.StringMatching(`[A-Z]{1,4}`).Draw(t, "label"), InHeader: true})
	}
	for range rapid.IntRange(0, 3).Draw(t, "events") {
		r.events = append(r.events, c3d.Event{
			Time:    math.Abs(small(t, "time")),
			Label:   rapid.SampledFrom([]string{"Foot Strike", "Foot Off"}).Draw(t, "label"),
			Context: rapid.SampledFrom([]string{"Left", "Right"}).Draw(t, "context"),
			Subject: rapid.SampledFrom([]string{"", "P 1"}).Draw(t, "subject"),
		})
	}
}

// positions are the coordinates the recording stands for.
func (r *recording) positions() []float64 {
	out := slices.Clone(r.xyz)
	for i := range out {
		if !r.float {
			out[i] *= r.scale
		}
	}
	return out
}

// values are the analog values the recording stands for.
func (r *recording) analogValues() []float64 {
	var out []float64
	for i, v := range r.stored {
		c := r.channels[i%len(r.channels)]
		out = append(out, (v-c.offset)*(c.scale*r.genScale))
	}
	return out
}

func missing(data []float64, each, n int) []int {
	out := make([]int, n)
	for i, v := range data {
		if i%each == 0 && math.IsNaN(v) {
			out[i/each%n]++
		}
	}
	return out
}

func (r *recording) want() *c3d.File {
	f := &c3d.File{Order: r.order, Float: r.float, First: r.first, Frames: r.frames, Events: r.events}
	f.Points = c3d.Points{Labels: r.labels, Unit: r.unit, Rate: r.rate, Data: r.positions(), Missing: missing(r.xyz, 3, len(r.labels))}
	if len(r.channels) == 0 {
		return f
	}
	a := c3d.Analog{Rate: r.rate * float64(r.perFrame), PerFrame: r.perFrame, Unsigned: r.unsigned, Bits: r.bits, Data: r.analogValues(), Missing: make([]int, len(r.channels))}
	for _, c := range r.channels {
		a.Labels, a.Units = append(a.Labels, c.label), append(a.Units, c.unit)
	}
	f.Analog = a
	return f
}

// compare allows for the rounding of event times, which are stored in 32 bits
// and counted from frame 1.
var compare = []cmp.Option{
	cmpopts.IgnoreFields(c3d.File{}, "Parameters"),
	cmpopts.EquateEmpty(),
	cmpopts.EquateNaNs(),
	cmp.FilterPath(func(p cmp.Path) bool { return p.Last().String() == ".Time" }, cmpopts.EquateApprox(1e-6, 1e-3)),
}

// TestRoundTrip reads what the writer wrote, of every order and storage, with
// the file's size known and unknown.
func TestRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		r := drawRecording(t)
		data := r.write()
		size := rapid.SampledFrom([]int64{0, int64(len(data))}).Draw(t, "size")
		got, err := c3d.Read(bytes.NewReader(data), c3d.Options{Size: size})
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(r.want(), got, compare...); diff != "" {
			t.Fatalf("want, got:\n%s", diff)
		}
		if size > 0 && (cap(got.Points.Data) != len(got.Points.Data) || cap(got.Analog.Data) != len(got.Analog.Data)) {
			t.Fatal("the size is known, and yet more memory is taken than the data need")
		}
	})
}

// TestPartOfAPoint reads a point as missing when one coordinate is no number,
// whatever its residual says.
func TestPartOfAPoint(t *testing.T) {
	for _, order := range orders {
		for axis := range 3 {
			r := &recording{order: order, float: true, labels: []string{"a"}, scale: 1, rate: 1, first: 1, frames: 2, xyz: []float64{1, 2, 3, 4, 5, 6}}
			data := r.write()
			put(data, len(data)-16+4*axis, r.real(math.NaN())...)
			f, err := c3d.Read(bytes.NewReader(data), c3d.Options{})
			if err != nil {
				t.Fatal(err)
			}
			want := []float64{1, 2, 3, math.NaN(), math.NaN(), math.NaN()}
			if !cmp.Equal(f.Points.Data, want, cmpopts.EquateNaNs()) || f.Points.Missing[0] != 1 {
				t.Errorf("%v, axis %d: %v, missing %v", order, axis, f.Points.Data, f.Points.Missing)
			}
		}
	}
}

// TestLateStart reads a file that begins at a frame number of more than 16
// bits.
func TestLateStart(t *testing.T) {
	r := sample()
	r.first, r.longCount, r.events = 70000, "TRIAL", nil
	f, err := c3d.Read(bytes.NewReader(r.write()), c3d.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if f.First != 70000 || f.Frames != 3 {
		t.Errorf("%d frames from %d", f.Frames, f.First)
	}
}

// TestSkip reads one series without the other.
func TestSkip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		r := drawRecording(t)
		skip := rapid.Bool().Draw(t, "skip points")
		got, err := c3d.Read(bytes.NewReader(r.write()), c3d.Options{SkipPoints: skip, SkipAnalog: !skip})
		if err != nil {
			t.Fatal(err)
		}
		want := r.want()
		if skip {
			want.Points.Data, want.Points.Missing = nil, nil
		} else {
			want.Analog.Data, want.Analog.Missing = nil, nil
		}
		if diff := cmp.Diff(want, got, compare...); diff != "" {
			t.Fatalf("want, got:\n%s", diff)
		}
	})
}

// TestTruncated cuts a sound file anywhere: it must be refused.
func TestTruncated(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		data := drawRecording(t).write()
		n := rapid.IntRange(0, len(data)-1).Draw(t, "bytes")
		if _, err := c3d.Read(bytes.NewReader(data[:n]), c3d.Options{}); err == nil {
			t.Fatalf("%d of %d bytes are read without fault", n, len(data))
		}
	})
}

// sample is a small recording with one of everything.
func sample() *recording {
	return &recording{
		order: c3d.Intel, labels: []string{"LWRI", "RWRI"}, unit: "mm", scale: 0.5, rate: 100, first: 1, frames: 3,
		xyz: []float64{
			10, 20, 30, 40, 50, 60,
			12, 22, 32, math.NaN(), math.NaN(), math.NaN(),
			14, 24, 34, 44, 54, 64,
		},
		channels: []channel{{"Fx1", "N", 2048, 0.25}, {"ACC1", "g", 0, 1}},
		perFrame: 2, genScale: 2, bits: 12,
		stored: []float64{2048, 1, 2050, 2, 2052, 3, 2054, 4, 2056, 5, 2058, 6},
		events: []c3d.Event{{Time: 0.01, Label: "GO", InHeader: true}, {Time: 0.02, Label: "Grip", Context: "Left", Subject: "P1"}},
	}
}

// wide is a recording of more points than one parameter has labels for.
func wide(points int) *recording {
	r := sample()
	r.channels, r.perFrame, r.stored, r.frames = nil, 0, nil, 2
	r.labels, r.xyz = nil, nil
	for i := range points {
		r.labels = append(r.labels, fmt.Sprintf("p%d", i))
	}
	for i := range 2 * 3 * points {
		r.xyz = append(r.xyz, float64(i))
	}
	return r
}

func TestManyLabels(t *testing.T) {
	for _, n := range []int{254, 255, 256, 510, 511, 600} {
		r := wide(n)
		got, err := c3d.Read(bytes.NewReader(r.write()), c3d.Options{})
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(r.want(), got, compare...); diff != "" {
			t.Errorf("%d points: want, got:\n%s", n, diff)
		}
	}
}

// TestManyFrames reads more frames than 16 bits count, however it is stated.
func TestManyFrames(t *testing.T) {
	for _, frames := range []int{65534, 65535, 65536, 70000} {
		for _, how := range []string{"float", "LONG_FRAMES", "TRIAL"} {
			t.Run(fmt.Sprintf("%d/%s", frames, how), func(t *testing.T) {
				r := &recording{order: c3d.MIPS, labels: []string{"a"}, unit: "m", scale: 1, rate: 1000, first: 177, frames: frames, longCount: how}
				for i := range 3 * frames {
					r.xyz = append(r.xyz, float64(i%65535-32767))
				}
				var notices []string
				got, err := c3d.Read(bytes.NewReader(r.write()), c3d.Options{Notice: func(text, _ string) { notices = append(notices, text) }})
				if err != nil {
					t.Fatal(err)
				}
				if got.Frames != frames || got.First != r.first || !slices.Equal(got.Points.Data, r.positions()) {
					t.Errorf("%d frames from %d", got.Frames, got.First)
				}
				if len(notices) > 0 {
					t.Errorf("notices %q", notices)
				}
			})
		}
	}
}

// TestParameters reads every type and number of dimensions.
func TestParameters(t *testing.T) {
	for _, order := range orders {
		r := sample()
		r.order = order
		r.extra = []parameter{
			{group: "LAB", name: "SCALAR", kind: c3d.Int, numbers: []float64{-2}},
			{group: "LAB", name: "LETTER", kind: c3d.Char, dims: []int{}, texts: nil, numbers: []float64{'x'}},
			{group: "LAB", name: "BYTES", kind: c3d.Byte, dims: []int{3}, numbers: []float64{1, 255, 128}},
			{group: "LAB", name: "CUBE", kind: c3d.Real, dims: []int{2, 1, 2}, numbers: []float64{1, -1.5, 160, 0}},
			{group: "LAB", name: "SEVEN", kind: c3d.Int, dims: []int{1, 1, 1, 1, 1, 1, 2}, numbers: []float64{1, 65535}},
			{group: "LAB", name: "WORDS", kind: c3d.Char, dims: []int{5, 2}, texts: []string{"h\xe9llo", "été"}},
			{group: "LAB", name: "NONE", kind: c3d.Char, dims: []int{0, 255, 255, 255}},
		}
		f, err := c3d.Read(bytes.NewReader(r.write()), c3d.Options{})
		if err != nil {
			t.Fatal(err)
		}
		find := func(name string) *c3d.Parameter {
			p := f.Parameters.Find("LAB", name)
			if p == nil {
				t.Fatalf("%v: no LAB:%s", order, name)
			}
			return p
		}
		for _, c := range []struct {
			name      string
			got, want any
		}{
			{"scalar", find("SCALAR").Numbers(), []float64{-2}},
			{"unsigned scalar", find("SCALAR").Unsigned(), []float64{65534}},
			{"scalar's dimensions", len(find("SCALAR").Dims), 0},
			{"letter", find("LETTER").Strings(), []string{"x"}},
			{"letter's numbers", find("LETTER").Numbers(), []float64(nil)},
			{"bytes", find("BYTES").Numbers(), []float64{1, -1, -128}},
			{"unsigned bytes", find("BYTES").Unsigned(), []float64{1, 255, 128}},
			{"cube", find("CUBE").Numbers(), []float64{1, -1.5, 160, 0}},
			{"cube's dimensions", find("CUBE").Dims, []int{2, 1, 2}},
			{"seven dimensions", find("SEVEN").Numbers(), []float64{1, -1}},
			{"UTF-8 and ISO 8859-1", find("WORDS").Strings(), []string{"héllo", "été"}},
			{"no text", find("NONE").Strings(), []string(nil)},
			{"text of numbers", find("CUBE").Strings(), []string(nil)},
			{"absent", f.Parameters.Find("LAB", "OTHER"), (*c3d.Parameter)(nil)},
		} {
			if diff := cmp.Diff(c.want, c.got); diff != "" {
				t.Errorf("%v: %s: want, got:\n%s", order, c.name, diff)
			}
		}
	}
}
