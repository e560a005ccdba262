package bvh

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
)

// decimals of written lengths and angles. An error of 1e-9 of a degree or of a
// unit of length is far below that of single precision.
const decimals = 9

// defaultUnit is the unit of length of a skeleton that states none.
const defaultUnit = "cm"

// Write writes a motion as a BVH file, with lines ended by a line feed. Lengths
// are in the skeleton's unit, cm when it states none.
//
// Each joint keeps its channels in the order the skeleton states. Where it
// states none, or where the motion leaves what they can express (a made take
// may turn a knee about a second axis), the joint gets Xposition Yposition
// Zposition if it moves, and Zrotation Xrotation Yrotation. From one frame to
// the next angles go on beyond ±180 degrees rather than jump.
func Write(w io.Writer, m *Motion) error {
	if err := writable(m); err != nil {
		return err
	}
	o := newWriter(w, m)
	o.b.WriteString("HIERARCHY\n")
	for i, j := range m.Skeleton.Joints {
		if j.Parent < 0 {
			o.joint(i, 0)
		}
	}
	fmt.Fprintf(o.b, "MOTION\nFrames: %d\nFrame Time: %s\n", m.Frames(), strconv.FormatFloat(m.Interval, 'g', 12, 64))
	for i := range m.Frames() {
		o.frame(i)
	}
	return o.b.Flush()
}

// writable reports why a motion cannot be a BVH file.
func writable(m *Motion) error {
	s := m.Skeleton
	if err := s.Validate(); err != nil {
		return fmt.Errorf("skeleton: %w", err)
	}
	if s.Unit != "" && !isLengthUnit(s.Unit) {
		return fmt.Errorf("skeleton: unknown unit of length %q; legal units are %s", s.Unit, strings.Join(LengthUnits(), ", "))
	}
	for _, j := range s.Joints {
		if strings.ContainsAny(j.Name, "{}\r\n") || strings.Join(strings.Fields(j.Name), " ") != j.Name {
			return fmt.Errorf("skeleton: joint name %q cannot be written in BVH; rename it without braces, line ends and repeated blanks", j.Name)
		}
	}
	frames := m.Frames()
	switch {
	case frames == 0 || len(m.Turns) != frames*len(s.Joints) || len(m.Moves) != frames*len(s.Moving()):
		return errors.New("motion: the turns and moves are not those of one frame or more of its skeleton")
	case !(m.Interval > 0) || math.IsInf(m.Interval, 0):
		return fmt.Errorf("motion: interval of %g s between frames", m.Interval)
	}
	return nil
}

// writer writes one motion.
type writer struct {
	b        *bufio.Writer
	m        *Motion
	children [][]int // of each joint
	slot     []int   // place of each joint among the moving ones, -1 for none
	order    []int   // joints in the order of the hierarchy
	freedoms [][]body.Freedom
	axes     [][]body.Axis // of the turns among them
	units    float64       // units of length per metre
	before   [][3]float64  // angles of each joint in the last frame, in degrees
	absolute []bool        // whether each joint's moves are written as places
	number   []byte        // scratch
}

func newWriter(w io.Writer, m *Motion) *writer {
	s := m.Skeleton
	n := len(s.Joints)
	unit := s.Unit
	if unit == "" {
		unit = defaultUnit
	}
	o := &writer{
		b: bufio.NewWriterSize(w, 64<<10), m: m, units: 1 / metres(unit),
		children: make([][]int, n), slot: make([]int, n), freedoms: make([][]body.Freedom, n), axes: make([][]body.Axis, n), before: make([][3]float64, n), absolute: make([]bool, n),
	}
	for i, j := range s.Joints {
		o.slot[i] = -1
		if j.Parent >= 0 {
			o.children[j.Parent] = append(o.children[j.Parent], i)
		}
	}
	for k, i := range s.Moving() {
		o.slot[i] = k
	}
	for i := range s.Joints {
		o.freedoms[i] = o.choose(i)
		o.axes[i] = turnAxes(o.freedoms[i])
		o.absolute[i] = o.chooseAbsolute(i)
	}
	return o
}

// joint writes a joint of the hierarchy and all below it.
func (o *writer) joint(i, depth int) {
	j := o.m.Skeleton.Joints[i]
	tabs := strings.Repeat("\t", depth)
	title := "JOINT " + j.Name
	switch {
	case j.Parent < 0:
		title = "ROOT " + j.Name
	case j.End:
		title = "End Site"
	}
	fmt.Fprintf(o.b, "%s%s\n%s{\n%s\tOFFSET", tabs, title, tabs, tabs)
	for _, v := range []float64{j.Offset.X, j.Offset.Y, j.Offset.Z} {
		o.write(' ', v*o.units)
	}
	if !j.End {
		fmt.Fprintf(o.b, "\n%s\tCHANNELS %d", tabs, len(o.freedoms[i]))
		for _, f := range o.freedoms[i] {
			o.b.WriteString(" " + channelNames[f])
		}
		o.order = append(o.order, i)
	}
	o.b.WriteByte('\n')
	for _, c := range o.children[i] {
		o.joint(c, depth+1)
	}
	o.b.WriteString(tabs + "}\n")
}

// frame writes one line of the motion.
func (o *writer) frame(f int) {
	turns, moves := o.m.Pose(f)
	space := byte(0)
	for _, i := range o.order {
		j := o.m.Skeleton.Joints[i]
		var move r3.Vec
		if n := o.slot[i]; n >= 0 {
			move = stated(j.Offset, o.absolute[i], moves[n])
		}
		angles, n := o.angles(i, turns[i]), 0
		for _, d := range o.freedoms[i] {
			if d.IsTurn() {
				o.write(space, angles[n])
				n++
			} else {
				o.write(space, *component(&move, d.Axis())*o.units)
			}
			space = ' '
		}
	}
	o.b.WriteByte('\n')
}

// angles returns the angles of a joint in degrees, going on from the frame
// before.
func (o *writer) angles(i int, q quat.Number) [3]float64 {
	a := anglesOf(o.axes[i], q)
	for n := range a {
		a[n] *= 180 / math.Pi
		a[n] += 360 * math.Round((o.before[i][n]-a[n])/360)
	}
	o.before[i] = a
	return a
}

// write writes a number after a separator, 0 for none.
func (o *writer) write(separator byte, v float64) {
	o.number = o.number[:0]
	if separator != 0 {
		o.number = append(o.number, separator)
	}
	o.number = strconv.AppendFloat(o.number, v, 'f', decimals, 64)
	o.b.Write(trimZeros(o.number))
}

// trimZeros cuts the zeros that end the decimals of a number, and the sign of
// zero.
func trimZeros(b []byte) []byte {
	n := len(b)
	for b[n-1] == '0' {
		n--
	}
	if b[n-1] == '.' {
		n--
	}
	if string(b[:n]) == "-0" || string(b[:n]) == " -0" {
		return append(b[:n-2], '0')
	}
	return b[:n]
}
