package report

import (
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/rivo/uniseg"
	"pgregory.net/rapid"
)

// read follows a path of whole relative steps and returns its points.
func read(t *rapid.T, d string) (xs, ys []float64) {
	number := func() float64 {
		d = strings.TrimLeft(d, " l")
		end := 1
		for end < len(d) && d[end] >= '0' && d[end] <= '9' {
			end++
		}
		v, err := strconv.Atoi(d[:end])
		if err != nil {
			t.Fatalf("%q: %v", d, err)
		}
		d = d[end:]
		return float64(v)
	}
	d = strings.TrimPrefix(d, "M")
	x, y := number(), number()
	xs, ys = append(xs, x), append(ys, y)
	for d != "" && d != "l" {
		x, y = x+number(), y+number()
		xs, ys = append(xs, x), append(ys, y)
	}
	return xs, ys
}

// A line drawn in steps passes every point to within an eighth of a unit, however
// many there are: steps do not add up their rounding.
func TestFineLine(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(2, 40).Draw(t, "points")
		point := rapid.SliceOfN(rapid.Float64Range(-500, 500), n, n)
		xs, ys := point.Draw(t, "xs"), point.Draw(t, "ys")
		gotX, gotY := read(t, string(fineLine(nil, xs, ys)))
		if len(gotX) != n {
			t.Fatalf("%d points, want %d", len(gotX), n)
		}
		for i := range xs {
			if math.Abs(gotX[i]/4-xs[i]) > 0.1251 || math.Abs(gotY[i]/4-ys[i]) > 0.1251 {
				t.Fatalf("point %d is at %g %g, want %g %g", i, gotX[i]/4, gotY[i]/4, xs[i], ys[i])
			}
		}
	})
}

func TestThin(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 300).Draw(t, "points")
		most := rapid.IntRange(3, 60).Draw(t, "most")
		ys := rapid.SliceOfN(rapid.Float64Range(-1, 1), n, n).Draw(t, "ys")
		xs := make([]float64, n)
		for i := range xs {
			xs[i] = float64(i)
		}
		got := thin(xs, ys, most)
		if len(got) != min(n, most) || got[0] != 0 || got[len(got)-1] != n-1 {
			t.Fatalf("%d points became %v", n, got)
		}
		for i := 1; i < len(got); i++ {
			if got[i] <= got[i-1] {
				t.Fatalf("%v does not ascend", got)
			}
		}
	})
}

// A single spike survives any thinning that has room for it.
func TestThinKeepsSpikes(t *testing.T) {
	xs, ys := make([]float64, 1000), make([]float64, 1000)
	for i := range xs {
		xs[i] = float64(i)
	}
	for at := 1; at < 999; at += 7 {
		ys[at] = 1
		if !slices.Contains(thin(xs, ys, 20), at) {
			t.Errorf("the spike at %d is gone", at)
		}
		ys[at] = 0
	}
}

func TestTicks(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		low := rapid.Float64Range(-1e6, 1e6).Draw(t, "low")
		width := rapid.Float64Range(1e-3, 1e6).Draw(t, "width")
		got := ticks(low, low+width, 5)
		if len(got) == 0 || len(got) > 8 {
			t.Fatalf("%d ticks: %v", len(got), got)
		}
		for i, v := range got {
			if v < low-1e-6*width || v > low+width+1e-6*width || i > 0 && v <= got[i-1] {
				t.Fatalf("ticks %v between %g and %g", got, low, low+width)
			}
		}
	})
	for _, bad := range [][2]float64{{1, 1}, {2, 1}, {0, math.Inf(1)}, {math.NaN(), 1}} {
		if n := len(ticks(bad[0], bad[1], 5)); n != 1 {
			t.Errorf("%v has %d ticks", bad, n)
		}
	}
}

func TestShortened(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.String().Draw(t, "text")
		most := rapid.IntRange(2, 80).Draw(t, "most")
		got := shortened(text, most)
		if !utf8.ValidString(got) || len([]rune(got)) > mostPoints*most {
			t.Fatalf("%q", got)
		}
		if strings.HasSuffix(got, "…") && !strings.HasSuffix(text, "…") {
			width := 0
			for g := uniseg.NewGraphemes(got); g.Next(); {
				width += max(1, g.Width())
			}
			if width > most {
				t.Fatalf("%q has %d columns, want %d", got, width, most)
			}
		}
	})
	for _, c := range []struct {
		text string
		most int
		want string
	}{
		{"bow", 3, "bow"}, {"bows", 3, "bo…"}, {"挥手挥手", 5, "挥手…"}, {"", 3, ""}, {"a\x00b", 9, "a\uFFFDb"},
		{"a" + strings.Repeat("\u0301", 99), 4, "a" + strings.Repeat("\u0301", mostPoints-1)},
		{strings.Repeat("e\u0301", 5), 4, strings.Repeat("e\u0301", 3) + "…"},
	} {
		if got := shortened(c.text, c.most); got != c.want {
			t.Errorf("%q to %d is %q, want %q", c.text, c.most, got, c.want)
		}
	}
}

func TestNumbers(t *testing.T) {
	for got, want := range map[string]string{
		number(0.12345): "0.123", number(-2): "−2", number(12345): "12345", number(1e-9): "1e−09", number(math.NaN()): "–",
		percent(0.1234): "12.3 %", points(0.05): "+5.0", points(-0.05): "−5.0", points(0): "0.0",
		pValue(0.00004): "below 0.001", pValue(0.04): "0.04", whole(1234567): "1\u202f234\u202f567", whole(-1234): "−1\u202f234", whole(7): "7",
		counted(1, "take", "takes"): "1 take", counted(1200, "take", "takes"): "1\u202f200 takes",
		plainBytes(999): "999 bytes", plainBytes(7_421_056): "7.4 MB",
		tickText(0.30000000000000004, 0.1): "0.3", tickText(-20, 10): "−20", tickText(1e6, 1e5): "1e+06",
		between(-0.1, 0.25, percent): "−10.0 % to 25.0 %",
	} {
		if got != want {
			t.Errorf("got %q, want %q", got, want)
		}
	}
}

// A path in space is shown in the plane in which it runs.
func TestBestPlane(t *testing.T) {
	u, v := []float64{0.6, 0, 0.8}, []float64{0, 1, 0}
	var points [][]float64
	for i := range 50 {
		a, b := 3*math.Cos(float64(i)/8), math.Sin(float64(i)/8)
		points = append(points, []float64{1 + a*u[0] + b*v[0], 2 + a*u[1] + b*v[1], 3 + a*u[2] + b*v[2]})
	}
	pl := bestPlane(points, 3)
	if math.Abs(pl.share-1) > 1e-9 {
		t.Errorf("%g of the movement lies in the plane", pl.share)
	}
	for i := 1; i < len(points); i++ {
		x0, y0 := pl.at(points[i-1])
		x1, y1 := pl.at(points[i])
		want := 0.0
		for k := range 3 {
			want += math.Pow(points[i][k]-points[i-1][k], 2)
		}
		if got := math.Hypot(x1-x0, y1-y0); math.Abs(got-math.Sqrt(want)) > 1e-9 {
			t.Fatalf("step %d is %g long, want %g", i, got, math.Sqrt(want))
		}
	}
	for _, few := range [][][]float64{nil, {{1, 2, 3}}, {{1, 2, 3}, {1, 2, 3}}} {
		if x, y := bestPlane(few, 3).at([]float64{1, 2, 3}); !finite(x) || !finite(y) {
			t.Errorf("a point of %v is at %g %g", few, x, y)
		}
	}
	if x, y := bestPlane([][]float64{{1, 2}, {3, 5}}, 2).at([]float64{1, 2}); x != 1 || y != 2 {
		t.Errorf("in the plane coordinates are kept, got %g %g", x, y)
	}
}

func TestDirection(t *testing.T) {
	axes := []string{"x", "y", "z"}
	for want, v := range map[string][]float64{"x": {1, 0, 0}, "0.93 x − 0.35 z": {0.93, 0.01, -0.35}, "−0.50 x + 0.87 y": {-0.5, 0.87, 0}} {
		if got := direction(v, axes); got != want {
			t.Errorf("got %q, want %q", got, want)
		}
	}
}
