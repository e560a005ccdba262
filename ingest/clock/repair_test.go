package clock_test

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/ingest/clock"
)

const amplitude = 3.0

// sine is the movement that was recorded: one swing a second.
func sine(at float64) float64 { return amplitude * math.Sin(2*math.Pi*at) }

// one returns a recording of one column.
func one(time []float64, f func(float64) float64) clock.Series {
	s := clock.Series{Time: time, Width: 1}
	for _, t := range time {
		s.Data = append(s.Data, f(t))
	}
	return s
}

// rms is the root mean square error of a column against what was recorded,
// relative to the amplitude.
func rms(pieces []clock.Piece, column int) float64 {
	sum, n := 0.0, 0
	for _, p := range pieces {
		for i, t := range p.Time {
			e := p.Data[i*p.Width+column] - sine(t)
			sum, n = sum+e*e, n+1
		}
	}
	return math.Sqrt(sum/float64(n)) / amplitude
}

// TestRepairOfARecordingAsItArrives is the whole job: an accelerometer at
// 100 Hz and another sensor at 25 Hz, logged in rows of their own, stamped to
// the nearest millisecond, some frames taken late or early, some lost, some
// written twice and some out of order. What was put in is what is counted.
func TestRepairOfARecordingAsItArrives(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	l := logged{clock.Series{Width: 3}}
	want := clock.Counts{Moved: 120 + 40, Gaps: 8 + 3, Made: 1 + 2 + 3 + 1 + 2 + 3 + 1 + 2 + 1 + 2 + 3, Duplicates: 6, Reversals: 5, Pieces: 1}
	frames := func(rate, n int, gaps map[int]int, jittered, most int, columns ...int) []int {
		lost := map[int]bool{}
		for at, length := range gaps {
			for i := range length {
				lost[at+i] = true
			}
		}
		order := random.Perm(n)
		var kept []int
		for _, i := range order {
			if lost[i] {
				continue
			}
			kept = append(kept, i)
			at := float64(i) / float64(rate)
			if i == 0 || i == n-1 {
				jittered++ // the first and the last are on time
			} else if len(kept) <= jittered {
				ms := (1 + random.Float64()*float64(most-1)) / 1000
				if random.IntN(2) == 0 {
					ms = -ms
				}
				at += ms
			}
			l.log(math.Round(at*1000)/1000, sine(at), columns...)
		}
		return kept
	}
	frames(100, 2000, map[int]int{100: 1, 333: 2, 500: 3, 750: 1, 1000: 2, 1250: 3, 1501: 1, 1777: 2}, 120, 2, 0, 1)
	frames(25, 500, map[int]int{50: 1, 200: 2, 400: 3}, 40, 6, 2)
	for range want.Duplicates { // a row is written again with the same values
		i := 50 + 300*random.IntN(6) + random.IntN(200)
		for l.Time[i] == l.Time[i-1] || l.Time[i] == l.Time[i+1] {
			i++
		}
		l.Time = slices.Insert(l.Time, i, l.Time[i])
		l.Data = slices.Insert(l.Data, i*3, l.Data[i*3:i*3+3]...)
	}
	for k := range want.Reversals { // two rows change places
		i := 200 + 350*k
		for l.Time[i] == l.Time[i-1] || l.Time[i] == l.Time[i+1] || l.Time[i+1] == l.Time[i+2] {
			i++
		}
		l.Time[i], l.Time[i+1] = l.Time[i+1], l.Time[i]
		for c := range 3 {
			l.Data[i*3+c], l.Data[i*3+3+c] = l.Data[i*3+3+c], l.Data[i*3+c]
		}
	}
	want.Frames = len(l.Time)
	want.Changes = []clock.Change{{Columns: []int{2}, From: 25, To: 100}}

	for _, how := range []clock.Interpolation{clock.Linear, clock.Cubic} {
		got, err := clock.Repair(l.Series, clock.Options{Interpolation: how, Sort: true, Merge: true})
		if err != nil {
			t.Fatal(err)
		}
		// The last frames of the faster sensor are after the last of the slower.
		if d := cmp.Diff(want, got.Counts, cmpopts.IgnoreFields(clock.Counts{}, "LeftOut")); d != "" || got.Counts.LeftOut != 3 {
			t.Errorf("left out %d; %s", got.Counts.LeftOut, d)
		}
		if n := len(got.Pieces[0].Time); got.Rate != 100 || n != 1997 {
			t.Errorf("%d frames at %g Hz", n, got.Rate)
		}
		for c := range 3 {
			e := rms(got.Pieces, c)
			t.Logf("interpolation %d, column %d: error %.3f %% of the amplitude", how, c, 100*e)
			if e > 0.01 {
				t.Errorf("interpolation %d, column %d: error %.3f %% of the amplitude", how, c, 100*e)
			}
		}
		for i := range got.Pieces[0].Time {
			if at := float64(i) / 100; math.Abs(got.Pieces[0].Time[i]-at) > 1e-9 {
				t.Fatalf("frame %d at %v s", i, got.Pieces[0].Time[i])
			}
		}
	}
}

// A recording on a uniform clock comes out with every bit it had, whatever the
// interpolation.
func TestRepairKeepsWhatIsRight(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rate := rapid.SampledFrom([]float64{10, 50, 60, 69.9926, 100, 120, 1000}).Draw(t, "rate")
		n, width := rapid.IntRange(2, 80).Draw(t, "frames"), rapid.IntRange(1, 3).Draw(t, "width")
		start := rapid.SampledFrom([]float64{0, -7.3, 1.7e9}).Draw(t, "start")
		s := clock.Series{Time: uniform(start, rate, n), Width: width, Data: rapid.SliceOfN(rapid.Float64(), n*width, n*width).Draw(t, "data")}
		how := rapid.SampledFrom([]clock.Interpolation{clock.Linear, clock.Cubic}).Draw(t, "how")
		got, err := clock.Repair(s, clock.Options{Interpolation: how})
		if err != nil {
			t.Fatal(err)
		}
		if len(got.Pieces) != 1 || !slices.Equal(got.Pieces[0].Data, s.Data) {
			t.Fatalf("%+v", got)
		}
		for i, at := range got.Pieces[0].Time {
			if math.Abs(at-s.Time[i]) > 1e-3/rate {
				t.Fatalf("frame %d moved from %v to %v", i, s.Time[i], at)
			}
		}
		if c := got.Counts; c.Moved+c.Gaps+c.Values+c.LeftOut != 0 {
			t.Fatalf("%+v", c)
		}
	})
}

// Whatever is missing: pieces are uniform, complete and in order; every value
// lies between frames no further apart than allowed; linear interpolation
// stays within the values around; and the series is not changed.
func TestRepairOfAnythingMissing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, width := rapid.IntRange(4, 120).Draw(t, "frames"), rapid.IntRange(1, 3).Draw(t, "width")
		s := clock.Series{Time: uniform(0, 10, n), Width: width, Data: make([]float64, n*width)}
		for i := range s.Data {
			s.Data[i] = float64(i % 17)
		}
		for range rapid.IntRange(0, 6).Draw(t, "holes") {
			at, long := rapid.IntRange(0, n-1).Draw(t, "at"), rapid.IntRange(1, 12).Draw(t, "long")
			c := rapid.IntRange(0, width-1).Draw(t, "column")
			for row := at; row < min(n, at+long); row++ {
				s.Data[row*width+c] = math.NaN()
			}
		}
		longest := rapid.IntRange(-1, 6).Draw(t, "longest")
		before := slices.Clone(s.Data)
		got, err := clock.Repair(s, clock.Options{LongestGap: longest, Split: true, Merge: true, Sort: true})
		if d := cmp.Diff(before, s.Data, cmpopts.EquateNaNs()); d != "" {
			t.Fatal(d)
		}
		if err != nil {
			var r *clock.Refusal
			if !errors.As(err, &r) || r.Reason != clock.TooShort && r.Reason != clock.NeverSeen && r.Reason != clock.Unsteady {
				t.Fatalf("%v", err)
			}
			return
		}
		allowed := map[bool]int{true: 3, false: max(0, longest)}[longest == 0]
		last := math.Inf(-1)
		for _, p := range got.Pieces {
			if len(p.Time) < 2 || len(p.Data) != len(p.Time)*width || p.Time[0] <= last {
				t.Fatalf("piece of %d frames from %g, after %g", len(p.Time), p.Time[0], last)
			}
			last = p.Time[len(p.Time)-1]
			for i, at := range p.Time {
				for c := range width {
					checkBetween(t, s, at, c, p.Data[i*width+c], allowed, 0.5/got.Rate)
				}
			}
		}
	})
}

// checkBetween holds a value against the frames on both sides of an instant.
// One of them may be missing for half a step at the ends.
func checkBetween(t *rapid.T, s clock.Series, at float64, column int, v float64, allowed int, half float64) {
	before, after := -1, -1
	for row, when := range s.Time {
		if math.IsNaN(s.Data[row*s.Width+column]) {
			continue
		}
		if when <= at+1e-9 {
			before = row
		}
		if when >= at-1e-9 && after < 0 {
			after = row
		}
	}
	if before < 0 && s.Time[after]-at <= half+1e-9 || after < 0 && at-s.Time[before] <= half+1e-9 {
		return
	}
	if before < 0 || after < 0 {
		t.Fatalf("value at %g s is outside of column %d", at, column)
	}
	a, b := s.Data[before*s.Width+column], s.Data[after*s.Width+column]
	if !(v >= min(a, b)-1e-9 && v <= max(a, b)+1e-9) {
		t.Fatalf("value %g at %g s between %g and %g", v, at, a, b)
	}
	// A column that is seen seldom may have a step of its own, in which its gaps
	// are counted. With at least eight values among 120 and holes of at most
	// twelve frames, it is no slower than every sixth row.
	if missing := after - before - 1; missing > allowed*6+5 {
		t.Fatalf("column %d at %g s: %d frames are missing, %d allowed", column, at, missing, allowed)
	}
}

func TestRepairSplitsOrRefuses(t *testing.T) {
	gap := func(n int) clock.Series { return one(without(uniform(0, 50, 200), 100, 100+n), sine) }
	for _, c := range []struct {
		name    string
		series  clock.Series
		options clock.Options
		frames  []int // of the pieces
		err     string
	}{
		{"three missing", gap(3), clock.Options{}, []int{200}, ""},
		{"four missing, refused", gap(4), clock.Options{}, nil, "4 frames are missing after frame 99; at most 3 may be filled"},
		{"four missing, split", gap(4), clock.Options{Split: true}, []int{100, 96}, ""},
		{"four missing, allowed", gap(4), clock.Options{LongestGap: 4}, []int{200}, ""},
		{"none allowed", gap(1), clock.Options{LongestGap: -1}, nil, "1 frames are missing after frame 99; at most 0 may be filled"},
		{"none allowed, none missing", gap(0), clock.Options{LongestGap: -1}, []int{200}, ""},
		{"a lone frame between gaps", one(append(append(uniform(0, 10, 20), 2.5), uniform(3, 10, 20)...), sine), clock.Options{Split: true}, []int{20, 20}, ""},
	} {
		got, err := clock.Repair(c.series, c.options)
		if err != nil || c.err != "" {
			if err == nil || err.Error() != c.err {
				t.Errorf("%s: error %v, want %s", c.name, err, c.err)
			}
			continue
		}
		var frames []int
		for _, p := range got.Pieces {
			frames = append(frames, len(p.Time))
		}
		if !slices.Equal(frames, c.frames) {
			t.Errorf("%s: pieces of %v frames, want %v", c.name, frames, c.frames)
		}
		if c.name == "four missing, split" && (got.Pieces[1].Row != 100 || got.Pieces[1].Time[0] != c.series.Time[100]) {
			t.Errorf("%s: second piece begins at row %d, %g s", c.name, got.Pieces[1].Row, got.Pieces[1].Time[0])
		}
	}
}

func TestRepairRefusals(t *testing.T) {
	nan := math.NaN()
	two := func(time []float64, data ...float64) clock.Series {
		return clock.Series{Time: time, Data: data, Width: 2}
	}
	var bursts []float64
	for i := range 400 {
		bursts = append(bursts, float64(i/4)*0.04+float64(i%4)*1e-4)
	}
	for _, c := range []struct {
		name    string
		series  clock.Series
		options clock.Options
		want    clock.Refusal
	}{
		{"no time", one([]float64{0, nan, 2}, sine), clock.Options{}, clock.Refusal{Reason: clock.NoTime, Row: 1, Column: -1}},
		{"infinite time", one([]float64{0, 1, math.Inf(1)}, sine), clock.Options{}, clock.Refusal{Reason: clock.NoTime, Row: 2, Column: -1}},
		{"out of order", one([]float64{0, 2, 1}, sine), clock.Options{Merge: true}, clock.Refusal{Reason: clock.OutOfOrder, Row: 2, Column: -1}},
		{"repeated", one([]float64{0, 1, 1}, sine), clock.Options{Sort: true}, clock.Refusal{Reason: clock.Repeated, Row: 2, Column: -1}},
		{"never seen", two([]float64{0, 1, 2}, 1, nan, 1, 5, 1, nan), clock.Options{}, clock.Refusal{Reason: clock.NeverSeen, Row: -1, Column: 1}},
		{"seen late", two([]float64{0, 1, 2, 3, 4, 5, 6}, 1, nan, 1, nan, 1, nan, 1, nan, 1, 1, 1, 1, 1, 1), clock.Options{}, clock.Refusal{Reason: clock.LongGap, Row: -1, Column: 1, Frames: 4, Limit: 3}},
		{"bursts", one(bursts, sine), clock.Options{}, clock.Refusal{Reason: clock.Unsteady, Row: -1, Column: 0}},
		{"empty", clock.Series{Width: 1}, clock.Options{}, clock.Refusal{Reason: clock.TooShort, Row: -1, Column: -1}},
		{"one frame", one([]float64{1}, sine), clock.Options{}, clock.Refusal{Reason: clock.TooShort, Row: -1, Column: -1}},
		{"one instant", one([]float64{1, 1}, sine), clock.Options{Merge: true}, clock.Refusal{Reason: clock.TooShort, Row: -1, Column: -1}},
		{"never together", two([]float64{0, 1, 2, 3, 4, 5, 6, 7, 8, 9}, 1, nan, 1, nan, 1, nan, 1, nan, nan, nan, nan, nan, nan, 1, nan, 1, nan, 1, nan, 1), clock.Options{Split: true}, clock.Refusal{Reason: clock.TooShort, Row: -1, Column: -1}},
		{"no rate", one([]float64{0, 1}, sine), clock.Options{Rate: nan}, clock.Refusal{Reason: clock.WrongRate, Row: -1, Column: -1}},
		{"absurd rate", one([]float64{0, 1}, sine), clock.Options{Rate: 1e12}, clock.Refusal{Reason: clock.WrongRate, Row: -1, Column: -1}},
		{"rate too low", one([]float64{0, 1}, sine), clock.Options{Rate: 1e-9}, clock.Refusal{Reason: clock.WrongRate, Row: -1, Column: -1}},
	} {
		_, err := clock.Repair(c.series, c.options)
		var got *clock.Refusal
		if !errors.As(err, &got) {
			t.Errorf("%s: error %v", c.name, err)
			continue
		}
		if d := cmp.Diff(c.want, *got); d != "" || got.Error() == "" {
			t.Errorf("%s: %s", c.name, d)
		}
	}
}

// Frames of one time become their mean; rows of two sensors that share a time
// have nothing to merge and need no leave.
func TestMerging(t *testing.T) {
	nan := math.NaN()
	s := clock.Series{Width: 2, Time: []float64{0, 0, 1, 1, 1, 2}, Data: []float64{1, nan, nan, 5, 2, 4, 4, nan, 6, 8, 3, 3}}
	if _, err := clock.Repair(s, clock.Options{}); err == nil {
		t.Error("frames were merged without leave")
	}
	got, err := clock.Repair(s, clock.Options{Merge: true})
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff([]float64{1, 5, 4, 6, 3, 3}, got.Pieces[0].Data); d != "" || got.Counts.Duplicates != 2 {
		t.Errorf("%d merged, %s", got.Counts.Duplicates, d)
	}
	apart := clock.Series{Width: 2, Time: []float64{0, 0, 1, 1}, Data: []float64{1, nan, nan, 5, 2, nan, nan, 7}}
	got, err = clock.Repair(apart, clock.Options{})
	if err != nil || !slices.Equal(got.Pieces[0].Data, []float64{1, 5, 2, 7}) || got.Counts.Duplicates != 0 {
		t.Errorf("%+v, %v", got, err)
	}
}

// Linear interpolation is exact for a straight line and cubic for a parabola,
// at uneven steps and at another rate.
func TestInterpolationIsExactForWhatItFits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		times := uniform(0, 20, 60)
		for i := range times {
			times[i] += 0.01 * rapid.Float64Range(-1, 1).Draw(t, "jitter")
		}
		rate := rapid.SampledFrom([]float64{0, 20, 33, 100}).Draw(t, "rate")
		for how, f := range []func(float64) float64{
			clock.Linear: func(x float64) float64 { return 3 - 2*x },
			clock.Cubic:  func(x float64) float64 { return 3 - 2*x + 5*x*x },
		} {
			got, err := clock.Repair(one(times, f), clock.Options{Rate: rate, Interpolation: clock.Interpolation(how)})
			if err != nil {
				t.Fatal(err)
			}
			p := got.Pieces[0]
			for i, at := range p.Time {
				on := func(frame float64) bool { return math.Abs(frame-at) < 1e-3/20 } // kept as it is
				if at < times[0] || at > times[59] || slices.ContainsFunc(times, on) {
					continue
				}
				if math.Abs(p.Data[i]-f(at)) > 1e-9 {
					t.Fatalf("interpolation %d at %g s: %g, want %g", how, at, p.Data[i], f(at))
				}
			}
		}
	})
}

// Going down in rate keeps what the new rate can hold and takes away the rest.
func TestRepairLowersTheRate(t *testing.T) {
	for _, c := range []struct{ from, to float64 }{{100, 50}, {120, 50}, {148.148, 100}, {1000, 100}} {
		low := func(at float64) float64 { return 9.80665 + math.Sin(2*math.Pi*0.3*c.to*at) } // 0.6 of the new Nyquist frequency
		high := func(at float64) float64 { return math.Sin(2 * math.Pi * 0.61 * c.to * at) } // 1.22 of it
		for _, f := range []struct {
			name string
			f    func(float64) float64
			want func(float64) float64
			near float64
		}{
			{"constant", func(float64) float64 { return 9.80665 }, func(float64) float64 { return 9.80665 }, 1e-12},
			{"kept", low, low, 0.01},
			{"taken away", high, func(float64) float64 { return 0 }, 0.01},
		} {
			got, err := clock.Repair(one(uniform(5, c.from, int(4*c.from)), f.f), clock.Options{Rate: c.to, Interpolation: clock.Cubic})
			if err != nil {
				t.Fatal(err)
			}
			p := got.Pieces[0]
			if d := cmp.Diff([]clock.Change{{Columns: []int{0}, From: c.from, To: c.to, Filtered: true}}, got.Counts.Changes, cmpopts.EquateApprox(1e-9, 0)); d != "" {
				t.Error(d)
			}
			if n := len(p.Time); math.Abs(float64(n)-4*c.to) > 1.5 || math.Abs(p.Time[1]-p.Time[0]-1/c.to) > 1e-12 {
				t.Errorf("%g to %g Hz: %d frames", c.from, c.to, n)
			}
			for i := 15; i < len(p.Time)-15; i++ {
				if math.Abs(p.Data[i]-f.want(p.Time[i])) > f.near {
					t.Errorf("%g to %g Hz, %s: frame %d is %g, want %g", c.from, c.to, f.name, i, p.Data[i], f.want(p.Time[i]))
					break
				}
			}
		}
	}
}

// Any numbers at all are looked at without a panic; what comes out is finite
// in time, in order, and not out of proportion.
func TestRepairTakesAnything(t *testing.T) {
	odd := []float64{0, 1, -1, math.NaN(), math.Inf(1), math.Inf(-1), math.MaxFloat64, -math.MaxFloat64, 5e-324, 1e300, 1e-300}
	number := rapid.OneOf(rapid.SampledFrom(odd), rapid.Float64(), rapid.Float64Range(0, 3))
	rapid.Check(t, func(t *rapid.T) {
		n, width := rapid.IntRange(0, 20).Draw(t, "frames"), rapid.IntRange(0, 3).Draw(t, "width")
		s := clock.Series{Width: width, Time: rapid.SliceOfN(number, n, n).Draw(t, "time"), Data: rapid.SliceOfN(number, n*width, n*width).Draw(t, "data")}
		o := clock.Options{
			Rate: rapid.OneOf(rapid.Just(0.), number).Draw(t, "rate"), Interpolation: clock.Cubic, LongestGap: rapid.SampledFrom([]int{0, -1, 5, math.MaxInt}).Draw(t, "longest"),
			Sort: rapid.Bool().Draw(t, "sort"), Merge: true, Split: rapid.Bool().Draw(t, "split"),
		}
		clock.Inspect(s.Time)
		got, err := clock.Repair(s, o)
		if err != nil {
			return
		}
		for _, p := range got.Pieces {
			if len(p.Time) > 1000*n || len(p.Data) != width*len(p.Time) {
				t.Fatalf("%d frames of %d", len(p.Time), n)
			}
			for i, at := range p.Time {
				if math.IsNaN(at) || math.IsInf(at, 0) || i > 0 && at <= p.Time[i-1] {
					t.Fatalf("frame %d at %g s, after %g s", i, at, p.Time[max(0, i-1)])
				}
			}
		}
	})
}

func ExampleInspect() {
	r := clock.Inspect([]float64{0, 0.010, 0.021, 0.030, 0.060, 0.070, 0.080})
	fmt.Printf("%.0f Hz, jitter %.1f ms, %d gap of %d frames after row %d\n", r.Rate(), 1000*r.Jitter99, len(r.Gaps), r.Gaps[0].Frames, r.Gaps[0].Row)
	// Output: 100 Hz, jitter 1.0 ms, 1 gap of 2 frames after row 3
}

func ExampleRepair() {
	recording := clock.Series{
		Time:  []float64{0, 0.1, 0.22, 0.3, 0.5}, // one frame late, one lost
		Data:  []float64{0, 1, 2.2, 3, 5},
		Width: 1,
	}
	r, err := clock.Repair(recording, clock.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%g Hz: %.2f\n", r.Rate, r.Pieces[0].Data)
	fmt.Printf("%d moved, %d made\n", r.Counts.Moved, r.Counts.Made)
	// Output:
	// 10 Hz: [0.00 1.00 2.00 3.00 4.00 5.00]
	// 1 moved, 1 made
}
