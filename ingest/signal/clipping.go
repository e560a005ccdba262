package signal

import (
	"cmp"
	"math"
	"slices"
)

// Clip is a level beyond which a channel was not recorded.
type Clip struct {
	Channel     int
	Level       float64 // in the unit of the channel: the highest or the lowest value it ever has
	Count       int     // frames at the level
	Takes       int     // takes that reach it
	Longest     int     // most frames in a row at it
	Take, First int     // first take, as counted by Add, and frame at it
}

// Clipping finds clipped channels over all takes of a recording, or in one.
// It holds about 400 bytes for each channel.
//
// A channel is clipped at its highest or lowest value when the signal runs
// into that value, stays, and leaves it, all at speed: once for at least three
// frames, or twice for at least two, by steps of at least 5 % of the channel's
// range and three times the smallest step it ever makes. A smooth peak that
// quantisation flattens is left by steps of one or two of those; a rest at the
// end of the range is entered or left slowly. Once one channel of a group is
// clipped, another that has the same level, of either sign, for its own
// extreme is clipped there too.
//
// Not judged are channels of fewer than 16 distinct values, such as switches;
// a level of exactly 0, which is where one-sided quantities rest; and a level
// held for more than half of all frames. The numbers are common practice. One
// take alone shows less than many: what a coarse sensor did may then be taken
// for clipping.
type Clipping struct {
	groups   [][]int
	channels []extent
	takes    int
	frames   int
}

const (
	longRun, shortRun = 3, 2 // frames
	steepPart         = 0.05 // of the range
	smallestSteps     = 3
	fewValues         = 16
)

// extent is what one channel reaches.
type extent struct {
	top, bottom rail
	smallest    float64 // smallest step that is not 0
	distinct    []float64
}

// rail is what happened at one end of a channel's range. Levels of the bottom
// are negated, so that both ends are highest values.
type rail struct {
	Clip
	latest int        // take at the level
	long   float64    // largest step by which a run of longRun frames was entered and left
	shorts [2]float64 // the two largest for runs of shortRun frames
}

// NewClipping makes a detector for takes of this many channels. Groups list
// the channels of one sensor each.
func NewClipping(width int, groups [][]int) *Clipping {
	c := &Clipping{groups: groups, channels: make([]extent, width)}
	for i := range c.channels {
		x := &c.channels[i]
		x.smallest = math.Inf(1)
		x.top.Level, x.bottom.Level = math.Inf(-1), math.Inf(-1)
	}
	return c
}

// Add shows the detector a take.
func (c *Clipping) Add(data []float64) {
	w := len(c.channels)
	n := frames(data, w)
	series := make([]float64, n)
	for i := range c.channels {
		x := &c.channels[i]
		for f := range series {
			series[f] = data[f*w+i]
		}
		x.see(series)
		x.top.see(series, c.takes)
		for f, v := range series {
			series[f] = -v
		}
		x.bottom.see(series, c.takes)
	}
	c.takes++
	c.frames += n
}

// see notes the smallest step and the first distinct values.
func (x *extent) see(series []float64) {
	last := math.NaN()
	for _, v := range series {
		if d := math.Abs(v - last); d > 0 && d < x.smallest {
			x.smallest = d
		}
		last = v
		if len(x.distinct) < fewValues && !math.IsNaN(v) && !slices.Contains(x.distinct, v) {
			x.distinct = append(x.distinct, v)
		}
	}
}

// see follows one take at the highest value so far.
func (r *rail) see(series []float64, take int) {
	for i := 0; i < len(series); i++ {
		v := series[i]
		if !(v >= r.Level) {
			continue
		}
		if v > r.Level {
			*r = rail{Clip: Clip{Level: v, Take: take, First: i}}
		}
		end := i + 1
		for end < len(series) && series[end] == v {
			end++
		}
		r.run(series, i, end, take)
		i = end - 1
	}
}

// run notes the frames from begin to end, all at the level.
func (r *rail) run(series []float64, begin, end, take int) {
	n := end - begin
	if r.Count == 0 || r.latest != take {
		r.Takes, r.latest = r.Takes+1, take
	}
	r.Count += n
	r.Longest = max(r.Longest, n)
	if begin == 0 || end == len(series) {
		return
	}
	step := min(r.Level-series[begin-1], r.Level-series[end]) // NaN where a value is missing
	if n >= longRun && step > r.long {
		r.long = step
	}
	if n < shortRun || !(step > r.shorts[1]) {
		return
	}
	r.shorts[1] = step
	if step > r.shorts[0] {
		r.shorts[0], r.shorts[1] = step, r.shorts[0]
	}
}

// Findings lists the clipped levels found so far, by channel, the lower level
// first.
func (c *Clipping) Findings() []Clip {
	var out []Clip
	for i := range c.channels {
		for _, r := range c.ends(i) {
			if c.own(&c.channels[i], r) || c.shared(i, r) {
				found := r.Clip
				found.Channel = i
				if r == &c.channels[i].bottom {
					found.Level = -found.Level
				}
				out = append(out, found)
			}
		}
	}
	slices.SortFunc(out, func(a, b Clip) int {
		return cmp.Or(cmp.Compare(a.Channel, b.Channel), cmp.Compare(a.Level, b.Level))
	})
	return out
}

// ends returns the ends of a channel's range that may be judged at all.
func (c *Clipping) ends(channel int) []*rail {
	x := &c.channels[channel]
	if len(x.distinct) < fewValues {
		return nil
	}
	var out []*rail
	for _, r := range []*rail{&x.bottom, &x.top} {
		if r.Level != 0 && 2*r.Count <= c.frames {
			out = append(out, r)
		}
	}
	return out
}

// own tells whether a channel shows by itself that it is clipped at this end.
func (c *Clipping) own(x *extent, r *rail) bool {
	size := x.top.Level + x.bottom.Level // the bottom is negated
	steep := max(smallestSteps*x.smallest, steepPart*size)
	return r.long >= steep || r.shorts[1] >= steep
}

// shared tells whether another channel of the group is clipped at this level.
func (c *Clipping) shared(channel int, r *rail) bool {
	for _, g := range c.groups {
		if !slices.Contains(g, channel) {
			continue
		}
		for _, other := range g {
			for _, o := range c.ends(other) {
				if math.Abs(o.Level) == math.Abs(r.Level) && c.own(&c.channels[other], o) {
					return true
				}
			}
		}
	}
	return false
}
