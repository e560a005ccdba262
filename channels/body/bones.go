package body

import (
	"cmp"
	"math"
	"slices"
)

// Tree is a forest of tracked points that bones of constant length join, as
// [FindBones] makes it. Points that no bone reaches are roots of their own.
type Tree struct {
	Parent []int     // of each point, -1 for a root
	Length []float64 // mean distance to the parent, in the unit of the places; 0 for a root
	Spread []float64 // how the distance varies within a take: standard deviation over mean; 0 for a root
	Order  []int     // the points, each after its parent
}

// BoneSearch says what counts as a bone.
type BoneSearch struct {
	Dimensions int     // values per point, 2 or 3
	Spread     float64 // largest standard deviation of a bone's length within a take, as a share of its mean
	Movement   float64 // the places of one end vary within a take by at least so many times what the length does
	Frames     int     // smallest number of frames in which both ends are seen
}

// DefaultBoneSearch takes for a bone what keeps its length within 2 % (markers
// on skin shift by a few millimetres over bones of 0.2 m and more), while an end
// moves about by three times what the length varies or more: the distance of
// two points that both stand still is constant, too, and says nothing.
func DefaultBoneSearch() BoneSearch {
	return BoneSearch{Dimensions: 3, Spread: 0.02, Movement: 3, Frames: 10}
}

// FindBones finds pairs of tracked points whose distance is constant in all the
// given takes, each frames × points × dimensions, frame-major, and keeps the
// forest of them that is least in spread × length² (Kruskal, Proceedings of the
// American Mathematical Society 7 (1956) 48): of several points on one stiff
// part, whose distances only noise tells apart, neighbours are joined. A spread
// below a hundredth of the allowed one counts as that. Takes may be of people of
// different size: variation is measured within each. A place with a value that
// is not a number is not seen in that frame.
//
// Of each tree, the root is the point from which the farthest is nearest along
// the bones: in a person, a point of the trunk.
func FindBones(takes [][]float64, points int, o BoneSearch) Tree {
	if o.Dimensions < 1 || points < 0 {
		panic("body: points need a dimension")
	}
	for _, take := range takes {
		if len(take)%max(points*o.Dimensions, 1) != 0 {
			panic("body: a take is not frames of points")
		}
	}
	links := links(takes, points, o)
	cost := func(l link) float64 { return max(l.spread, o.Spread/100) * l.length * l.length }
	slices.SortStableFunc(links, func(a, b link) int { return cmp.Compare(cost(a), cost(b)) })
	return rooted(points, lightest(points, links))
}

// link is a candidate for a bone.
type link struct {
	p, q           int
	length, spread float64
}

// links returns the pairs of points that keep their distance while one moves.
func links(takes [][]float64, points int, o BoneSearch) []link {
	var out []link
	for p := range points {
		for q := p + 1; q < points; q++ {
			if l, ok := measure(takes, points, p, q, o); ok {
				out = append(out, l)
			}
		}
	}
	return out
}

// measure looks at one pair of points over all takes.
func measure(takes [][]float64, points, p, q int, o BoneSearch) (link, bool) {
	d, w := o.Dimensions, points*o.Dimensions
	var length, lengths, moveP, moveQ float64 // sum of lengths; sums of squares about each take's mean
	seen := 0
	for _, take := range takes {
		var l moments
		ends := make([]moments, 2*d)
		for ; len(take) >= w; take = take[w:] {
			a, b := take[p*d:(p+1)*d], take[q*d:(q+1)*d]
			distance := Euclidean(d).Distance(a, b)
			if math.IsNaN(distance) || math.IsInf(distance, 0) {
				continue
			}
			l.add(distance)
			for c := range d {
				ends[c].add(a[c])
				ends[d+c].add(b[c])
			}
		}
		seen += int(l.count)
		length += l.mean * l.count
		lengths += l.squares
		for c := range d {
			moveP += ends[c].squares
			moveQ += ends[d+c].squares
		}
	}
	if seen < max(o.Frames, 2) || length == 0 {
		return link{}, false
	}
	length /= float64(seen)
	deviation := math.Sqrt(lengths / float64(seen))
	moved := math.Sqrt(max(moveP, moveQ) / float64(seen))
	found := deviation <= o.Spread*length && moved >= o.Movement*deviation && moved > o.Spread*length
	return link{p, q, length, deviation / length}, found
}

// moments are a running mean and sum of squares about it (Welford, Technometrics
// 4 (1962) 419).
type moments struct{ count, mean, squares float64 }

func (m *moments) add(v float64) {
	m.count++
	d := v - m.mean
	m.mean += d / m.count
	m.squares += d * (v - m.mean)
}

// lightest returns, for each point, the links of the forest that takes links in
// this order wherever they join two trees.
func lightest(points int, links []link) [][]link {
	tree, out := make([]int, points), make([][]link, points)
	for i := range tree {
		tree[i] = i
	}
	for _, l := range links {
		from, to := tree[l.p], tree[l.q]
		if from == to {
			continue
		}
		out[l.p] = append(out[l.p], l)
		out[l.q] = append(out[l.q], link{l.q, l.p, l.length, l.spread})
		for i := range tree {
			if tree[i] == from {
				tree[i] = to
			}
		}
	}
	return out
}

// rooted turns a forest of links into a tree with its roots at the centres.
func rooted(points int, links [][]link) Tree {
	t := Tree{make([]int, points), make([]float64, points), make([]float64, points), make([]int, 0, points)}
	done := make([]bool, points)
	for i := range points {
		if done[i] {
			continue
		}
		t.hang(centre(links, i), link{q: -1, p: -1}, links)
		for _, j := range t.Order {
			done[j] = true
		}
	}
	return t
}

// hang adds point i, below the other end of the link it is reached by, and all
// that hangs from it.
func (t *Tree) hang(i int, by link, links [][]link) {
	t.Parent[i], t.Length[i], t.Spread[i] = by.p, by.length, by.spread
	t.Order = append(t.Order, i)
	for _, l := range links[i] {
		if l.q != by.p {
			t.hang(l.q, l, links)
		}
	}
}

// centre returns the point of i's tree from which the farthest is nearest along
// the links: the one nearest to the middle of the longest way.
func centre(links [][]link, i int) int {
	end, _ := farthest(links, i, -1)
	other, span := farthest(links, end, -1)
	best, off := i, math.Inf(1)
	for at, from, way := end, -1, 0.0; ; {
		if d := math.Abs(way - span/2); d < off {
			best, off = at, d
		}
		if at == other {
			return best
		}
		l := stepTowards(links, at, from, other)
		at, from, way = l.q, at, way+l.length
	}
}

// farthest returns the point farthest from i along the links, not going through
// from, and how far it is.
func farthest(links [][]link, i, from int) (end int, length float64) {
	end = i
	for _, l := range links[i] {
		if l.q == from {
			continue
		}
		if e, d := farthest(links, l.q, i); d+l.length > length {
			end, length = e, d+l.length
		}
	}
	return end, length
}

// stepTowards returns the link that leads from at, not back to from, to end.
func stepTowards(links [][]link, at, from, end int) link {
	for _, l := range links[at] {
		if l.q != from && leads(links, l.q, at, end) {
			return l
		}
	}
	panic("body: a tree has no way to its own end")
}

func leads(links [][]link, i, from, end int) bool {
	return i == end || slices.ContainsFunc(links[i], func(l link) bool { return l.q != from && leads(links, l.q, i, end) })
}

// Lengths writes into dst (nil allocates) the mean length of each point's bone
// in one take, frames × points × dimensions, for takes of people of another
// size than those the tree was found in: 0 for a root, and the tree's length
// where the bone is never seen.
func (t *Tree) Lengths(dst, take []float64, dimensions int) []float64 {
	if dst == nil {
		dst = make([]float64, len(t.Parent))
	}
	w := len(t.Parent) * dimensions
	for i, p := range t.Parent {
		dst[i] = t.Length[i]
		if p < 0 {
			continue
		}
		var l moments
		for rest := take; len(rest) >= w; rest = rest[w:] {
			d := Euclidean(dimensions).Distance(rest[i*dimensions:], rest[p*dimensions:])
			if !math.IsNaN(d) {
				l.add(d)
			}
		}
		if l.count > 0 {
			dst[i] = l.mean
		}
	}
	return dst
}

// Restore moves the points of one frame (points × dimensions) in place so that
// every bone has its length: from the roots outwards each point is put on the
// line from its parent to where it was, seen from where its parent was, so that
// directions are kept and whole limbs follow. A point that lies on its parent
// has no direction and stays on it; one that is not seen, or whose parent is
// not, keeps its values.
func (t *Tree) Restore(frame, lengths []float64, dimensions int) {
	if len(frame) != len(t.Parent)*dimensions || len(lengths) != len(t.Parent) {
		panic("body: frame does not fit the tree")
	}
	before := append([]float64(nil), frame...)
	for _, i := range t.Order {
		p := t.Parent[i]
		if p < 0 {
			continue
		}
		at, from := i*dimensions, p*dimensions
		length := Euclidean(dimensions).Distance(before[from:], before[at:])
		if math.IsNaN(length) {
			continue
		}
		factor := 0.0
		if length > 0 {
			factor = lengths[i] / length
		}
		for c := range dimensions {
			frame[at+c] = frame[from+c] + factor*(before[at+c]-before[from+c])
		}
	}
}
