package bvh

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
)

// mostValues is how many values a take may hold: 2 GiB of them.
const mostValues = 1 << 28

// firstFrames is how many frames there is room for before any is read.
const firstFrames = 1024

// columns is how the numbers of a frame become a pose.
type columns struct {
	*text
	skeleton *body.Skeleton
	slot     []int // place of each joint among the moving ones, -1 for none
	width    int   // numbers in a frame
	metres   float64
	row      []float64 // scratch: one frame
}

// readMotion reads what follows the word MOTION. Moves are left as the file
// states them, for [placeMoves].
func readMotion(t *text, s *body.Skeleton) (*Motion, error) {
	c := &columns{text: t, skeleton: s, metres: metres(s.Unit), slot: make([]int, len(s.Joints))}
	for i, j := range s.Joints {
		c.slot[i] = -1
		c.width += len(j.Freedoms)
	}
	moving := s.Moving()
	for n, i := range moving {
		c.slot[i] = n
	}
	m := &Motion{Skeleton: s, Line: t.line}
	if c.width == 0 {
		return nil, t.fault("has no channels: no joint of its hierarchy moves", "export the file again")
	}
	frames, err := c.frames()
	if err != nil {
		return nil, err
	}
	if m.Interval, err = c.interval(); err != nil {
		return nil, err
	}
	return m, c.read(m, frames, len(moving))
}

// read reads the frames, which must be as many as stated.
func (c *columns) read(m *Motion, frames, moving int) error {
	c.row = make([]float64, c.width)
	joints := len(c.skeleton.Joints)
	// A file may state more frames than it holds, so room is made as they come.
	m.Turns = make([]quat.Number, 0, min(frames, firstFrames)*joints)
	m.Moves = make([]r3.Vec, 0, min(frames, firstFrames)*moving)
	for n := 0; ; n++ {
		line, err := c.next()
		if err != nil {
			return err
		}
		if line == nil && n == frames {
			break
		}
		if line == nil {
			return c.fault(fmt.Sprintf("ends after %d of %d frames", n, frames), "copy or export the file again, or correct the Frames line")
		}
		if n == frames {
			return c.fault(fmt.Sprintf("has more lines than the %d frames it states", frames), "correct the Frames line")
		}
		if err := c.parse(line); err != nil {
			return err
		}
		c.pose(m, moving)
	}
	for i := range joints {
		body.Unwrap(m.Turns[i:], joints)
	}
	return nil
}

// frames reads the line that states the number of frames.
func (c *columns) frames() (int, error) {
	value, err := c.stated("Frames")
	if err != nil {
		return 0, err
	}
	n, err := strconv.Atoi(value)
	switch per := len(takeChannels(c.skeleton)); {
	case err != nil || n < 0:
		return 0, c.fault(quote(value)+" is no number of frames", "write how many frames follow")
	case n == 0:
		return 0, c.fault("holds no frames", "leave it out or record it again")
	case n > mostValues/per:
		return 0, c.fault(fmt.Sprintf("states %d frames, but a take of %d channels can have %d at most", n, per, mostValues/per), "cut it into shorter takes")
	}
	return n, nil
}

// interval reads the line that states the time from one frame to the next.
func (c *columns) interval() (float64, error) {
	value, err := c.stated("Frame Time")
	if err != nil {
		return 0, err
	}
	v, err := c.number(value)
	if err != nil {
		return 0, err
	}
	if !(v > 0) || math.IsInf(1/v, 0) {
		return 0, c.fault("Frame Time is "+value+" s", "write the time from one frame to the next in seconds")
	}
	return v, nil
}

// stated reads a line that states a value: "Frames: 75". Upper and lower case,
// the space around the colon and the colon itself are as may be.
func (c *columns) stated(keyword string) (string, error) {
	line, err := c.next()
	if err != nil {
		return "", err
	}
	if line == nil {
		return "", c.fault("ends before the line "+keyword, "copy or export the file again")
	}
	left := string(line)
	for word := range strings.FieldsSeq(keyword) {
		left = strings.TrimLeft(left, " \t")
		if len(left) < len(word) || !strings.EqualFold(left[:len(word)], word) {
			return "", c.fault(fmt.Sprintf("the line %s: is missing; %s stands there", keyword, quote(string(line))), "add it")
		}
		left = left[len(word):]
	}
	left = strings.TrimSpace(left)
	return strings.TrimSpace(strings.TrimPrefix(left, ":")), nil
}

// parse reads the numbers of one frame into the row.
func (c *columns) parse(line []byte) error {
	n := 0
	for at := 0; at < len(line); n++ {
		begin := at
		for at < len(line) && line[at] > ' ' {
			at++
		}
		if n < c.width {
			v, err := strconv.ParseFloat(string(line[begin:at]), 64)
			if err != nil || !(math.Abs(v) <= largestNumber) {
				return c.badNumber(n, string(line[begin:at]))
			}
			c.row[n] = v
		}
		for at < len(line) && line[at] <= ' ' {
			at++
		}
	}
	if n != c.width {
		return c.fault(fmt.Sprintf("has %d numbers where the skeleton has %d channels", n, c.width), "put every frame on one line of its own, or export the file again")
	}
	return nil
}

// badNumber says what is wrong with column n.
func (c *columns) badNumber(n int, word string) error {
	f := c.numberFault(word)
	for _, j := range c.skeleton.Joints {
		if n < len(j.Freedoms) {
			f.Channel = j.Name + "." + channelNames[j.Freedoms[n]]
			break
		}
		n -= len(j.Freedoms)
	}
	return f
}

// pose adds the pose that the row describes to the motion.
func (c *columns) pose(m *Motion, moving int) {
	at := len(m.Moves)
	for range moving {
		m.Moves = append(m.Moves, r3.Vec{})
	}
	row := c.row
	for i := range c.skeleton.Joints {
		q := body.Identity()
		for n, f := range c.skeleton.Joints[i].Freedoms {
			if f.IsTurn() {
				q = body.Turn(q, f.Axis(), row[n]*(math.Pi/180))
			} else {
				*component(&m.Moves[at+c.slot[i]], f.Axis()) = row[n] * c.metres
			}
		}
		row = row[len(c.skeleton.Joints[i].Freedoms):]
		m.Turns = append(m.Turns, q)
	}
}

// component returns the part of a vector along an axis.
func component(v *r3.Vec, a body.Axis) *float64 {
	switch a {
	case body.X:
		return &v.X
	case body.Y:
		return &v.Y
	}
	return &v.Z
}
