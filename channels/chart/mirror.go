package chart

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
)

// Mirror returns the mirror image of a take, in which the left side does what
// the right one did. Mirroring changes the label of a gesture that is made with
// one side, or that goes to one: only the caller can tell.
//
// Channels change places with those of the same name on the other side ("left"
// and "right", "l" and "r"); those without a side are of the middle. Values are
// reflected along the axis from right to left: accelerations, velocities and
// places change their sign along it; angular rates, rotations and magnetic
// fields, which have a sense of turning, do so across it; joint angles and
// unknown scalars have no sign to change. Places are reflected about the mean
// place of the skeleton's roots, or else of all tracked points, so that the body
// stays where it is.
//
// The axis is the one along which the joints of the sides are apart in the
// skeleton at rest, or else the places of the sides over the take, or else y:
// sensors of the two sides must then sit as mirror images of each other, with
// their y axes to the left when the limbs hang (front, left, up).
//
// With a skeleton, the places that follow from the turns are computed anew, so
// that bones keep their lengths where the sides are not of one size.
//
// It is an error when no channel has one on the other side, when one that names
// a side has none, and when a channel of unknown quantity is an axis of space.
func Mirror(t *channels.Take) (*channels.Take, error) {
	partners, err := partners(t.Layout)
	if err != nil {
		return nil, fmt.Errorf("mirror take %s: %w", t.ID, err)
	}
	across := acrossOf(t, partners)
	signs, err := signs(t.Layout, across)
	if err != nil {
		return nil, fmt.Errorf("mirror take %s: %w", t.ID, err)
	}
	out := t.Clone()
	twice := 2 * middle(t, across) // a place p is reflected to 2m - p
	for f := range t.Time {
		from, to := t.Frame(f), out.Frame(f)
		for i, k := range partners {
			to[i] = signs[i] * from[k]
			if c := t.Layout.Channels[i]; signs[i] < 0 && c.Quantity == channels.Position {
				to[i] += twice
			}
		}
	}
	if t.Skeleton != nil {
		if err := rebone(out); err != nil {
			return nil, fmt.Errorf("mirror take %s: %w", t.ID, err)
		}
	}
	return out, nil
}

// rebone computes the places that follow from a skeleton's turns anew.
func rebone(t *channels.Take) error {
	c, err := New(t.Layout, t.Skeleton, Options{FreeFeet: true})
	if err != nil {
		return err
	}
	p := c.Plot(t)
	t.Data = c.Take(p, t.Time, p.Values)
	return nil
}

// partners returns, for each channel, the one of the other side, or itself for
// one of the middle.
func partners(l *channels.Layout) ([]int, error) {
	at := make(map[string]int, len(l.Channels))
	for i, c := range l.Channels {
		at[c.Name] = i
	}
	out, pairs := make([]int, len(l.Channels)), 0
	for i, c := range l.Channels {
		out[i] = i
		other, sided := opposite(c.Name)
		k, found := at[other]
		if !sided {
			k, found = at[initial(c.Name)]
		}
		switch {
		case found && l.Channels[k].Quantity != c.Quantity:
			return nil, fmt.Errorf("channel %s is %s, but %s is %s", c.Name, c.Quantity, l.Channels[k].Name, l.Channels[k].Quantity)
		case found:
			out[i] = k
			pairs++
		case sided:
			return nil, fmt.Errorf("channel %s has no counterpart %s", c.Name, other)
		}
	}
	if pairs == 0 {
		return nil, errors.New("no channel has a counterpart on the other side; name them left_… and right_…")
	}
	return out, nil
}

// signs returns the factor by which each channel's values are reflected.
func signs(l *channels.Layout, across body.Axis) ([]float64, error) {
	out := make([]float64, len(l.Channels))
	for i, c := range l.Channels {
		out[i] = 1
		axis, ok := axisOf(c.Component)
		if !ok || c.Quantity == channels.JointAngle {
			continue
		}
		part := r3.Vec{}
		*axisPart(&part, axis) = 1
		switch c.Quantity {
		case channels.Position, channels.Velocity, channels.Acceleration:
			part = body.MirrorPolar(part, across)
		case channels.AngularRate, channels.AngularAcceleration, channels.MagneticField, channels.Orientation:
			part = body.MirrorAxial(part, across)
		default:
			return nil, fmt.Errorf("channel %s has no known quantity, so that its mirror image is not known; state its unit", c.Name)
		}
		out[i] = *axisPart(&part, axis)
	}
	return out, nil
}

// axisOf returns the axis of a component: "x" and "quat_x" are X. "quat_w" and
// others have none.
func axisOf(component string) (body.Axis, bool) {
	for _, a := range []body.Axis{body.X, body.Y, body.Z} {
		if component == xyz[a] || component == "quat_"+xyz[a] {
			return a, true
		}
	}
	return 0, false
}

func axisPart(v *r3.Vec, a body.Axis) *float64 { return [...]*float64{&v.X, &v.Y, &v.Z}[a] }

// acrossOf returns the axis from one side to the other.
func acrossOf(t *channels.Take, partners []int) body.Axis {
	var apart r3.Vec // mean distance of the sides along each axis
	if t.Skeleton != nil {
		apart = apartAtRest(t.Skeleton)
	}
	if apart == (r3.Vec{}) {
		for i, k := range partners {
			c := t.Layout.Channels[i]
			if axis, ok := axisOf(c.Component); ok && k > i && c.Quantity == channels.Position {
				*axisPart(&apart, axis) += math.Abs(difference(t, i, k))
			}
		}
	}
	across := body.Y
	for _, a := range []body.Axis{body.X, body.Z} {
		if *axisPart(&apart, a) > *axisPart(&apart, across) {
			across = a
		}
	}
	return across
}

// difference returns the mean difference of two channels.
func difference(t *channels.Take, i, k int) float64 {
	sum := 0.0
	for f := range t.Time {
		sum += t.Frame(f)[i] - t.Frame(f)[k]
	}
	return sum / float64(t.Frames())
}

// apartAtRest returns how far the joints of the sides are apart along each axis
// in the skeleton at rest.
func apartAtRest(s *body.Skeleton) r3.Vec {
	turns := make([]quat.Number, len(s.Joints))
	for i := range turns {
		turns[i] = body.Identity()
	}
	var moves []r3.Vec
	for _, i := range s.Moving() {
		moves = append(moves, s.Joints[i].Offset)
	}
	at := body.NewKinematics(s).Forward(nil, turns, moves)
	var out r3.Vec
	for i, j := range s.Joints {
		other, sided := opposite(j.Name)
		if !sided {
			other = initial(j.Name)
		}
		if k := s.Index(other); k > i {
			d := r3.Sub(at[i], at[k])
			out = r3.Add(out, r3.Vec{X: math.Abs(d.X), Y: math.Abs(d.Y), Z: math.Abs(d.Z)})
		}
	}
	return out
}

// middle returns the mean place along an axis over the take: of the roots of a
// skeleton, or else of all tracked points.
func middle(t *channels.Take, across body.Axis) float64 {
	var list []int
	for i, c := range t.Layout.Channels {
		if c.Quantity == channels.Position && c.Component == xyz[across] {
			list = append(list, i)
		}
	}
	if t.Skeleton != nil {
		roots := slices.DeleteFunc(slices.Clone(list), func(i int) bool {
			joint := strings.TrimSuffix(t.Layout.Channels[i].Name, ".pos."+xyz[across])
			j := t.Skeleton.Index(joint)
			return j < 0 || t.Skeleton.Joints[j].Parent >= 0
		})
		if len(roots) > 0 {
			list = roots
		}
	}
	places := columns(t, list)
	if len(places) == 0 {
		return 0
	}
	return floats.Sum(places) / float64(len(places))
}
