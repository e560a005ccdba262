package body

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/spatial/r3"
)

// Up returns the direction of up in the places of a standing or walking body
// (frames × points × 3, frame-major): along one of the axes, forwards or
// backwards. It is the one in which the body is tall and stands on what is
// lowest: for which
//
//	E / (1 + v/w + 2 s/E)
//
// is largest, E being the mean extent of the body, v the mean speed of its
// lowest point, w that of all points, and s the standard deviation of the lowest
// point's height. A foot on the ground stands still while a head or hand moves
// on, and floors are level. Where nothing moves, the first of y, z, x, -y, -z, -x in which the body is
// tallest is given. Places that are not numbers are not looked at.
func Up(places []float64, points int) r3.Vec {
	best, most := r3.Vec{Y: 1}, 0.0
	for _, d := range []r3.Vec{{Y: 1}, {Z: 1}, {X: 1}, {Y: -1}, {Z: -1}, {X: -1}} {
		var extent, floor, foot, all moments
		for f := range len(places) / max(3*points, 1) {
			now := places[3*points*f:][:3*points]
			low, height := standing(now, d)
			if low < 0 {
				continue
			}
			extent.add(height)
			floor.add(r3.Dot(d, vec(now[3*low:])))
			if f == 0 {
				continue
			}
			for i, before := 0, places[3*points*(f-1):]; i < points; i++ {
				if step := r3.Norm(r3.Sub(vec(now[3*i:]), vec(before[3*i:]))); !math.IsNaN(step) {
					all.add(step)
					if i == low {
						foot.add(step)
					}
				}
			}
		}
		if !(extent.mean > 0) {
			continue
		}
		fault := 2 * math.Sqrt(floor.squares/floor.count) / extent.mean
		if all.mean > 0 {
			fault += foot.mean / all.mean
		}
		if score := extent.mean / (1 + fault); score > most {
			best, most = d, score
		}
	}
	return best
}

// standing returns which of the points is lowest in a direction of up, -1 for
// none, and how far above it the highest is.
func standing(points []float64, up r3.Vec) (lowest int, height float64) {
	lowest, low, high := -1, math.Inf(1), math.Inf(-1)
	for i := range len(points) / 3 {
		h := r3.Dot(up, vec(points[3*i:]))
		if h < low {
			lowest, low = i, h
		}
		if h > high {
			high = h
		}
	}
	return lowest, high - low
}

// Legs returns the limbs of a body that reach its floor: each the joints from
// the top of the limb, below where the body branches, to its end. parent gives
// each joint's parent, -1 for a root; places are those of the joints in the
// world (frames × joints × 3), up is the direction of up. A joint is near the
// floor when it comes down in a tenth of the frames to within a tenth of the
// body's height of where the body's lowest point comes down to. A limb that
// branches near the floor, into toes, counts once, with its longest end.
func Legs(parent []int, places []float64, up r3.Vec) [][]int {
	near := nearFloor(len(parent), places, up)
	children := make([]int, len(parent))
	for _, p := range parent {
		if p >= 0 {
			children[p]++
		}
	}
	var out [][]int
	for i := range parent {
		if children[i] > 0 || !near[i] {
			continue
		}
		leg := []int{i}
		for p := parent[i]; p >= 0 && (children[p] == 1 || near[p]) && parent[p] >= 0; p = parent[p] {
			leg = append(leg, p)
		}
		slices.Reverse(leg)
		at := slices.IndexFunc(out, func(l []int) bool { return l[0] == leg[0] })
		switch {
		case at < 0:
			out = append(out, leg)
		case len(leg) > len(out[at]):
			out[at] = leg
		}
	}
	return out
}

// nearFloor tells which joints come down to the floor.
func nearFloor(joints int, places []float64, up r3.Vec) []bool {
	out := make([]bool, joints)
	if joints == 0 {
		return out
	}
	frames := len(places) / (3 * joints)
	heights, bottom, extent := make([][]float64, joints), []float64(nil), []float64(nil)
	for f := range frames {
		low, high := math.Inf(1), math.Inf(-1)
		for j := range joints {
			if h := r3.Dot(up, vec(places[3*(f*joints+j):])); !math.IsNaN(h) {
				heights[j] = append(heights[j], h)
				low, high = min(low, h), max(high, h)
			}
		}
		if low <= high {
			bottom, extent = append(bottom, low), append(extent, high-low)
		}
	}
	if len(bottom) == 0 {
		return out
	}
	floor, height := lowest(bottom), median(extent)
	for j, h := range heights {
		out[j] = len(h) > 0 && lowest(h) <= floor+height/10
	}
	return out
}

// lowest returns what a tenth of the values lie below, and sorts them.
func lowest(values []float64) float64 {
	slices.Sort(values)
	return values[len(values)/10]
}
