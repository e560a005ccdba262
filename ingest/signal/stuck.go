package signal

import "math"

// Stuck finds the channels that stand still while others of their group move:
// a channel that has exactly the same value for at least half of the take and
// 16 frames in a row, while another takes at least 8 distinct values. So the
// flicker of a coarse sensor at rest is no movement. The finding names the
// value; Count is the length of the longest such run. The numbers are common
// practice. Each channel is reported once at most, in the order of the groups.
func Stuck(data []float64, width int, groups [][]int) []Finding {
	n := frames(data, width)
	var out []Finding
	for _, g := range groups {
		if len(g) < 2 {
			continue
		}
		for _, c := range g {
			f := longestStill(data, width, c)
			if f.Count >= stuckFrames && 2*f.Count >= n && othersMove(data, width, g, f) {
				out = append(out, f)
			}
		}
	}
	return out
}

const stuckFrames, movingValues = 16, 8

// longestStill finds the longest run of one value of a channel.
func longestStill(data []float64, width, channel int) Finding {
	best := Finding{Channel: channel}
	last, begin := math.NaN(), 0
	for i := 0; i*width < len(data); i++ {
		if v := data[i*width+channel]; v != last {
			last, begin = v, i
		}
		if n := i + 1 - begin; n > best.Count && !math.IsNaN(last) {
			best.First, best.Count, best.Longest, best.Value = begin, n, n, last
		}
	}
	return best
}

// othersMove tells whether another channel of the group moves during a run.
func othersMove(data []float64, width int, group []int, still Finding) bool {
	for _, c := range group {
		seen := map[float64]bool{}
		for i := still.First; i < still.First+still.Count && c != still.Channel; i++ {
			if v := data[i*width+c]; !math.IsNaN(v) {
				seen[v] = true
			}
			if len(seen) >= movingValues {
				return true
			}
		}
	}
	return false
}
