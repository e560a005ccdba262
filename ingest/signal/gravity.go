package signal

import (
	"cmp"
	"math"
	"slices"

	"strandwise/channels"
)

// Rest is what an accelerometer shows where it moves least.
type Rest struct {
	Level  float64 // length of the mean vector, m/s²
	Spread float64 // root of the variances of the three axes added up, m/s²
	First  int     // first frame of the stillest window
}

// AtRest finds the stillest windows of a take: those of the given number of
// frames, each half over the one before, and of them the tenth with the least
// variance, at least one. Level and Spread are medians over these. The axes
// are three channels in m/s². There is no rest, and the second result is
// false, when the take is shorter than a window, or none is complete. Half a
// second makes a good window.
func AtRest(data []float64, width int, axes [3]int, window int) (Rest, bool) {
	n := frames(data, width)
	if window < 2 {
		panic("signal: window shorter than two frames")
	}
	var all []Rest
	for first := 0; first+window <= n; first += max(1, window/2) {
		if r := still(data, width, axes, first, window); !math.IsNaN(r.Spread) {
			all = append(all, r)
		}
	}
	if len(all) == 0 {
		return Rest{}, false
	}
	slices.SortStableFunc(all, func(a, b Rest) int { return cmp.Compare(a.Spread, b.Spread) })
	quiet := all[:max(1, len(all)/10)]
	out := Rest{Spread: quiet[len(quiet)/2].Spread, First: quiet[0].First}
	levels := make([]float64, len(quiet))
	for i, r := range quiet {
		levels[i] = r.Level
	}
	slices.Sort(levels)
	out.Level = levels[len(levels)/2]
	return out, true
}

// still measures one window. A missing value makes it NaN.
func still(data []float64, width int, axes [3]int, first, window int) Rest {
	square, variance := 0.0, 0.0
	for _, c := range axes {
		mean, about := 0.0, 0.0
		for i := first; i < first+window; i++ {
			mean += data[i*width+c] / float64(window)
		}
		for i := first; i < first+window; i++ {
			d := data[i*width+c] - mean
			about += d * d / float64(window)
		}
		square, variance = square+mean*mean, variance+about
	}
	return Rest{Level: math.Sqrt(square), Spread: math.Sqrt(variance), First: first}
}

// Gravity is what an accelerometer at rest says of its unit.
type Gravity int

// What it may say.
const (
	Unclear   Gravity = iota // it never rests, or at no level that tells
	AsStated                 // it shows the acceleration of gravity
	OtherUnit                // it would in another unit
	Absent                   // it shows none: gravity was taken out
)

// Verdict is the judgement of one take.
type Verdict struct {
	Gravity Gravity
	Unit    string // the unit that would be right, of OtherUnit
}

// An accelerometer at rest shows gravity to within levelWithin of it, turned
// any way, and rests when its spread is below spreadWithin of it. It shows
// none below absentBelow (common practice: offsets and gains of small sensors
// are within a few per cent).
const (
	levelWithin  = 0.15
	spreadWithin = 0.1
	absentBelow  = 0.05
)

// Judge holds what an accelerometer shows at rest against the unit it is
// stated to be in, from which its values were converted to m/s². The units it
// may be in instead are m/s^2, g and mg.
func Judge(r Rest, stated channels.Unit) Verdict {
	level, spread := r.Level/stated.Factor, r.Spread/stated.Factor // as recorded
	for _, symbol := range []string{"m/s^2", "g", "mg"} {
		u, err := channels.ParseUnit(symbol)
		if err != nil {
			panic("signal: a unit of acceleration is not known")
		}
		gravity := channels.StandardGravity / u.Factor
		if math.Abs(level-gravity) > levelWithin*gravity || spread > spreadWithin*gravity {
			continue
		}
		if u == stated {
			return Verdict{Gravity: AsStated}
		}
		return Verdict{OtherUnit, symbol}
	}
	if r.Level < absentBelow*channels.StandardGravity && r.Spread < absentBelow*channels.StandardGravity {
		return Verdict{Gravity: Absent}
	}
	return Verdict{}
}

// Verdicts counts the verdicts of many takes.
type Verdicts map[Verdict]int

// Common returns the verdict of a whole recording: the one that at least two
// thirds of the takes with a clear verdict agree in, when at least half of all
// takes have one. Takes is how many agree. Otherwise it is Unclear: levels that
// mean nothing fall on a clear one now and then.
func (v Verdicts) Common() (common Verdict, takes int) {
	all, unclear := 0, v[Verdict{}]
	for _, n := range v {
		all += n
	}
	for one, n := range v {
		if one.Gravity != Unclear && 2*unclear <= all && 3*n >= 2*(all-unclear) {
			return one, n
		}
	}
	return Verdict{}, unclear
}
