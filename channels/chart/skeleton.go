package chart

import (
	"slices"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
)

// skeleton is the sheet of the joints of a skeleton: the turn of each, as
// rotation vectors, and where those are that move, the roots in the world and
// others in the frame of their parent. All places follow from these by forward
// kinematics, so that bones keep their length.
type skeleton struct {
	body     *body.Skeleton
	turns    []jointTurn
	moves    []jointMove
	places   []jointPlace
	freeFeet bool
}

// jointTurn is a joint whose turn the layout has.
type jointTurn struct {
	joint    int
	channels [4]int
	part     Part
}

// jointMove is a joint of [body.Skeleton.Moving] whose place the layout has.
type jointMove struct {
	joint int
	slot  int // in the order of Moving
	part  Part
}

// jointPlace is a joint whose place the layout has, and forward kinematics give.
type jointPlace struct {
	joint    int
	channels [3]int
}

// pose is what a skeleton sheet keeps of a take.
type pose struct {
	frames []turnFrame // of each turn
	stance *stance     // nil when no foot stands still
}

// newSkeleton takes the channels of the joints of a skeleton: every turn, and
// every place that turns and moves decide. It returns nil when the layout has no
// turns.
func newSkeleton(d *draft, s *body.Skeleton, freeFeet bool) *skeleton {
	k := &skeleton{body: s, freeFeet: freeFeet}
	moving := s.Moving()
	turned := make([]bool, len(s.Joints)) // how the joint is turned in the world is known
	placed := make([]bool, len(s.Joints)) // where the joint is in the world is known
	parts := body.Components()
	var held []int
	for i, j := range s.Joints {
		root := j.Parent < 0
		turn, turns := d.named(j.Name, channels.Orientation, parts[:])
		if turns {
			k.turns = append(k.turns, jointTurn{i, [4]int(turn), d.part(turn[0], "", Turn, 0, k.width())})
			held = append(held, turn...)
		}
		turned[i] = (root || turned[j.Parent]) && (turns || !j.Turns())
		at, places := d.named(j.Name, channels.Position, xyz)
		slot := slices.Index(moving, i)
		placed[i] = (root || placed[j.Parent] && turned[j.Parent]) && (slot < 0 || places)
		if !placed[i] || !places {
			continue
		}
		k.places = append(k.places, jointPlace{i, [3]int(at)})
		held = append(held, at...)
		if slot >= 0 {
			k.moves = append(k.moves, jointMove{i, slot, d.part(at[0], "", Free, axesOfMove(root), k.width())})
		}
	}
	if len(k.turns) == 0 {
		return nil
	}
	d.hold(held)
	return k
}

// axesOfMove tells the axes of the world from those of a parent, which turn
// with it.
func axesOfMove(root bool) int {
	if root {
		return 3
	}
	return 0
}

func (k *skeleton) width() int { return 3 * (len(k.turns) + len(k.moves)) }

func (k *skeleton) parts(m memory) []Part {
	out := make([]Part, 0, len(k.turns)+len(k.moves))
	var still *stance
	if p, ok := m.(pose); ok {
		still = p.stance
	}
	for _, t := range k.turns {
		out = append(out, still.part(t.part, t.joint))
	}
	for _, v := range k.moves {
		out = append(out, still.part(v.part, v.joint))
	}
	slices.SortFunc(out, func(a, b Part) int { return a.Coordinates[0] - b.Coordinates[0] })
	return out
}

// posed reads the turns of all joints, frames × joints; joints that the layout
// does not have do not turn.
func (k *skeleton) posed(t *channels.Take) []quat.Number {
	n := len(k.body.Joints)
	out := make([]quat.Number, t.Frames()*n)
	for i := range out {
		out[i] = body.Identity()
	}
	for f := range t.Time {
		row := t.Frame(f)
		for _, j := range k.turns {
			out[f*n+j.joint] = loadTurn(row, j.channels)
		}
	}
	return out
}

func (k *skeleton) plot(dst rows, t *channels.Take, like memory) memory {
	n := len(k.body.Joints)
	turns := k.posed(t)
	kept, ok := like.(pose)
	if !ok {
		kept.frames = make([]turnFrame, len(k.turns))
	}
	for i, j := range k.turns {
		if !ok {
			kept.frames[i] = newTurnFrame(turns[j.joint:], n)
		}
		kept.frames[i].flatten(dst.within(j.part.Coordinates), turns[j.joint:], n)
	}
	k.plotMoves(dst, t, turns)
	kept.stance = nil
	if !k.freeFeet {
		kept.stance = k.stand(dst, t.Time, kept.frames)
	}
	return kept
}

// plotMoves writes where the moving joints are.
func (k *skeleton) plotMoves(dst rows, t *channels.Take, turns []quat.Number) {
	n := len(k.body.Joints)
	kinematics := body.NewKinematics(k.body)
	at, moves := make([]r3.Vec, n), make([]r3.Vec, len(k.body.Moving()))
	for f := range t.Time {
		frame := t.Frame(f)
		for _, p := range k.places {
			at[p.joint] = vector(frame, p.channels[:])
		}
		kinematics.Moves(moves, turns[f*n:(f+1)*n], at)
		for _, v := range k.moves {
			setVector(dst.frame(f), v.part.Coordinates, moves[v.slot])
		}
	}
}

// forward calls visit with the turns and places of all joints in every frame,
// which hold for that call.
func (k *skeleton) forward(values rows, frames []turnFrame, visit func(f int, turns []quat.Number, places []r3.Vec)) {
	n := len(k.body.Joints)
	kinematics := body.NewKinematics(k.body)
	moving := k.body.Moving()
	turns, places, moves := make([]quat.Number, n), make([]r3.Vec, n), make([]r3.Vec, len(moving))
	for i := range turns {
		turns[i] = body.Identity()
	}
	for slot, i := range moving {
		moves[slot] = k.body.Joints[i].Offset
	}
	for f := range values.frames() {
		row := values.frame(f)
		for i, j := range k.turns {
			turns[j.joint] = frames[i].at(row[j.part.Coordinates[0]:])
		}
		for _, v := range k.moves {
			moves[v.slot] = vector(row, v.part.Coordinates)
		}
		kinematics.Forward(places, turns, moves)
		visit(f, turns, places)
	}
}

func (k *skeleton) take(data []float64, values rows, time []float64, m memory) {
	w := len(data) / len(time)
	k.forward(values, m.(pose).frames, func(f int, turns []quat.Number, places []r3.Vec) {
		row := data[f*w : (f+1)*w]
		for _, j := range k.turns {
			storeTurn(row, j.channels, turns[j.joint])
		}
		for _, p := range k.places {
			setVector(row, p.channels[:], places[p.joint])
		}
	})
}

// rotate turns the whole body in the world about the mean place of its first
// root; one with a foot that stands still only about the upright.
func (k *skeleton) rotate(values rows, by quat.Number, m memory) {
	kept := m.(pose)
	by = kept.stance.upright(by)
	for i, j := range k.turns {
		if k.body.Joints[j.joint].Parent < 0 {
			kept.frames[i].rotate(values.within(j.part.Coordinates), by, body.Identity())
		}
	}
	var centre *r3.Vec
	for _, v := range k.moves {
		if k.body.Joints[v.joint].Parent >= 0 {
			continue
		}
		if centre == nil {
			mean := meanVector(values, v.part.Coordinates)
			centre = &mean
		}
		rotateAbout(values, v.part.Coordinates, by, *centre)
	}
}
