package template_test

import (
	"math"
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/classify/template"
)

func TestParseNames(t *testing.T) {
	for _, d := range template.Distances() {
		if got, err := template.ParseDistance(string(d)); got != d || err != nil {
			t.Errorf("ParseDistance(%q) = %q, %v", d, got, err)
		}
	}
	for _, n := range template.Normalisations() {
		if got, err := template.ParseNormalise(string(n)); got != n || err != nil {
			t.Errorf("ParseNormalise(%q) = %q, %v", n, got, err)
		}
	}
	_, err := template.ParseDistance("dtw")
	if want := `unknown distance "dtw"; legal names are euclidean-dependent, euclidean-independent, dtw-dependent, dtw-independent, direction-cosine`; err == nil || err.Error() != want {
		t.Errorf("ParseDistance(dtw): %v, want %s", err, want)
	}
	_, err = template.ParseNormalise("")
	if want := `unknown normalisation ""; legal names are none, z, group`; err == nil || err.Error() != want {
		t.Errorf("ParseNormalise of nothing: %v, want %s", err, want)
	}
}

func TestMetricValidate(t *testing.T) {
	for _, c := range []struct {
		metric template.Metric
		fault  string // part of the message; empty when legal
	}{
		{template.Metric{Distance: template.DTWDependent}, ""},
		{template.Metric{Distance: template.DTWDependent, Normalise: template.ZScore, Band: 1, Length: 2}, ""},
		{template.Metric{}, "unknown distance"},
		{template.Metric{Distance: template.DTWDependent, Normalise: "max"}, "unknown normalisation"},
		{template.Metric{Distance: template.DTWDependent, Band: -0.1}, "band -0.1"},
		{template.Metric{Distance: template.DTWDependent, Band: 10}, "band 10"},
		{template.Metric{Distance: template.DTWDependent, Band: math.NaN()}, "band NaN"},
		{template.Metric{Distance: template.DTWDependent, Length: 1}, "length 1"},
		{template.Metric{Distance: template.DTWDependent, Length: -5}, "length -5"},
		{template.Metric{Distance: template.DTWDependent, Weights: map[string]float64{"left": 0, "right": 1e6}}, ""},
		{template.Metric{Distance: template.DTWDependent, Weights: map[string]float64{"left": -1}}, "weight -1 of group left"},
		{template.Metric{Distance: template.DTWDependent, Weights: map[string]float64{"left": math.Inf(1)}}, "weight +Inf of group left"},
		{template.Metric{Distance: template.DTWDependent, Weights: map[string]float64{"left": math.NaN()}}, "weight NaN of group left"},
	} {
		err := c.metric.Validate()
		if (err == nil) != (c.fault == "") || err != nil && !strings.Contains(err.Error(), c.fault) {
			t.Errorf("%+v: error %v, want %q", c.metric, err, c.fault)
		}
	}
}

func TestHalfWidth(t *testing.T) {
	for _, c := range []struct {
		band float64
		n, k int
		want int
	}{
		{0.1, 130, 130, 13}, // 0.1·130 is a little more than 13 in binary
		{0.1, 128, 128, 13},
		{0.1, 121, 130, 13},
		{0.1, 80, 100, 20}, // at least the difference of the lengths
		{0.1, 100, 80, 20},
		{0.001, 50, 50, 1},
		{1, 40, 70, 70},
		{0, 40, 70, 70},
	} {
		if got := (template.Metric{Band: c.band}).HalfWidth(c.n, c.k); got != c.want {
			t.Errorf("half width of band %g of takes of %d and %d frames is %d, want %d", c.band, c.n, c.k, got, c.want)
		}
	}
}

// between returns the distance of two takes.
func between(t *testing.T, m template.Metric, a, b *channels.Take) float64 {
	t.Helper()
	s, err := template.NewSearch(m, []*channels.Take{b}, []*channels.Take{a})
	if err != nil {
		t.Fatal(err)
	}
	if err := s.Worker().Offer([]template.Template{{Take: b}}); err != nil {
		t.Fatal(err)
	}
	_, all := s.Nearest(0)
	return all.Distance
}

// TestDistances holds each distance against values worked out by hand.
func TestDistances(t *testing.T) {
	const tolerance = 1e-12
	l := layoutOf(2)
	a := take("a", l, []float64{0, 0, 3, 0, 3, 5})
	b := take("b", l, []float64{0, 4, 3, 0, 3, 0})
	late := take("late", l, []float64{0, 0, 0, 0, 3, 0, 3, 5})
	for _, c := range []struct {
		distance template.Distance
		a, b     *channels.Take
		want     float64
	}{
		{template.EuclideanDependent, a, b, math.Sqrt(16 + 25)},
		{template.EuclideanIndependent, a, b, 0 + math.Sqrt(16+25)},
		{template.DTWDependent, a, b, 16 + 25}, // frame 1 matches, the ends cannot
		{template.DTWIndependent, a, b, 0 + math.Sqrt(16+25)},
		{template.DTWDependent, a, late, 0},
		{template.DTWIndependent, late, a, 0},
		// Resampled to four frames a is (0, 0), (2, 0), (3, 5/3), (3, 5).
		{template.EuclideanDependent, a, late, math.Sqrt(4 + 25.0/9)},
		{template.EuclideanIndependent, a, late, 2 + 5.0/3},
	} {
		if got := between(t, template.Metric{Distance: c.distance}, c.a, c.b); math.Abs(got-c.want) > tolerance {
			t.Errorf("%s of %s and %s is %g, want %g", c.distance, c.a.ID, c.b.ID, got, c.want)
		}
	}
}

// TestZScore compares takes that differ by offset and scale only, and a
// channel that does not change with one that does.
func TestZScore(t *testing.T) {
	const tolerance = 1e-12
	l := layoutOf(2)
	a := take("a", l, []float64{1, 7, 2, 7, 3, 7})
	scaled := take("scaled", l, []float64{10, 0.1, 30, 0.1, 50, 0.1})
	moving := take("moving", l, []float64{1, 0, 2, 0, 3, 3})
	for _, c := range []struct {
		b    *channels.Take
		want float64
	}{
		{scaled, 0},
		{moving, math.Sqrt(3)}, // population sd 1 over three frames
	} {
		m := template.Metric{Distance: template.EuclideanDependent, Normalise: template.ZScore}
		if got := between(t, m, a, c.b); math.Abs(got-c.want) > tolerance {
			t.Errorf("distance of a and %s is %g, want %g", c.b.ID, got, c.want)
		}
	}
}

// handLayout has two groups: a hand of two channels, and a trunk of one.
func handLayout() *channels.Layout {
	l := layoutOf(3)
	l.Groups = []channels.Group{{Name: "hand", Limb: "hand", Channels: []int{0, 1}}, {Name: "trunk", Limb: "trunk", Channels: []int{2}}}
	return l
}

// TestGroupScale compares takes that differ by offsets and one scale per group:
// they are alike, and with another ratio of axes they are not.
func TestGroupScale(t *testing.T) {
	const tolerance = 1e-12
	l := handLayout()
	a := take("a", l, []float64{0, 0, 1, 1, 2, 1, 2, 4, 1})
	scaled := take("scaled", l, []float64{7, 1, 10, 10, 7, 10, 13, 13, 10})
	stretched := take("stretched", l, []float64{0, 0, 1, 1, 0, 1, 2, 0, 1})
	m := template.Metric{Distance: template.EuclideanDependent, Normalise: template.GroupScale}
	if got := between(t, m, a, scaled); got > tolerance {
		t.Errorf("with another scale per group the distance is %g, want 0", got)
	}
	// Centred, a's hand moves by (−1, −2), (0, 0), (1, 2): mean variance 10/6.
	// The other's moves by (−1, 0), (0, 0), (1, 0): mean variance 2/6. Nothing
	// changes in the trunk.
	x, y := math.Sqrt(6/10.0), math.Sqrt(6/2.0)
	if got, want := between(t, m, a, stretched), math.Sqrt(2*((x-y)*(x-y)+4*x*x)); math.Abs(got-want) > tolerance {
		t.Errorf("with another ratio of axes the distance is %g, want %g", got, want)
	}
}

// TestWeights holds weighted distances against values worked out by hand.
func TestWeights(t *testing.T) {
	const tolerance = 1e-12
	l := handLayout()
	a := take("a", l, []float64{0, 0, 0, 1, 0, 0, 2, 0, 1})
	b := take("b", l, []float64{3, 4, 2, 1, 0, 0, 2, 0, 1})
	turned := take("turned", l, []float64{0, 0, 0, 0, 1, 0, 0, 2, -1})
	for _, c := range []struct {
		distance template.Distance
		b        *channels.Take
		weights  map[string]float64
		want     float64
	}{
		{template.EuclideanDependent, b, nil, math.Sqrt(29)},
		{template.EuclideanDependent, b, map[string]float64{"hand": 1, "trunk": 1}, 5 + 2},
		{template.EuclideanDependent, b, map[string]float64{"hand": 3}, 15 + 2},
		{template.EuclideanDependent, b, map[string]float64{"hand": 0, "trunk": 0.5}, 1},
		{template.EuclideanIndependent, b, map[string]float64{"hand": 3, "trunk": 0.5}, 3*(3+4) + 1},
		{template.DTWDependent, b, map[string]float64{"hand": 3, "trunk": 0.5}, 3*25 + 2},
		{template.DTWIndependent, b, map[string]float64{"hand": 3, "trunk": 0.5}, 3*(3+4) + 1},
		{template.DirectionCosine, turned, nil, (1 + 2) / 2.0},
		{template.DirectionCosine, turned, map[string]float64{"hand": 3, "trunk": 0.5}, 3*1 + 0.5*2},
	} {
		m := template.Metric{Distance: c.distance, Weights: c.weights}
		if got := between(t, m, a, c.b); math.Abs(got-c.want) > tolerance {
			t.Errorf("%s with weights %v is %g, want %g", c.distance, c.weights, got, c.want)
		}
	}
}

func TestWeightsRefused(t *testing.T) {
	for _, c := range []struct {
		layout  *channels.Layout
		weights map[string]float64
		fault   string
	}{
		{handLayout(), map[string]float64{"foot": 2}, `weight of group "foot", which the channels do not have; their groups are hand, trunk`},
		{layoutOf(3), map[string]float64{"hand": 2}, "the channels have no groups"},
		{handLayout(), map[string]float64{"hand": 0, "trunk": 0}, "every group has weight 0"},
	} {
		a := []*channels.Take{take("a", c.layout, []float64{0, 0, 0, 1, 1, 1})}
		_, err := template.NewSearch(template.Metric{Distance: template.DTWDependent, Weights: c.weights}, a, a)
		if err == nil || !strings.Contains(err.Error(), c.fault) {
			t.Errorf("weights %v: error %v, want %q", c.weights, err, c.fault)
		}
	}
}

// TestClock checks that a take of the common length is read frame for frame,
// and one of another length on its clock.
func TestClock(t *testing.T) {
	const tolerance = 1e-12
	l := layoutOf(1)
	ramp := func(id string, clock ...float64) *channels.Take {
		r := take(id, l, clock)
		r.Time = clock
		return r
	}
	even, uneven := ramp("even", 0, 1, 2, 3), ramp("uneven", 0, 2, 2.5, 3)
	m := template.Metric{Distance: template.EuclideanDependent}
	if got, want := between(t, m, uneven, even), math.Sqrt(1+0.25); math.Abs(got-want) > tolerance {
		t.Errorf("frame for frame the distance is %g, want %g", got, want)
	}
	m.Length = 7
	if got := between(t, m, uneven, even); got > tolerance {
		t.Errorf("on the clock a ramp is %g from itself, want 0", got)
	}
}

func TestDirectionCosine(t *testing.T) {
	const tolerance = 1e-12
	one := layoutOf(2)
	two := layoutOf(2)
	two.Groups = []channels.Group{{Name: "left", Limb: "left", Channels: []int{0}}, {Name: "right", Limb: "right", Channels: []int{1}}}
	right := []float64{0, 0, 1, 0, 4, 0}
	for _, c := range []struct {
		name   string
		layout *channels.Layout
		a, b   []float64
		want   float64
	}{
		{"itself", one, right, right, 0},
		{"another pace, size and place", one, right, []float64{5, 5, 7, 5, 7.5, 5, 8, 5}, 0},
		{"across", one, right, []float64{0, 0, 0, 2}, 1},
		{"backwards", one, right, []float64{0, 0, -2, 0}, 2},
		{"half turned", one, right, []float64{0, 0, 1, 1}, 1 - math.Sqrt(0.5)},
		{"there and across", one, right, []float64{0, 0, 1, 0, 1, 1}, 0.5},
		{"one group backwards, both at rest in the other", two, right, []float64{1, 3, 0, 3}, 1},
		{"one group the same, one moving against rest", two, right, []float64{0, 0, 1, 1}, 0.5},
	} {
		got := between(t, template.Metric{Distance: template.DirectionCosine}, take("a", c.layout, c.a), take("b", c.layout, c.b))
		if math.Abs(got-c.want) > tolerance {
			t.Errorf("%s: distance %g, want %g", c.name, got, c.want)
		}
	}
}

// TestBand narrows the window until a late copy cannot be matched.
func TestBand(t *testing.T) {
	l := layoutOf(1)
	a := take("a", l, []float64{0, 1, 0, 0, 0, 0, 0, 0, 0, 0})
	late := take("late", l, []float64{0, 0, 0, 0, 0, 1, 0, 0, 0, 0})
	for band, want := range map[float64]float64{0: 0, 1: 0, 0.4: 0, 0.3: 2, 0.1: 2} {
		for _, d := range []template.Distance{template.DTWDependent, template.DTWIndependent} {
			want := want
			if d == template.DTWIndependent {
				want = math.Sqrt(want)
			}
			if got := between(t, template.Metric{Distance: d, Band: band}, a, late); got != want {
				t.Errorf("%s with band %g is %g, want %g", d, band, got, want)
			}
		}
	}
}
