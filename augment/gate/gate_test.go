package gate_test

import (
	"encoding/json"
	"math"
	"math/rand/v2"
	"strings"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/augment/gate"
	"strandwise/channels"
)

// TestEachGate spoils a good take in one way at a time.
func TestEachGate(t *testing.T) {
	l := layout(channels.Position, 2)
	takes, _ := theatre(l, 3, 6, 100)
	for _, x := range takes { // the second point is fixed to the first
		for i := range x.Frames() {
			copy(x.Frame(i)[3:], []float64{x.Frame(i)[0] + 0.3, x.Frame(i)[1], x.Frame(i)[2]})
		}
	}
	source := takes[2]
	bone := gate.Bone{Name: "arm", From: []int{0, 1, 2}, To: []int{3, 4, 5}}
	o := gate.Default()
	o.BoneList = []gate.Bone{bone}
	g := fit(t, takes, o)
	moved := func(f func(c *channels.Take)) *channels.Take {
		c := takes[3].Clone() // another take of the label stands for a good candidate
		c.Data = append(c.Data[:0], source.Data...)
		for i := range c.Data {
			c.Data[i] += 0.3 * (takes[3].Data[i] - source.Data[i])
		}
		f(c)
		return c
	}
	wave := func(i, c int, frequency float64) float64 {
		return math.Sin(2*math.Pi*frequency*float64(i)/50 + float64(c))
	}
	for _, x := range []struct {
		name  string
		spoil func(c *channels.Take)
		fails []gate.Gate
	}{
		{"nothing", func(*channels.Take) {}, nil},
		{"not a number", func(c *channels.Take) { c.Data[7] = math.NaN() }, []gate.Gate{gate.Finite}},
		{"infinite", func(c *channels.Take) { c.Data[7] = math.Inf(-1) }, []gate.Gate{gate.Finite}},
		{"a clock that runs back", func(c *channels.Take) { c.Time[3] = c.Time[1] }, []gate.Gate{gate.Finite}},
		{"an arm out of reach", func(c *channels.Take) {
			for i := range c.Data {
				c.Data[i] += 1.2 * float64(1-i%6/6) // all alike, so that bones keep their length
			}
		}, []gate.Gate{gate.Range}},
		{"a tremble", func(c *channels.Take) {
			for i := range c.Data {
				c.Data[i] += 0.03 * wave(i/6, i%3, 10) // both ends alike, so that the bone keeps its length
			}
		}, []gate.Gate{gate.Jerk}},
		{"a buzz", func(c *channels.Take) {
			for i := range c.Data {
				c.Data[i] += 0.03 * wave(i/6, i%3, 20)
			}
		}, []gate.Gate{gate.Jerk, gate.Bandwidth}},
		{"a longer arm", func(c *channels.Take) {
			for i := range c.Frames() {
				c.Frame(i)[3] += 0.01 * 0.3
			}
		}, []gate.Gate{gate.Bones}},
		{"another gesture", func(c *channels.Take) {
			for i := range c.Data {
				c.Data[i] = 0.05*c.Data[i] + 0.95*takes[8].Data[i]
			}
		}, []gate.Gate{gate.Stray}},
		{"a copy", func(c *channels.Take) { copy(c.Data, source.Data) }, []gate.Gate{gate.Copy}},
	} {
		r := g.Check(moved(x.spoil), source)
		var failed []gate.Gate
		for _, k := range gate.All() {
			if r.Failed(k) {
				failed = append(failed, k)
			}
		}
		if diff := cmp.Diff(x.fails, failed); diff != "" {
			t.Errorf("%s (-want +got):\n%s%+v", x.name, diff, r)
		}
	}
}

// TestOff checks that a gate that is off fails nothing and still measures.
func TestOff(t *testing.T) {
	takes, _ := theatre(layout(channels.Acceleration, 1), 2, 4, 60)
	o := gate.Default()
	o.Off = gate.All()
	r := fit(t, takes, o).Check(takes[0].Clone(), takes[0])
	if !r.OK() || r.Value(gate.Copy) != 0 {
		t.Errorf("with every gate off a copy gives %+v", r)
	}
	o.Off = o.Off[:len(o.Off)-1]
	if r := fit(t, takes, o).Check(takes[0].Clone(), takes[0]); r.OK() || !r.Failed(gate.Copy) {
		t.Errorf("with the copy gate alone a copy gives %+v", r)
	}
}

// TestRangeMeasure checks the excess against a range known by hand.
func TestRangeMeasure(t *testing.T) {
	l := layout(channels.Position, 1)
	take := func(id string, top float64) *channels.Take {
		t := &channels.Take{ID: id, Label: "bow", Layout: l}
		for i := range 5 {
			t.Time = append(t.Time, float64(i))
			t.Data = append(t.Data, top*float64(i)/4, 0, 1)
		}
		return t
	}
	takes := []*channels.Take{take("a", 2), take("b", 4)} // x from 0 to 4, y and z still
	g := fit(t, takes, gate.Default())
	c := take("c", 5)
	c.Data[1] = -0.2 // of y
	if got, want := g.Check(c, takes[0]).Value(gate.Range), 0.25; math.Abs(got-want) > 1e-12 {
		t.Errorf("1 beyond a range of 4 measures %g, want %g", got, want)
	}
	c = take("c", 4)
	c.Data[1] = -0.2
	if got, want := g.Check(c, takes[0]).Value(gate.Range), 0.05; math.Abs(got-want) > 1e-12 {
		t.Errorf("0.2 beyond a still axis of a group of range 4 measures %g, want %g", got, want)
	}
}

// TestJerkMeasure holds jerk against derivatives known in closed form: that of
// time cubed is 6, whatever the rate, and a faster candidate has its cube more.
func TestJerkMeasure(t *testing.T) {
	for _, x := range []struct {
		quantity channels.Quantity
		want     float64 // when everything happens twice as fast
	}{{channels.Position, 8}, {channels.AngularRate, 4}, {channels.Acceleration, 2}, {channels.Misc, 2}} {
		l := layout(x.quantity, 1)
		cubic := func(id string, tempo float64) *channels.Take {
			t := &channels.Take{ID: id, Label: "bow", Layout: l}
			for i := range 40 {
				u := float64(i) / 20
				t.Time = append(t.Time, u/tempo)
				t.Data = append(t.Data, u*u*u, 2*u*u*u-u, 0)
			}
			return t
		}
		source := cubic("a", 1)
		r := fit(t, []*channels.Take{source}, gate.Default()).Check(cubic("c", 2), source)
		if got := r.Value(gate.Jerk); math.Abs(got-x.want) > 1e-6 {
			t.Errorf("%s: jerk at twice the tempo is %g times that of the source, want %g", x.quantity, got, x.want)
		}
	}
}

// TestBandMeasure holds the share of power against sines of known power.
func TestBandMeasure(t *testing.T) {
	l := layout(channels.Acceleration, 1)
	sines := func(id string, high float64) *channels.Take {
		t := &channels.Take{ID: id, Label: "bow", Layout: l}
		for i := range 256 {
			at := float64(i) / 100
			v := math.Sin(2*math.Pi*6.25*at) + high*math.Sin(2*math.Pi*25*at)
			t.Time = append(t.Time, at)
			t.Data = append(t.Data, v, -v, 2*v)
		}
		return t
	}
	source := sines("a", 0.1) // 25 Hz is above the cut of 15 Hz, though not in the upper half of 50 Hz
	r := fit(t, []*channels.Take{source}, gate.Default()).Check(sines("c", 0.3), source)
	want := (0.09 / 1.09) / (0.01 / 1.01)
	if got := r.Value(gate.Bandwidth); math.Abs(got/want-1) > 0.02 {
		t.Errorf("the share of power grows %g-fold, want %g", got, want)
	}
}

// TestClip finds the level at which a sensor stops and clips there.
func TestClip(t *testing.T) {
	l := layout(channels.Acceleration, 1)
	swing := func(size float64) *channels.Take {
		t := &channels.Take{ID: "a", Label: "swing", Layout: l}
		for i := range 60 {
			v := size * math.Sin(2*math.Pi*float64(i)/20)
			t.Time = append(t.Time, float64(i)/50)
			t.Data = append(t.Data, min(max(v, -8), 8), v/2, 0.1*v)
		}
		return t
	}
	g := fit(t, []*channels.Take{swing(12)}, gate.Default())
	want := []gate.Clip{{Channel: 0, Low: -8, High: 8}}
	if diff := cmp.Diff(want, g.Clips()); diff != "" {
		t.Errorf("levels (-want +got):\n%s", diff)
	}
	c := swing(12)
	c.Data[0], c.Data[3], c.Data[4] = 9, -11, 9
	if n := g.Clip(c); n != 2 || c.Data[0] != 8 || c.Data[3] != -8 || c.Data[4] != 9 {
		t.Errorf("%d values clipped: %v", n, c.Data[:6])
	}
	if g := fit(t, []*channels.Take{swing(7)}, gate.Default()); len(g.Clips()) != 0 {
		t.Errorf("a swing within the range clips at %v", g.Clips())
	}
	given := gate.Default()
	given.Clips = []gate.Clip{{Channel: 2, Low: math.Inf(-1), High: 1}}
	if diff := cmp.Diff(given.Clips, fit(t, []*channels.Take{swing(12)}, given).Clips()); diff != "" {
		t.Errorf("levels given (-want +got):\n%s", diff)
	}
}

// TestRestIsNoClip checks that a hand that rests at the end of its way does not
// clip.
func TestRestIsNoClip(t *testing.T) {
	l := layout(channels.Position, 1)
	take := &channels.Take{ID: "a", Label: "bow", Layout: l}
	for i := range 40 {
		v := float64(min(i, 10))
		take.Time = append(take.Time, float64(i))
		take.Data = append(take.Data, v, v, v)
	}
	if g := fit(t, []*channels.Take{take}, gate.Default()); len(g.Clips()) != 0 {
		t.Errorf("a rest clips at %v", g.Clips())
	}
}

// TestOrderOfTakes checks that limits do not depend on the order of takes.
func TestOrderOfTakes(t *testing.T) {
	takes, scales := theatre(layout(channels.Position, 1), 3, 9, 50)
	rapid.Check(t, func(t *rapid.T) {
		o := gate.Default()
		o.References = rapid.IntRange(1, 12).Draw(t, "references")
		mixed := rapid.Permutation(takes).Draw(t, "order")
		a, err := gate.Fit(takes, scales, o)
		if err != nil {
			t.Fatal(err)
		}
		b, err := gate.Fit(mixed, scales, o)
		if err != nil {
			t.Fatal(err)
		}
		candidate, source := takes[rapid.IntRange(0, len(takes)-1).Draw(t, "candidate")], takes[0]
		x, y := a.Check(candidate, source), b.Check(candidate, source)
		for _, g := range gate.All() {
			if u, v := x.Value(g), y.Value(g); math.Abs(u-v) > 1e-12*math.Abs(u) || x.Failed(g) != y.Failed(g) {
				t.Errorf("%s: %g in one order and %g in another", g, u, v)
			}
		}
	})
}

// TestNearnessAgainstPlain holds the search, which stops early, against every
// distance computed in full.
func TestNearnessAgainstPlain(t *testing.T) {
	l := layout(channels.Position, 2)
	takes, scales := theatre(l, 4, 5, 32) // as many frames as a sketch, so that nothing is lost
	o := gate.Default()
	g, err := gate.Fit(takes, scales, o)
	if err != nil {
		t.Fatal(err)
	}
	rapid.Check(t, func(t *rapid.T) {
		r := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		source := takes[r.IntN(len(takes))]
		c := waves(l, r.IntN(4), "c", 32, r)
		for i := range c.Data {
			c.Data[i] += 0.5 * (source.Data[i] - c.Data[i])
		}
		own, other := math.Inf(1), math.Inf(1)
		for _, x := range takes {
			d := plainDistance(scales.Apply(x), scales.Apply(c))
			if x.Label == source.Label {
				own = min(own, d)
			} else {
				other = min(other, d)
			}
		}
		if got, want := g.Check(c, source).Value(gate.Stray), own/other; math.Abs(got-want) > 1e-9*want {
			t.Errorf("ratio %g, want %g", got, want)
		}
	})
}

func plainDistance(a, b []float64) float64 {
	sum := 0.0
	for i := range a {
		sum += (a[i] - b[i]) * (a[i] - b[i])
	}
	return math.Sqrt(sum)
}

// TestNothingToMeasure checks that what cannot be measured passes.
func TestNothingToMeasure(t *testing.T) {
	takes, _ := theatre(layout(channels.Position, 1), 1, 1, 20)
	r := fit(t, takes, gate.Default()).Check(takes[0].Clone(), takes[0])
	for _, g := range []gate.Gate{gate.Bones, gate.Stray, gate.Copy} {
		if !math.IsNaN(r.Value(g)) || r.Failed(g) {
			t.Errorf("gate %s measures %g of one take without bones", g, r.Value(g))
		}
	}
	if !r.OK() {
		t.Errorf("result %+v", r)
	}
	noted := map[string]float64{}
	r.Note(noted)
	if _, ok := noted["gate_stray"]; ok || len(noted) != 4 {
		t.Errorf("noted %v", noted)
	}
}

// TestSharedByGoroutines checks one source from several goroutines at a time.
func TestSharedByGoroutines(t *testing.T) {
	takes, _ := theatre(layout(channels.Position, 2), 3, 5, 80)
	g := fit(t, takes, gate.Default())
	source := g.Source(takes[0])
	want := make([]gate.Result, len(takes))
	for i, c := range takes {
		want[i] = source.Check(c)
	}
	var running sync.WaitGroup
	for range 4 {
		running.Go(func() {
			for i, c := range takes {
				if got := source.Check(c); diffResults(got, want[i]) {
					t.Errorf("take %d: %+v, alone %+v", i, got, want[i])
				}
				g.Check(c, takes[i/2])
			}
		})
	}
	running.Wait()
}

func diffResults(a, b gate.Result) bool {
	for _, g := range gate.All() {
		if a.Failed(g) != b.Failed(g) || a.Value(g) != b.Value(g) && !(math.IsNaN(a.Value(g)) && math.IsNaN(b.Value(g))) {
			return true
		}
	}
	return false
}

func TestCounts(t *testing.T) {
	takes, _ := theatre(layout(channels.Position, 1), 2, 4, 60)
	g := fit(t, takes, gate.Default())
	var a, b gate.Counts
	a.Add(g.Check(takes[1], takes[0]))
	a.Add(g.Check(takes[0].Clone(), takes[0]))
	broken := takes[1].Clone()
	broken.Data[0] = math.NaN()
	b.Add(g.Check(broken, takes[0]))
	b.Merge(a)
	want := gate.Counts{Checked: 3, Passed: 1, Failed: map[gate.Gate]int{gate.Finite: 1, gate.Copy: 1}}
	if diff := cmp.Diff(want, b); diff != "" {
		t.Errorf("counts (-want +got):\n%s", diff)
	}
	text, err := json.Marshal(b)
	if err != nil || string(text) != `{"checked":3,"passed":1,"failed":{"copy":1,"finite":1}}` {
		t.Errorf("as JSON %s, %v", text, err)
	}
	var back gate.Counts
	if err := json.Unmarshal(text, &back); err != nil || cmp.Diff(b, back) != "" {
		t.Errorf("read back %+v, %v", back, err)
	}
}

func TestNames(t *testing.T) {
	for _, g := range gate.All() {
		if back, err := gate.Parse(g.String()); err != nil || back != g {
			t.Errorf("gate %s is read as %s, %v", g, back, err)
		}
	}
	if _, err := gate.Parse("garden"); err == nil || !strings.Contains(err.Error(), "finite, range") {
		t.Errorf("error %v does not list the gates", err)
	}
}

func TestOptionsFaults(t *testing.T) {
	o := gate.Options{
		Off: []gate.Gate{12}, Jerk: -1, Stray: math.NaN(), References: -1,
		BoneList: []gate.Bone{{Name: "arm", From: []int{1}, To: []int{1, 2}}},
	}
	_, err := gate.Fit(nil, nil, o)
	if err == nil {
		t.Fatal("no error")
	}
	for _, part := range []string{"jerk", "stray", "references", "bone arm", "12"} {
		if !strings.Contains(err.Error(), part) {
			t.Errorf("error does not name %s: %v", part, err)
		}
	}
	if err := gate.Default().Validate(); err != nil {
		t.Errorf("default options: %v", err)
	}
}
