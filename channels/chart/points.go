package chart

import (
	"fmt"
	"slices"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
)

// points is the sheet of tracked points joined by bones of known length: the
// place of every root, and for every other point the way to it from its parent
// and how long that is. Each point is put back at the end of its bone, so that
// what hangs from it follows.
type points struct {
	list     []point // parents first
	freeFeet bool
	n        int // coordinates
}

// point is a tracked point of the sheet.
type point struct {
	name     string
	parent   int // position in the list, -1 for a root
	channels [3]int
	way      Part // its place, or the way from its parent
	length   Part // of a point with a parent
}

// newPoints takes the places of the points that bones join. Of a point with two
// parents or one that is its own ancestor there is no tree, which is an error,
// as is a point without channels POS x, y and z.
func newPoints(d *draft, bones []Bone, freeFeet bool) (*points, error) {
	parent := make(map[string]string)
	var names []string // of all points, as they come
	seen := make(map[string]bool)
	for _, b := range bones {
		for _, name := range []string{b.Parent, b.Point} {
			if !seen[name] {
				seen[name], names = true, append(names, name)
			}
		}
		if p, twice := parent[b.Point]; twice {
			return nil, fmt.Errorf("point %s hangs from both %s and %s", b.Point, p, b.Parent)
		}
		parent[b.Point] = b.Parent
	}
	s := &points{freeFeet: freeFeet}
	at := make(map[string]int)
	for len(s.list) < len(names) {
		before := len(s.list)
		for _, name := range names {
			_, done := at[name]
			p, hangs := parent[name]
			if _, there := at[p]; done || hangs && !there {
				continue
			}
			at[name] = len(s.list)
			up := -1
			if hangs {
				up = at[p]
			}
			if err := s.add(d, name, up); err != nil {
				return nil, err
			}
		}
		if len(s.list) == before {
			return nil, fmt.Errorf("bones go round in a circle")
		}
	}
	return s, nil
}

func (s *points) add(d *draft, name string, parent int) error {
	list, ok := d.claim(name, channels.Position, xyz)
	if !ok {
		return fmt.Errorf("point %s has not one channel POS x, y and z each in one group", name)
	}
	p := point{name: name, parent: parent, channels: [3]int(list)}
	if parent < 0 {
		p.way = d.part(list[0], "", Free, 3, s.n)
		s.n += 3
	} else {
		p.way = d.part(list[0], "from "+s.list[parent].name, Free, 3, s.n)
		p.length = d.part(list[0], "length", Fixed, 0, s.n+3)
		p.length.Coordinates = p.length.Coordinates[:1]
		s.n += 4
	}
	s.list = append(s.list, p)
	return nil
}

func (s *points) width() int { return s.n }

func (s *points) parts(m memory) []Part {
	still, _ := m.(*stance)
	var out []Part
	for i, p := range s.list {
		way := still.part(p.way, i)
		out = append(out, way)
		if p.parent >= 0 {
			p.length.Limb = way.Limb
			out = append(out, p.length)
		}
	}
	return out
}

func (s *points) plot(dst rows, t *channels.Take, _ memory) memory {
	for f := range t.Time {
		row, frame := dst.frame(f), t.Frame(f)
		for _, p := range s.list {
			at := vector(frame, p.channels[:])
			if p.parent >= 0 {
				at = r3.Sub(at, vector(frame, s.list[p.parent].channels[:]))
				row[p.length.Coordinates[0]] = r3.Norm(at)
			}
			setVector(row, p.way.Coordinates, at)
		}
	}
	if s.freeFeet {
		return (*stance)(nil)
	}
	return s.stand(t, dst)
}

func (s *points) take(data []float64, values rows, time []float64, _ memory) {
	w := len(data) / len(time)
	for f := range time {
		row, frame := values.frame(f), data[f*w:(f+1)*w]
		for _, p := range s.list {
			at := vector(row, p.way.Coordinates)
			if p.parent >= 0 {
				bone := stretched(at, row[p.length.Coordinates[0]])
				at = r3.Add(vector(frame, s.list[p.parent].channels[:]), bone)
			}
			setVector(frame, p.channels[:], at)
		}
	}
}

// stretched returns v at another length, or as it is when it has no direction.
func stretched(v r3.Vec, length float64) r3.Vec {
	if n := r3.Norm(v); n > nothing {
		return r3.Scale(length/n, v)
	}
	return v
}

// rotate turns the whole body in the world about the mean place of its first
// root; one with a foot that stands still only about the upright.
func (s *points) rotate(values rows, by quat.Number, m memory) {
	by = m.(*stance).upright(by)
	centre := meanVector(values, s.list[0].way.Coordinates)
	for _, p := range s.list {
		if p.parent < 0 {
			rotateAbout(values, p.way.Coordinates, by, centre)
		} else {
			rotateVectors(values, p.way.Coordinates, by, false)
		}
	}
}

// bonesOf returns the bones of a skeleton between joints of whose places the
// layout has the channels and no other sheet holds them.
func (d *draft) bonesOf(s *body.Skeleton) []Bone {
	var out []Bone
	point := func(joint int) (name string, ok bool) {
		list, ok := d.named(s.Joints[joint].Name, channels.Position, xyz)
		if ok {
			name = d.layout.Channels[list[0]].TrackedPoint
			_, ok = d.find(name, channels.Position, xyz)
		}
		return name, ok
	}
	for _, b := range s.Bones() {
		tip, there := point(b.Joint)
		parent, too := point(b.Parent)
		if there && too {
			out = append(out, Bone{tip, parent})
		}
	}
	return out
}

// without leaves out the bones of points that are joints of the skeleton, which
// knows them better.
func (d *draft) without(s *body.Skeleton, bones []Bone) []Bone {
	joints := make(map[string]bool)
	for _, j := range s.Joints {
		if i, ok := d.at[j.Name+".pos.x"]; ok {
			joints[d.layout.Channels[i].TrackedPoint] = true
		}
	}
	return slices.DeleteFunc(slices.Clone(bones), func(b Bone) bool { return joints[b.Point] || joints[b.Parent] })
}
