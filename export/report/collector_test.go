package report_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/export/report"
)

// ids lists the takes that a collector kept to be drawn.
func ids(labels []report.Label) []string {
	var out []string
	for _, l := range labels {
		for _, t := range append(slices.Clone(l.Recorded), l.Synthetic...) {
			out = append(out, t.ID)
		}
	}
	return out
}

// What is kept depends neither on the order of the takes nor on how they are
// divided among collectors.
func TestCollectorOrder(t *testing.T) {
	takes := theatre(t, []string{"bow", "wave"}, 30, 2, 12)
	want := collected(takes)
	rapid.Check(t, func(t *rapid.T) {
		r := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 0))
		mixed := slices.Clone(takes)
		r.Shuffle(len(mixed), func(i, j int) { mixed[i], mixed[j] = mixed[j], mixed[i] })
		at := rapid.IntRange(0, len(mixed)).Draw(t, "divided at")
		got, other := collected(mixed[:at]), collected(mixed[at:])
		got.Merge(other)
		if d := cmp.Diff(want.Counts(), got.Counts()); d != "" {
			t.Fatal(d)
		}
		if d := cmp.Diff(want.Labels(nil), got.Labels(nil), cmp.Comparer(func(a, b *channels.Layout) bool { return a == b })); d != "" {
			t.Fatal(d)
		}
	})
}

// A collector fed with the takes of a finished set keeps what it kept when they
// were made: times from the first frame and 32-bit numbers make no difference.
func TestCollectorAsStored(t *testing.T) {
	takes := theatre(t, []string{"bow"}, 5, 1, 12)
	var stored []*channels.Take
	for _, take := range takes {
		take.Time[0] += 0 // the clock starts at 0 here
		s := take.Clone()
		for i := range s.Time {
			s.Time[i] = float64(float32(s.Time[i]))
		}
		for i := range s.Data {
			s.Data[i] = float64(float32(s.Data[i]))
		}
		for i := range take.Time {
			take.Time[i] += 1024 // an exact shift of the clock
		}
		stored = append(stored, s)
	}
	same := cmp.Comparer(func(a, b *channels.Layout) bool { return a == b })
	if d := cmp.Diff(collected(stored).Labels(nil), collected(takes).Labels(nil), same, cmp.Comparer(func(a, b float64) bool { return math.Abs(a-b) < 1e-6 })); d != "" {
		t.Error(d)
	}
}

func TestCollectorBounds(t *testing.T) {
	takes := theatre(t, []string{"bow"}, 40, 3, 500)
	labels := collected(takes).Labels(nil)
	l := labels[0]
	if len(l.Recorded) != report.MostRecorded || len(l.Synthetic) != report.MostSynthetic || len(l.RecordedDistances) != 23 || len(l.SyntheticDistances) != 48 {
		t.Errorf("kept %d and %d takes, %d and %d distances", len(l.Recorded), len(l.Synthetic), len(l.RecordedDistances), len(l.SyntheticDistances))
	}
	for _, take := range append(l.Recorded, l.Synthetic...) {
		i := slices.IndexFunc(takes, func(o *channels.Take) bool { return o.ID == take.ID })
		if n := take.Frames(); n != report.MostFrames {
			t.Errorf("%s has %d frames", take.ID, n)
		}
		if d := math.Abs(take.Duration() - takes[i].Duration()); d > 1e-6 {
			t.Errorf("%s lost %g s", take.ID, d)
		}
	}
}

func TestCollectorCounts(t *testing.T) {
	l := twoWrists(t)
	r := rand.New(rand.NewPCG(2, 2))
	c := report.NewCollector()
	for i := range 3 {
		test := waved(l, fmt.Sprint("test ", i), "bow", "ann", 8, r)
		test.Split = channels.Test
		c.Add(test)
	}
	c.Add(waved(l, "train", "bow", "ann", 8, r))
	c.Add(made(waved(l, "train~0", "bow", "ann", 8, r), "train"))
	c.Add(waved(l, "nameless", "wave", "", 8, r))
	want := []report.Count{
		{Label: "bow", Subject: "ann", Recorded: 1, Synthetic: 1},
		{Label: "bow", Subject: "ann", Split: channels.Test, Recorded: 3},
		{Label: "wave", Recorded: 1},
	}
	if d := cmp.Diff(want, c.Counts()); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff([]string{"train", "train~0", "nameless"}, ids(c.Labels(nil))); d != "" {
		t.Errorf("takes of the test split are not drawn: %s", d)
	}
}

// Short takes, takes whose clock stands and takes without groups are kept too.
func TestCollectorOddTakes(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "a"}}}
	c := report.NewCollector()
	for i, at := range [][]float64{{3}, {1, 1, 1}, {0, 1}} {
		c.Add(&channels.Take{ID: fmt.Sprint(i), Layout: l, Time: at, Data: make([]float64, len(at))})
	}
	if n := len(c.Labels(nil)[0].Recorded); n != 3 {
		t.Errorf("%d takes were kept", n)
	}
}

func TestCollectorConcurrent(t *testing.T) {
	takes := theatre(t, []string{"bow", "wave"}, 10, 2, 12)
	c := report.NewCollector()
	var all sync.WaitGroup
	for part := range slices.Chunk(takes, 7) {
		all.Go(func() {
			for _, take := range part {
				c.Add(take)
			}
		})
	}
	all.Wait()
	if d := cmp.Diff(ids(collected(takes).Labels(nil)), ids(c.Labels(nil))); d != "" {
		t.Error(d)
	}
}

// wassersteinSlow is the area between two distribution functions, summed over
// the gaps between values.
func wassersteinSlow(a, b []float64) float64 {
	below := func(s []float64, v float64) float64 {
		n := 0
		for _, x := range s {
			if x <= v {
				n++
			}
		}
		return float64(n) / float64(len(s))
	}
	at := slices.Sorted(slices.Values(append(slices.Clone(a), b...)))
	area := 0.0
	for i := 1; i < len(at); i++ {
		area += (at[i] - at[i-1]) * math.Abs(below(a, at[i-1])-below(b, at[i-1]))
	}
	return area
}

func TestWasserstein(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		sample := rapid.SliceOfN(rapid.Float64Range(-4, 4), 1, 12)
		a, b := sample.Draw(t, "a"), sample.Draw(t, "b")
		if got, want := report.Wasserstein(a, b), wassersteinSlow(a, b); math.Abs(got-want) > 1e-9 {
			t.Errorf("got %g, want %g", got, want)
		}
	})
	for _, c := range []struct {
		a, b []float64
		want float64
	}{
		{[]float64{0, 1}, []float64{2, 3}, 2}, // every value moves by 2
		{[]float64{1, 1}, []float64{1}, 0},
		{nil, []float64{1}, math.NaN()},
		{[]float64{math.NaN()}, []float64{1}, math.NaN()},
	} {
		if got := report.Wasserstein(c.a, c.b); got != c.want && !(math.IsNaN(got) && math.IsNaN(c.want)) {
			t.Errorf("%v and %v are %g apart, want %g", c.a, c.b, got, c.want)
		}
	}
}

// Distances are those to the take in the middle.
func TestDistances(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "a"}, {Name: "b"}}}
	c := report.NewCollector()
	add := func(id string, level float64, synthetic bool) {
		take := &channels.Take{ID: id, Label: "bow", Layout: l, Time: []float64{0, 1, 2}, Data: []float64{level, level, level, level, level, level}}
		if synthetic {
			take.Made = &channels.Making{}
		}
		c.Add(take)
	}
	for i, level := range []float64{0, 1, 3} {
		add(fmt.Sprint(i), level, false)
	}
	add("s", 5, true)
	got := c.Labels(nil)[0]
	slices.Sort(got.RecordedDistances)
	if d := cmp.Diff([][]float64{{1, 2}, {4}}, [][]float64{got.RecordedDistances, got.SyntheticDistances}); d != "" {
		t.Error(d)
	}
	if got.Wasserstein != 2.5 { // from 1 and 2 to 4
		t.Errorf("Wasserstein-1 is %g, want 2.5", got.Wasserstein)
	}
}

func ExampleWrite() {
	var page strings.Builder
	err := report.Write(&page, report.Input{
		Verdict: "No difference shown: 9 errors in 16 tests become 8.",
		Absent:  report.Absent{Coupling: "there is one limb"},
	})
	if err != nil {
		fmt.Println(err)
	}
	for line := range strings.Lines(page.String()) {
		if strings.Contains(line, "No difference") || strings.Contains(line, "one limb") {
			fmt.Print(line)
		}
	}
	// Output:
	// <p class="verdict"><bdi>No difference shown: 9 errors in 16 tests become 8.</bdi></p>
	// <p class="none">How far limbs share their timing was not measured: there is one limb.</p>
}

func ExampleCollector() {
	layout := &channels.Layout{Channels: []channels.Channel{{Name: "wrist.accel.x", Unit: "m/s²"}}}
	c := report.NewCollector()
	for i := range 10 {
		c.Add(&channels.Take{ID: fmt.Sprint("bow_", i), Label: "bow", Subject: "Mirela", Layout: layout, Time: []float64{0, 0.02, 0.04}, Data: []float64{0, float64(i), 0}})
	}
	fmt.Printf("%d takes counted, %d kept to be drawn\n", c.Counts()[0].Recorded, len(c.Labels(nil)[0].Recorded))
	// Output: 10 takes counted, 6 kept to be drawn
}

// go test ./export/report -run ^$ -bench .
func BenchmarkCollector(b *testing.B) {
	takes := theatre(b, []string{"bow", "wave", "nod"}, 20, 8, 180)
	b.ReportAllocs()
	n := 0
	for b.Loop() {
		c := report.NewCollector()
		for _, t := range takes {
			c.Add(t)
		}
		n += len(takes)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(n), "ns/take")
}

func BenchmarkWrite(b *testing.B) {
	var labels []string
	for i := range 27 {
		labels = append(labels, fmt.Sprint("cue ", i))
	}
	in := report.Input{Labels: collected(theatre(b, labels, 6, 2, 180)).Labels(nil), Score: scoreOf(labels)}
	size := 0
	for b.Loop() {
		var page strings.Builder
		if err := report.Write(&page, in); err != nil {
			b.Fatal(err)
		}
		size = page.Len()
	}
	b.ReportMetric(float64(size)/1e6, "MB/page")
}
