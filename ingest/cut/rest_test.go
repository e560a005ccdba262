package cut_test

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/ingest/cut"
	"strandwise/testdata/opendata"
)

// log is an invented recording of three position channels in metres at a rate:
// minimum-jerk strokes (Flash and Hogan, J. Neuroscience 5 (1985) 1688) between
// rests, with noise.
type log struct {
	rate       float64
	time, data []float64
	at         [3]float64
	strokes    [][2]int // frames
	random     *rand.Rand
}

func (l *log) add(seconds float64, to [3]float64) {
	from := l.at
	n := int(math.Round(seconds * l.rate))
	if to != from {
		l.strokes = append(l.strokes, [2]int{len(l.time), len(l.time) + n})
	}
	for i := 1; i <= n; i++ {
		u := float64(i) / float64(n)
		s := u * u * u * (10 - 15*u + 6*u*u)
		l.time = append(l.time, float64(len(l.time))/l.rate)
		for c := range 3 {
			l.data = append(l.data, from[c]+s*(to[c]-from[c])+0.0005*l.random.NormFloat64())
		}
	}
	l.at = to
}

func (l *log) rest(seconds float64) { l.add(seconds, l.at) }

// move strokes to a place somewhere else, at least 0.2 m away.
func (l *log) move(seconds float64) {
	to := l.at
	to[l.random.IntN(3)] += 0.2 + 0.4*l.random.Float64()
	l.add(seconds, to)
}

// Every stroke is cut once, with little more or less than it on each side.
func TestAtRestFindsTheStrokes(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := &log{rate: rapid.SampledFrom([]float64{30, 50, 100, 200}).Draw(t, "rate"), random: rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))}
		l.rest(1)
		for range rapid.IntRange(1, 8).Draw(t, "strokes") {
			l.move(rapid.Float64Range(0.5, 1.5).Draw(t, "stroke"))
			l.rest(rapid.Float64Range(1, 3).Draw(t, "rest"))
		}
		m, err := cut.AtRest(l.time, l.data, 3, nil, cut.Rest{})
		if err != nil {
			t.Fatal(err)
		}
		if len(m.List) != len(l.strokes) || len(m.Short) > 0 {
			t.Fatalf("%d cuts and %d short ones of %d strokes at %g Hz: %+v", len(m.List), len(m.Short), len(l.strokes), l.rate, m)
		}
		for i, c := range m.List {
			early, late := float64(l.strokes[i][0]-c.First)/l.rate, float64(c.End-l.strokes[i][1])/l.rate
			if early < -0.1 || early > 0.25 || late < -0.1 || late > 0.25 {
				t.Fatalf("cut %d begins %.3f s early and ends %.3f s late", i, early, late)
			}
			if c.Before < 0.4 || c.After < 0.4 || c.Peak < m.Enter {
				t.Fatalf("%+v", c)
			}
		}
	})
}

// The unit of the data, an offset such as gravity, a channel that never moves
// and missing values make no difference.
func TestAtRestDoesNotDependOn(t *testing.T) {
	l := &log{rate: 50, random: rand.New(rand.NewPCG(5, 1))}
	for range 5 {
		l.rest(1)
		l.move(0.8)
	}
	l.rest(1)
	want, err := cut.AtRest(l.time, l.data, 3, nil, cut.Rest{})
	if err != nil {
		t.Fatal(err)
	}
	changed := make([]float64, 0, 4*len(l.time))
	for i, v := range l.data {
		changed = append(changed, 1000*v+9.80665)
		if i%3 == 2 {
			changed = append(changed, 5)
		}
	}
	got, err := cut.AtRest(l.time, changed, 4, [][]int{{0, 1, 2, 3}}, cut.Rest{})
	if err != nil || fmt.Sprint(bounds(got.List)) != fmt.Sprint(bounds(want.List)) {
		t.Errorf("%v, want %v; %v", got, want, err)
	}
	gone := append([]float64(nil), l.data...)
	for i := 7; i < len(gone); i += 31 {
		gone[i] = math.NaN()
	}
	got, err = cut.AtRest(l.time, gone, 3, nil, cut.Rest{})
	if err != nil || len(got.List) != len(want.List) {
		t.Errorf("%v, %v", got, err)
	}
}

func bounds(list []cut.Movement) (out [][2]int) {
	for _, m := range list {
		out = append(out, [2]int{m.First, m.End})
	}
	return out
}

func TestAtRestLengths(t *testing.T) {
	l := &log{rate: 100, random: rand.New(rand.NewPCG(6, 1))}
	l.rest(2)
	l.move(0.8) // two strokes with a short rest between them
	l.rest(0.8)
	l.move(0.8)
	l.rest(2)
	l.move(0.25) // a twitch
	l.rest(2)
	l.move(0.8)
	n := len(l.time) - 20 // begun, not ended
	l.time, l.data = l.time[:n], l.data[:3*n]
	for _, c := range []struct {
		name        string
		o           cut.Rest
		list, short int
	}{
		{"as it is", cut.Rest{}, 4, 0},
		{"short rests part nothing", cut.Rest{Least: 1}, 3, 0},
		{"short movements are no takes", cut.Rest{Take: 0.5}, 3, 1},
		{"smoothing alone is no take", cut.Rest{Smoothing: 0.05, Take: 0.3}, 3, 1},
	} {
		m, err := cut.AtRest(l.time, l.data, 3, nil, c.o)
		if err != nil || len(m.List) != c.list || len(m.Short) != c.short {
			t.Errorf("%s: %+v, %v", c.name, m, err)
			continue
		}
		if last := m.List[len(m.List)-1]; last.After != 0 || last.End != len(l.time) || last.Before < 1 {
			t.Errorf("%s: last %+v", c.name, last)
		}
	}
	wide, err := cut.AtRest(l.time, l.data, 3, nil, cut.Rest{Margin: 10})
	if err != nil {
		t.Fatal(err)
	}
	narrow, err := cut.AtRest(l.time, l.data, 3, nil, cut.Rest{Margin: -1})
	if err != nil {
		t.Fatal(err)
	}
	for i := range wide.List {
		w, n := wide.List[i], narrow.List[i]
		if i > 0 && w.First < wide.List[i-1].End {
			t.Errorf("cuts %d and %d overlap", i-1, i)
		}
		if w.First > n.First || w.End < n.End || math.Abs(float64(n.First)-float64(w.First)-100*n.Before/2) > 1 && i > 0 {
			t.Errorf("cut %d is %d–%d with wide margins, %d–%d without", i, w.First, w.End, n.First, n.End)
		}
	}
	if wide.List[0].First != 0 {
		t.Errorf("first cut begins at %d", wide.List[0].First)
	}
}

func TestAtRestWithoutRest(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 1))
	made := func(f func(i int) float64) []float64 {
		out := make([]float64, 300)
		for i := range out {
			out[i] = f(i)
		}
		return out
	}
	for _, c := range []struct {
		name string
		data []float64
	}{
		{"nothing", nil},
		{"two frames", []float64{1, 2}},
		{"still", made(func(int) float64 { return 1 })},
		{"noise", made(func(int) float64 { return random.NormFloat64() })},
		{"always moving", made(func(i int) float64 { return math.Sin(float64(i) / 3) })},
		{"never seen", made(func(int) float64 { return math.NaN() })},
		{"infinite", made(func(i int) float64 { return math.Inf(1 - 2*(i%2)) })},
	} {
		m, err := cut.AtRest(uniform(0, 50, len(c.data)), c.data, 1, nil, cut.Rest{})
		var none *cut.NoRest
		if !errors.As(err, &none) || m != nil || none.Moving >= 10 || none.Error() == "" {
			t.Errorf("%s: %+v, %v", c.name, m, err)
		}
	}
}

// The takes of an open set (Chen et al., ICIP 2015), each person's in a row
// with a second of rest between them, fall apart into those takes again.
func TestAtRestOpenSet(t *testing.T) {
	takes := opendata.Set(t, "UTD_MHAD_inertial")
	w := takes[0].Width()
	random := rand.New(rand.NewPCG(1, 2))
	people := map[string][]*channels.Take{}
	for _, x := range takes {
		people[x.Subject] = append(people[x.Subject], x)
	}
	once, all := 0, 0
	for _, list := range people {
		var data []float64
		var where [][2]int
		last := list[0].Data[:w]
		for _, x := range list {
			for i := range 50 {
				for c, v := range x.Data[:w] {
					noise := []float64{0.005, 0.5}[c/3] // g, deg/s
					data = append(data, last[c]+(v-last[c])*float64(i)/50+noise*random.NormFloat64())
				}
			}
			where = append(where, [2]int{len(data) / w, (len(data) + len(x.Data)) / w})
			data = append(data, x.Data...)
			last = x.Data[len(x.Data)-w:]
		}
		m, err := cut.AtRest(uniform(0, 50, len(data)/w), data, w, [][]int{{0, 1, 2}, {3, 4, 5}}, cut.Rest{})
		if err != nil {
			t.Fatal(err)
		}
		for _, x := range where {
			n := 0
			for _, c := range m.List {
				if middle := (c.First + c.End) / 2; middle >= x[0] && middle < x[1] {
					n++
				}
			}
			if n == 1 {
				once++
			}
			all++
		}
	}
	t.Logf("%d of %d takes are cut once", once, all)
	if once < all*98/100 {
		t.Errorf("%d of %d takes are cut once", once, all)
	}
}

func ExampleAtRest() {
	var clock, data []float64
	for i := range 600 { // twelve seconds at 50 Hz: rest, and two swings
		x := 0.001 * float64(i%3)
		if i >= 100 && i < 200 || i >= 400 && i < 500 {
			x += 1 - math.Cos(2*math.Pi*float64(i%100)/100)
		}
		clock, data = append(clock, float64(i)/50), append(data, x)
	}
	m, err := cut.AtRest(clock, data, 1, nil, cut.Rest{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, c := range m.List {
		fmt.Printf("%.1f s to %.1f s\n", clock[c.First], clock[c.End-1])
	}
	// Output:
	// 1.8 s to 4.2 s
	// 7.8 s to 10.2 s
}

// go test -bench . -run '^$' ./ingest/cut
func BenchmarkAtRest(b *testing.B) {
	l := &log{rate: 100, random: rand.New(rand.NewPCG(8, 1))}
	for range 100 {
		l.rest(1)
		l.move(1)
	}
	for b.Loop() {
		if _, err := cut.AtRest(l.time, l.data, 3, nil, cut.Rest{}); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(len(l.data))*float64(b.N)/b.Elapsed().Seconds()/1e6, "Mvalues/s")
}
