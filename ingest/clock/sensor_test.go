package clock_test

import (
	"math"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"strandwise/ingest/clock"
)

// logged is a recording of sensors that each write rows of their own, merged
// by time.
type logged struct{ clock.Series }

// log adds a row with one value in all of these columns.
func (l *logged) log(at, value float64, columns ...int) {
	i, found := slices.BinarySearch(l.Time, at)
	if !found {
		l.Time = slices.Insert(l.Time, i, at)
		l.Data = slices.Insert(l.Data, i*l.Width, slices.Repeat([]float64{math.NaN()}, l.Width)...)
	}
	for _, c := range columns {
		l.Data[i*l.Width+c] = value
	}
}

func TestSensors(t *testing.T) {
	apart := logged{clock.Series{Width: 4}} // 100 Hz and 40 Hz, each in rows of its own
	for i := range 100 {
		apart.log(float64(i)/100, float64(i), 0, 2)
	}
	for i := range 40 {
		apart.log(0.0013+float64(i)/40, float64(i), 1)
	}
	fourth := logged{clock.Series{Width: 2}} // the slower one in every fourth row
	for i := range 100 {
		fourth.log(float64(i)/100, 1, 0)
		if i%4 == 0 {
			fourth.log(float64(i)/100, 1, 1)
		}
	}
	marker := logged{clock.Series{Width: 2}} // out of sight for most of the time
	for i := range 100 {
		marker.log(float64(i)/100, 1, 0)
		if i%10 < 4 {
			marker.log(float64(i)/100, 1, 1)
		}
	}
	glimpse := logged{clock.Series{Width: 2}} // seen twice
	for i := range 100 {
		glimpse.log(float64(i)/100, 1, 0)
	}
	glimpse.log(0.2, 1, 1)
	glimpse.log(0.7, 1, 1)
	for _, c := range []struct {
		name    string
		series  clock.Series
		columns [][]int
		rows    []int // how many
	}{
		{"no columns", clock.Series{Time: []float64{1, 2}}, nil, nil},
		{"no rows", clock.Series{Width: 3}, nil, nil},
		{"all present", clock.Series{Time: []float64{1, 2}, Data: make([]float64, 6), Width: 3}, [][]int{{0, 1, 2}}, []int{2}},
		{"rows of their own", apart.Series, [][]int{{0, 2}, {1}}, []int{100, 40}},
		{"every fourth row", fourth.Series, [][]int{{0}, {1}}, []int{100, 25}},
		{"a marker out of sight", marker.Series, [][]int{{0, 1}}, []int{100}},
		{"a glimpse", glimpse.Series, [][]int{{0, 1}}, []int{100}},
	} {
		var columns [][]int
		var rows []int
		for _, s := range clock.Sensors(c.series.Time, c.series.Data, c.series.Width) {
			columns, rows = append(columns, s.Columns), append(rows, len(s.Rows))
		}
		if d := cmp.Diff(c.columns, columns); d != "" {
			t.Errorf("%s: columns %s", c.name, d)
		}
		if d := cmp.Diff(c.rows, rows); d != "" {
			t.Errorf("%s: rows %s", c.name, d)
		}
	}
}

// Every column with a value is in one sensor, whose rows are those where a
// column of it has one.
func TestSensorsPartition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rows, width := rapid.IntRange(0, 30).Draw(t, "rows"), rapid.IntRange(1, 5).Draw(t, "width")
		data := make([]float64, rows*width)
		for i := range data {
			if rapid.Bool().Draw(t, "missing") {
				data[i] = math.NaN()
			}
		}
		seen := map[int]bool{}
		for _, s := range clock.Sensors(uniform(0, 10, rows), data, width) {
			for _, c := range s.Columns {
				if seen[c] {
					t.Fatalf("column %d is in two sensors", c)
				}
				seen[c] = true
			}
			if want := clock.Rows(data, width, s.Columns); !slices.Equal(s.Rows, want) {
				t.Fatalf("rows %v, want %v", s.Rows, want)
			}
		}
		for c := range width {
			if has := len(clock.Rows(data, width, []int{c})) > 0; has != seen[c] {
				t.Fatalf("column %d has values: %v, is in a sensor: %v", c, has, seen[c])
			}
		}
	})
}

func TestBetween(t *testing.T) {
	a := clock.Inspect(uniform(0, 100, 1001))
	for _, c := range []struct {
		name string
		b    clock.Report
		want clock.Drift
	}{
		{"the same", a, clock.Drift{Ratio: 1, Up: 1, Down: 1}},
		{"later, and fifty parts in a million fast", clock.Inspect(uniform(0.25, 100.005, 1001)), clock.Drift{Start: 0.25, End: 0.25 + 1000/100.005 - 10, Ratio: 1.00005, Up: 1, Down: 1, Parts: 5e-5}},
		{"two fifths", clock.Inspect(uniform(0, 40, 401)), clock.Drift{Ratio: 0.4, Up: 2, Down: 5}},
		{"no simple ratio", clock.Inspect(uniform(0, 0.037, 2)), clock.Drift{End: 1/0.037 - 10, Ratio: 0.00037}},
		{"no rate", clock.Inspect([]float64{4}), clock.Drift{Start: 4, End: -6}},
	} {
		got := clock.Between(a, c.b)
		near := cmp.Comparer(func(x, y float64) bool { return math.Abs(x-y) < 1e-9 })
		if d := cmp.Diff(c.want, got, near); d != "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}
