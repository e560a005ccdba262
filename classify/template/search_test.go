package template_test

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
	"strandwise/classify/template"
)

// drawn is a random search: templates in the order in which they are offered,
// cut into blocks and dealt to workers.
type drawn struct {
	metric   template.Metric
	training []*channels.Take
	queries  []*channels.Take
	blocks   [][]template.Template
	workers  int
}

// drawer draws the values of a take.
type drawer func(t *rapid.T, name string, frames, width int) []float64

// each draws every value by itself.
func each(value *rapid.Generator[float64]) drawer {
	return func(t *rapid.T, name string, frames, width int) []float64 {
		return rapid.SliceOfN(value, frames*width, frames*width).Draw(t, name)
	}
}

// drawSearch draws a search of takes of no more than a number of frames out of
// those given.
func drawSearch(t *rapid.T, draw drawer, lengths ...int) drawn {
	width := rapid.IntRange(1, 8).Draw(t, "width")
	layout := layoutOf(width)
	cut := rapid.IntRange(0, width-1).Draw(t, "group cut")
	for _, g := range [][2]int{{0, cut}, {cut, width}} {
		group := channels.Group{Name: fmt.Sprint(g), Limb: "arm"}
		for c := g[0]; c < g[1]; c++ {
			group.Channels = append(group.Channels, c)
		}
		if len(group.Channels) > 0 {
			layout.Groups = append(layout.Groups, group)
		}
	}
	most := rapid.SampledFrom(lengths).Draw(t, "most frames")
	drawTake := func(name string) *channels.Take {
		frames := rapid.IntRange(2, most).Draw(t, name+" frames")
		x := take(name, layout, draw(t, name, frames, width))
		if x.Validate() != nil {
			x.Data[0] = 3*x.Data[0] + 1 // a take must move
		}
		return x
	}
	d := drawn{workers: rapid.IntRange(1, 3).Draw(t, "workers")}
	for i := range rapid.IntRange(1, 4).Draw(t, "queries") {
		d.queries = append(d.queries, drawTake(fmt.Sprint("query ", i)))
	}
	var all []template.Template
	recorded := rapid.IntRange(1, 6).Draw(t, "recorded templates")
	for i := range recorded + rapid.IntRange(0, 6).Draw(t, "synthetic templates") {
		all = append(all, template.Template{Take: drawTake(fmt.Sprint("template ", i)), Order: i, Synthetic: i >= recorded})
		if i < recorded {
			d.training = append(d.training, all[i].Take)
		}
		if i > 0 && rapid.IntRange(0, 3).Draw(t, "copy") == 0 {
			all[i].Take = all[rapid.IntRange(0, i-1).Draw(t, "copy of")].Take // a tie
		}
	}
	d.metric = template.Metric{
		Distance:  rapid.SampledFrom(template.Distances()).Draw(t, "distance"),
		Normalise: rapid.SampledFrom(template.Normalisations()).Draw(t, "normalisation"),
		Band:      rapid.SampledFrom([]float64{0, 0.01, 0.1, 0.2, 0.5, 1}).Draw(t, "band"),
	}
	if rapid.Bool().Draw(t, "weighted") {
		weight := rapid.SampledFrom([]float64{0, 0.5, 1, 3})
		d.metric.Weights = map[string]float64{layout.Groups[0].Name: 2}
		if len(layout.Groups) > 1 {
			d.metric.Weights[layout.Groups[1].Name] = weight.Draw(t, "weight")
		}
	}
	for all = rapid.Permutation(all).Draw(t, "order"); len(all) > 0; {
		n := rapid.IntRange(1, len(all)).Draw(t, "block")
		d.blocks = append(d.blocks, all[:n])
		all = all[n:]
	}
	return d
}

// run searches with the drawn workers, each in a goroutine of its own.
func (d drawn) run(t *rapid.T) *template.Search {
	s, err := template.NewSearch(d.metric, d.training, d.queries)
	if err != nil {
		t.Fatal(err)
	}
	var g sync.WaitGroup
	errs := make([]error, d.workers)
	for k := range d.workers {
		g.Go(func() {
			w := s.Worker()
			for i := k; i < len(d.blocks) && errs[k] == nil; i += d.workers {
				errs[k] = w.Offer(d.blocks[i])
			}
		})
	}
	g.Wait()
	for _, err := range errs {
		if err != nil {
			t.Fatal(err)
		}
	}
	return s
}

// plain returns all templates, and the metric with the common length that the
// search has found itself.
func (d drawn) plain() ([]template.Template, template.Metric) {
	var all []template.Template
	for _, b := range d.blocks {
		all = append(all, b...)
	}
	m := d.metric
	for _, t := range d.training {
		m.Length = max(m.Length, t.Frames())
	}
	return all, m
}

// TestSearchIsExact holds DTW against the plain table, bit for bit: values are
// small whole numbers, so that ties abound.
func TestSearchIsExact(t *testing.T) {
	whole := rapid.Map(rapid.IntRange(-2, 2), func(v int) float64 { return float64(v) })
	rapid.Check(t, func(t *rapid.T) { checkExact(t, drawSearch(t, each(whole), 3, 8, 30)) })
}

// TestSearchIsExactOnWalks does so with takes long enough that every bound has
// its say: random walks of whole numbers, copied with a little noise now and
// then, some channels at rest, with values far out, and in units that make them
// tiny or huge. The smallest are so small that their squares are lost.
func TestSearchIsExactOnWalks(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		unit := math.Ldexp(1, rapid.SampledFrom([]int{0, 0, 0, -10, 300, -300, -400, -538, -560}).Draw(t, "exponent"))
		offset := unit * float64(rapid.SampledFrom([]int{0, 0, 1000, -1 << 20}).Draw(t, "offset"))
		seeds := rapid.SampledFrom([]int{1, 3, 100}).Draw(t, "seeds")
		d := drawSearch(t, func(t *rapid.T, name string, frames, width int) []float64 {
			g := rand.New(rand.NewPCG(uint64(rapid.IntRange(1, seeds).Draw(t, name+" seed")), 7))
			data := wholeWalk(g, frames, width)
			for range rapid.IntRange(0, 3).Draw(t, name+" spots") {
				data[rapid.IntRange(0, len(data)-1).Draw(t, name+" spot")] += float64(rapid.SampledFrom([]int{1, -2, 500}).Draw(t, name+" moved"))
			}
			for i := range data {
				data[i] = data[i]*unit + offset
			}
			return data
		}, 6, 24, 90)
		checkExact(t, d)
	})
}

// wholeWalk returns a random walk of whole numbers, some channels at rest.
func wholeWalk(g *rand.Rand, frames, width int) []float64 {
	data := make([]float64, frames*width)
	resting := g.IntN(4)
	for i := range data {
		if c := i % width; c != resting {
			data[i] = float64(g.IntN(7) - 3)
			if i >= width {
				data[i] += data[i-width]
			}
		}
	}
	return data
}

// checkExact holds a drawn search by DTW of takes as they are against the plain
// code.
func checkExact(t *rapid.T, d drawn) {
	d.metric.Normalise = template.AsIs
	d.metric.Distance = rapid.SampledFrom([]template.Distance{template.DTWDependent, template.DTWIndependent}).Draw(t, "warped")
	checkSearch(t, d, func(got, want template.Match, _ *channels.Take, _ []template.Template, _ template.Metric) bool {
		return got == want
	})
}

// distanceTolerance is how far sums in another order, of values about 1, may
// be apart.
const distanceTolerance = 1e-9

// TestSearchAgreesWithPlain holds every distance and normalisation against the
// plain code: the template found is as near as the nearest.
func TestSearchAgreesWithPlain(t *testing.T) {
	// Thousandths: nothing so small that the reference itself loses it.
	real := rapid.Map(rapid.IntRange(-2000, 2000), func(v int) float64 { return float64(v) / 1000 })
	rapid.Check(t, func(t *rapid.T) {
		checkSearch(t, drawSearch(t, each(real), 3, 8, 30), func(got, want template.Match, query *channels.Take, all []template.Template, m template.Metric) bool {
			for _, o := range all {
				if o.Order == got.Order {
					own := plainDistance(m, query, o.Take)
					return math.Abs(got.Distance-own) < distanceTolerance && own < want.Distance+distanceTolerance
				}
			}
			return false
		})
	})
}

func checkSearch(t *rapid.T, d drawn, same func(got, want template.Match, query *channels.Take, all []template.Template, m template.Metric) bool) {
	s := d.run(t)
	all, m := d.plain()
	for q, query := range d.queries {
		recorded, found := s.Nearest(q)
		if want := plainNearest(m, query, all, false); !same(recorded, want, query, all, m) {
			t.Fatalf("query %d, recorded templates: found %v, want %v", q, recorded, want)
		}
		if want := plainNearest(m, query, all, true); !same(found, want, query, all, m) {
			t.Fatalf("query %d, all templates: found %v, want %v", q, found, want)
		}
	}
}

// TestWalks holds long takes, which are given up early, against the plain
// code.
func TestWalks(t *testing.T) {
	takes := walks(34, 45, 6, 1)
	for c := 0; c < 6; c += 2 {
		takes[0].Layout.Groups = append(takes[0].Layout.Groups, channels.Group{Channels: []int{c, c + 1}}) // one layout for all
	}
	var block []template.Template
	for i, x := range takes[:24] {
		block = append(block, template.Template{Take: x, Order: i, Synthetic: i >= 8})
	}
	for _, distance := range template.Distances() {
		for _, band := range []float64{0.1, 0.3, 1} {
			m := template.Metric{Distance: distance, Normalise: template.ZScore, Band: band, Length: 45}
			s, err := template.NewSearch(m, takes[:8], takes[24:])
			if err != nil {
				t.Fatal(err)
			}
			w := s.Worker()
			for part := range slices.Chunk(block, 7) {
				if err := w.Offer(part); err != nil {
					t.Fatal(err)
				}
			}
			for q, query := range takes[24:] {
				recorded, all := s.Nearest(q)
				if want := plainNearest(m, query, block, false); recorded.Order != want.Order {
					t.Errorf("%s, band %g, query %d: nearest recorded is %v, want %v", distance, band, q, recorded, want)
				}
				if want := plainNearest(m, query, block, true); all.Order != want.Order {
					t.Errorf("%s, band %g, query %d: nearest of all is %v, want %v", distance, band, q, all, want)
				}
			}
		}
	}
}

// TestBandEdges compares takes with late copies of themselves, whose paths run
// along the edge of the band, bit for bit with the plain table.
func TestBandEdges(t *testing.T) {
	g := rand.New(rand.NewPCG(5, 6))
	for range 300 {
		n, late, width := 2+g.IntN(40), g.IntN(9), 1+g.IntN(3)
		l := layoutOf(width)
		walk := make([]float64, (n+late)*width)
		for i := range walk {
			walk[i] = float64(g.IntN(7) - 3)
			if i >= width {
				walk[i] += walk[i-width]
			}
		}
		walk[0]++
		a, b := take("a", l, walk[:n*width]), take("b", l, walk[late*width:])
		if a.Validate() != nil || b.Validate() != nil {
			continue
		}
		for _, band := range []float64{0.01, 0.05, 0.1, 0.15, 0.2, 0.3, 1} {
			m := template.Metric{Distance: template.DTWDependent, Band: band}
			for _, pair := range [][2]*channels.Take{{a, b}, {b, a}} {
				if got, want := between(t, m, pair[0], pair[1]), plainDistance(m, pair[0], pair[1]); got != want {
					t.Fatalf("%d frames, %d late, band %g: distance %g, want %g", n, late, band, got, want)
				}
			}
		}
	}
}

// TestTies offers equal templates in every order: the first by order wins, be
// they like the query or as far from it after the first frame as at the end.
func TestTies(t *testing.T) {
	l := layoutOf(2)
	l.Groups = []channels.Group{{Name: "left", Channels: []int{0}}, {Name: "right", Channels: []int{1}}}
	data := make([]float64, 2*80)
	for i := range data {
		data[i] = float64(i % 5)
	}
	query := take("query", l, data)
	same := []*channels.Take{query}
	for far := range 12 {
		off := slices.Clone(data)
		off[0], off[1] = -float64(far)/3, float64(far*far)/7
		same = append(same, take("off", l, off))
	}
	for _, x := range same {
		for _, distance := range template.Distances() {
			for _, weights := range []map[string]float64{nil, {"left": 0.7, "right": 3}} {
				for _, order := range [][]int{{0, 1, 2}, {2, 1, 0}, {1, 2, 0}, {2, 0, 1}} {
					checkTie(t, template.Metric{Distance: distance, Weights: weights}, query, x, order)
				}
			}
		}
	}
}

// checkTie offers one take as three templates, of which the first by order is
// synthetic.
func checkTie(t *testing.T, m template.Metric, query, same *channels.Take, order []int) {
	t.Helper()
	s, err := template.NewSearch(m, []*channels.Take{same}, []*channels.Take{query})
	if err != nil {
		t.Fatal(err)
	}
	w := s.Worker()
	for _, o := range order {
		if err := w.Offer([]template.Template{{Take: same, Order: o, Synthetic: o == 0}}); err != nil {
			t.Fatal(err)
		}
	}
	recorded, all := s.Nearest(0)
	if recorded.Order != 1 || all.Order != 0 {
		t.Errorf("%s with weights %v to %s at %v offered as %v: nearest recorded is %d and nearest of all %d, want 1 and 0", m.Distance, m.Weights, same.ID, same.Data[:2], order, recorded.Order, all.Order)
	}
}

// TestLostSquares compares takes so small that the square of what they differ by
// is no number: they are equally far, and bounds must not say otherwise.
func TestLostSquares(t *testing.T) {
	const unit = 0x1p-538
	l := layoutOf(1)
	data := make([]float64, 40)
	for i := range data {
		data[i] = float64(i%7) * unit
	}
	off := slices.Clone(data)
	off[20] += unit
	same, near := take("same", l, data), take("near", l, off)
	for _, distance := range []template.Distance{template.DTWDependent, template.DTWIndependent} {
		s, err := template.NewSearch(template.Metric{Distance: distance, Band: 0.1}, []*channels.Take{same, near}, []*channels.Take{same})
		if err != nil {
			t.Fatal(err)
		}
		if err := s.Worker().Offer([]template.Template{{Take: same, Order: 1}, {Take: near, Order: 0}}); err != nil {
			t.Fatal(err)
		}
		if _, all := s.Nearest(0); all.Order != 0 {
			t.Errorf("%s: nearest is %v, want template 0", distance, all)
		}
	}
}

func TestNothingOffered(t *testing.T) {
	l := layoutOf(1)
	a := take("a", l, []float64{0, 1})
	s, err := template.NewSearch(template.Metric{Distance: template.DTWDependent}, []*channels.Take{a}, []*channels.Take{a})
	if err != nil {
		t.Fatal(err)
	}
	none := template.Match{Order: template.NoTemplate, Distance: math.Inf(1)}
	recorded, all := s.Nearest(0)
	if diff := cmp.Diff([]template.Match{none, none}, []template.Match{recorded, all}); diff != "" {
		t.Errorf("matches before any template (-want +got):\n%s", diff)
	}
}

func TestSearchRefuses(t *testing.T) {
	l := layoutOf(2)
	good := take("good", l, []float64{0, 0, 1, 1})
	bad := map[string]*channels.Take{
		"3 channels where the others have 2": take("wide", layoutOf(3), []float64{0, 0, 0, 1, 1, 1}),
		"not a finite number":                take("hole", l, []float64{0, 0, math.NaN(), 1}),
		"too large to be compared":           take("huge", l, []float64{0, 0, 1e200, 1}),
		"constant":                           take("still", l, []float64{1, 1, 1, 1}),
		"at least 2":                         take("short", l, []float64{1, 1}),
		"no layout":                          {ID: "bare"},
	}
	metric := template.Metric{Distance: template.EuclideanDependent}
	for text, b := range bad {
		b.Where = "evening.csv:7"
		_, err := template.NewSearch(metric, []*channels.Take{good}, []*channels.Take{good, b})
		if err == nil || !strings.Contains(err.Error(), text) || !strings.Contains(err.Error(), b.Where+": take "+b.ID) {
			t.Errorf("query %s: error %v does not say %q", b.ID, err, text)
		}
		s, err := template.NewSearch(metric, []*channels.Take{good}, []*channels.Take{good})
		if err != nil {
			t.Fatal(err)
		}
		err = s.Worker().Offer([]template.Template{{Take: good}, {Take: b, Order: 1}})
		if err == nil || !strings.Contains(err.Error(), text) || !strings.Contains(err.Error(), b.ID) {
			t.Errorf("template %s: error %v does not say %q", b.ID, err, text)
		}
	}
	if _, err := template.NewSearch(metric, nil, []*channels.Take{good}); err == nil {
		t.Error("a search without training takes was accepted")
	}
	if _, err := template.NewSearch(metric, []*channels.Take{good}, nil); err == nil {
		t.Error("a search without queries was accepted")
	}
	if _, err := template.NewSearch(template.Metric{Distance: "near"}, []*channels.Take{good}, []*channels.Take{good}); err == nil {
		t.Error("a search with an unknown distance was accepted")
	}
}

// TestNoAllocationPerPair offers a block again: the worker has all it needs.
func TestNoAllocationPerPair(t *testing.T) {
	takes := walks(24, 40, 6, 1)
	takes[0].Layout.Groups = []channels.Group{{Name: "left", Channels: []int{0, 1, 2}}, {Name: "right", Channels: []int{3, 4, 5}}}
	block := make([]template.Template, 12)
	for i := range block {
		block[i] = template.Template{Take: takes[i], Order: i}
	}
	for _, distance := range template.Distances() {
		for _, normalise := range template.Normalisations() {
			for _, weights := range []map[string]float64{nil, {"left": 2}} {
				m := template.Metric{Distance: distance, Normalise: normalise, Band: 0.2, Weights: weights}
				s, err := template.NewSearch(m, takes[:12], takes[12:])
				if err != nil {
					t.Fatal(err)
				}
				w := s.Worker()
				offer := func() {
					if err := w.Offer(block); err != nil {
						t.Fatal(err)
					}
				}
				offer()
				if n := testing.AllocsPerRun(3, offer); n > 0 {
					t.Errorf("%s of %s, weights %v: %g allocations for a block offered again, want none", distance, normalise, weights, n)
				}
			}
		}
	}
}
