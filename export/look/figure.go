package look

import (
	"strings"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
)

// figure says how the places in a take are drawn.
type figure struct {
	Points []figurePoint `json:"points"`
	Bones  [][2]int      `json:"bones"` // pairs of points, by their numbers
	Plane  bool          `json:"plane"` // places have two coordinates
	Up     [3]float64    `json:"up"`
}

// figurePoint is a tracked point and the channels of its coordinates.
type figurePoint struct {
	Name     string `json:"name"`
	Channels []int  `json:"channels"`
}

// Bounds of what is searched for bones.
const (
	boneFrames = 400 // frames of the take, evenly spread
	bonePoints = 120 // points; of more, none are joined
)

// figureOf returns how the take of a number is drawn, nil for one without places.
// Points are joined by the bones of the take's skeleton, or else by those that
// keep their length in its source take, so that both are drawn alike.
func (s *Set) figureOf(n int32) (*figure, error) {
	points, plane := pointsOf(s.layout)
	if len(points) == 0 {
		return nil, nil
	}
	f := &figure{Points: points, Plane: plane, Bones: [][2]int{}, Up: [3]float64{0, 1, 0}}
	if plane {
		return f, nil
	}
	if from := s.takes.rows[n].source; from >= 0 {
		n = from
	}
	r := &s.takes.rows[n]
	take, err := s.sample(r)
	if err != nil {
		return nil, err
	}
	if r.skeleton >= 0 {
		f.Bones = bonesOf(s.takes.skeleton[r.skeleton], s.layout, points)
	} else if f.Bones, err = s.found(n, take, points); err != nil {
		return nil, err
	}
	if len(points) >= bodyPoints {
		f.Up = upOf(take, points)
	}
	return f, nil
}

// bodyPoints is the number of tracked points from which on they are taken for a
// body that stands upright; of fewer, y is drawn up.
const bodyPoints = 6

// pointsOf returns the points whose places a layout has in space or, when there
// are none, in the plane.
func pointsOf(l *channels.Layout) (points []figurePoint, plane bool) {
	for _, axes := range [][]string{{"x", "y", "z"}, {"x", "y"}} {
		for _, g := range l.Groups {
			points = append(points, pointsIn(l, g, axes)...)
		}
		if len(points) > 0 {
			return points, len(axes) == 2
		}
	}
	return nil, false
}

// pointsIn returns the points of one group, in the order of their first channels.
func pointsIn(l *channels.Layout, g channels.Group, axes []string) []figurePoint {
	var out []figurePoint
	at := map[string]int{} // place in out of a tracked point
	for _, c := range g.Channels {
		ch := l.Channels[c]
		if ch.Quantity != channels.Position {
			continue
		}
		i, ok := at[ch.TrackedPoint]
		if !ok {
			i = len(out)
			at[ch.TrackedPoint] = i
			out = append(out, figurePoint{Name: ch.TrackedPoint, Channels: []int{-1, -1, -1}[:len(axes)]})
		}
		for k, axis := range axes {
			if ch.Component == axis {
				out[i].Channels[k] = c
			}
		}
	}
	whole := out[:0]
	for _, p := range out {
		if min(p.Channels[0], p.Channels[1], p.Channels[len(axes)-1]) >= 0 {
			whole = append(whole, p)
		}
	}
	return whole
}

// bonesOf returns the bones of a skeleton between points that are drawn.
func bonesOf(s *body.Skeleton, l *channels.Layout, points []figurePoint) [][2]int {
	at := map[string]int{} // number of a point by the name of its joint, as its channel has it
	for i, p := range points {
		joint, _ := strings.CutSuffix(l.Channels[p.Channels[0]].Name, ".pos.x")
		at[joint] = i
	}
	out := [][2]int{}
	for _, b := range s.Bones() {
		joint, here := at[s.Joints[b.Joint].Name]
		parent, there := at[s.Joints[b.Parent].Name]
		if here && there {
			out = append(out, [2]int{parent, joint})
		}
	}
	return out
}

// found returns the bones that keep their length in a take of this number.
func (s *Set) found(n int32, t *channels.Take, points []figurePoint) ([][2]int, error) {
	s.mu.Lock()
	known, ok := s.bones[n]
	s.mu.Unlock()
	if ok || len(points) > bonePoints || len(points) < 2 {
		return append([][2]int{}, known...), nil
	}
	at := map[string]int{}
	for i, p := range points {
		at[p.Name] = i
	}
	if len(at) < len(points) {
		return [][2]int{}, nil // points that cannot be told apart by name
	}
	out := [][2]int{}
	for _, b := range chart.FindBones(s.layout, []*channels.Take{t}) {
		out = append(out, [2]int{at[b.Parent], at[b.Point]})
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	if len(s.bones) >= bonesKept {
		clear(s.bones)
	}
	s.bones[n] = out
	return out, nil
}

// bonesKept is the number of takes whose bones are remembered.
const bonesKept = 1000

// sample returns a take at a few evenly spread frames.
func (s *Set) sample(r *row) (*channels.Take, error) {
	m, err := s.motion(r)
	if err != nil {
		return nil, err
	}
	m = m.thin((len(m.time) + boneFrames - 1) / boneFrames)
	t := &channels.Take{ID: r.id, Layout: s.layout, Data: make([]float64, 0, len(m.time)*len(m.channels))}
	for i, at := range m.time {
		t.Time = append(t.Time, float64(at))
		for _, c := range m.channels {
			t.Data = append(t.Data, float64(c[i]))
		}
	}
	return t, nil
}

// upOf returns which way is up for the body in a take.
func upOf(t *channels.Take, points []figurePoint) [3]float64 {
	places := make([]float64, 0, 3*len(points)*t.Frames())
	for i := range t.Time {
		frame := t.Frame(i)
		for _, p := range points {
			places = append(places, frame[p.Channels[0]], frame[p.Channels[1]], frame[p.Channels[2]])
		}
	}
	up := body.Up(places, len(points))
	return [3]float64{up.X, up.Y, up.Z}
}
