package group

import (
	"math"
	"slices"

	"strandwise/channels"
	"strandwise/channels/body"
)

// Bone is two groups of positions that keep their distance while they move.
type Bone struct {
	A      string  `json:"a"`
	B      string  `json:"b"`
	Length float64 `json:"length"` // mean distance, in the unit of the channels
	Spread float64 `json:"spread"` // standard deviation of the distance within a take, as a share of the mean
}

// guessed is how far the length of a bone may vary, as a share of it, where
// places are guessed, as by a camera. It counts only where nothing keeps its
// length to within the 2 % that markers do.
const guessed = 0.15

// bones finds bones between three-axis groups that hold places, or may: those
// of unknown quantity. It returns for each group the top group of its limb by
// the tree of bones, -1 for one that no bone reaches.
func bones(takes []*channels.Take, l *channels.Layout) (found []Bone, top []int) {
	top = make([]int, len(l.Groups))
	var places []int
	for i, g := range l.Groups {
		top[i] = -1
		if q := l.Channels[g.Channels[0]].Quantity; len(g.Channels) == 3 && (q == channels.Position || q == channels.Misc) {
			places = append(places, i)
		}
	}
	if len(places) < 2 {
		return nil, top
	}
	var list []int
	for _, i := range places {
		list = append(list, l.Groups[i].Channels...)
	}
	data := make([][]float64, len(takes))
	for i, t := range takes {
		data[i] = pick(t.Data, t.Width(), list)
	}
	search := body.DefaultBoneSearch()
	tree := body.FindBones(data, len(places), search)
	if !slices.ContainsFunc(tree.Parent, func(p int) bool { return p >= 0 }) {
		search.Spread = guessed
		tree = body.FindBones(data, len(places), search)
	}
	// Along Order every point stands after its parent, as limbsOf needs.
	at := make([]int, len(places)) // place of a point in Order
	for k, p := range tree.Order {
		at[p] = k
	}
	parent := make([]int, len(places))
	joined := make([]bool, len(places))
	for p, q := range tree.Parent {
		parent[at[p]] = q
		if q < 0 {
			continue
		}
		parent[at[p]] = at[q]
		joined[p], joined[q] = true, true
		a, b := l.Groups[places[min(p, q)]], l.Groups[places[max(p, q)]]
		found = append(found, Bone{a.Name, b.Name, tree.Length[p], tree.Spread[p]})
	}
	for k, t := range limbsOf(parent) {
		if p := tree.Order[k]; joined[p] {
			top[places[p]] = places[tree.Order[t]]
		}
	}
	return found, top
}

// Triad is an accelerometer and a gyroscope, and whether they turn together.
type Triad struct {
	Accel string `json:"accel"`
	Gyro  string `json:"gyro"`

	// Explained is the share of the turning of gravity, as the accelerometer
	// shows it, that the gyroscope's integral accounts for: near 1 for sensors
	// on one body, 0 or less for others.
	Explained float64 `json:"explained"`
}

// Together tells whether the two are on one body.
func (t Triad) Together() bool { return t.Explained >= 0.3 }

// triads holds every accelerometer against every gyroscope, three axes each.
func triads(takes []*channels.Take, l *channels.Layout) []Triad {
	var accels, gyros []channels.Group
	for _, g := range l.Groups {
		if len(g.Channels) != 3 {
			continue
		}
		switch l.Channels[g.Channels[0]].Quantity {
		case channels.Acceleration:
			accels = append(accels, g)
		case channels.AngularRate:
			gyros = append(gyros, g)
		}
	}
	var out []Triad
	for _, a := range accels {
		for _, g := range gyros {
			out = append(out, Triad{a.Name, g.Name, turnTogether(takes, a.Channels, g.Channels)})
		}
	}
	return out
}

// calmness is how far, as a share, the accelerometer's length may be from its
// median for its direction to be believed to be gravity's.
const calmness = 0.02

// turnTogether follows the direction of gravity from the first frame of each
// take by the gyroscope's integral, and returns the share of the squared
// distance of the accelerometer's direction from its first that this saves.
// Frames count by how near the accelerometer's length is to its median, which
// is that of gravity.
func turnTogether(takes []*channels.Take, accel, gyro []int) float64 {
	missed, turned := 0.0, 0.0
	for _, t := range takes {
		a, rate := pick(t.Data, t.Width(), accel), pick(t.Data, t.Width(), gyro)
		length := make([]float64, t.Frames())
		for i := range length {
			length[i] = math.Hypot(math.Hypot(a[3*i], a[3*i+1]), a[3*i+2])
		}
		usual := slices.Sorted(slices.Values(length))[len(length)/2]
		if length[0] == 0 || usual == 0 {
			continue
		}
		by := body.IntegrateDirection(nil, a[:3], rate, t.Time)
		for i, l := range length {
			off := (l/usual - 1) / calmness
			w := math.Exp(-off * off / 2)
			for c := range 3 {
				if l == 0 {
					continue
				}
				u := a[3*i+c] / l
				missed += w * (u - by[3*i+c]) * (u - by[3*i+c])
				turned += w * (u - a[c]/length[0]) * (u - a[c]/length[0])
			}
		}
	}
	if turned == 0 {
		return 0
	}
	return 1 - missed/turned
}
