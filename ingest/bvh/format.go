package bvh

import (
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
	"strandwise/ingest/raw"
)

// Format is BVH. The zero value guesses the unit of length. It is safe for
// concurrent use.
type Format struct {
	LengthUnit string // unit of length of the files: m, cm, mm or in; empty to judge by the skeleton
}

var _ raw.Format = Format{}

// Motion is one take of a skeleton as a BVH file holds it.
type Motion struct {
	Skeleton *body.Skeleton
	Interval float64       // seconds from one frame to the next
	Turns    []quat.Number // frames × joints, frame-major: unit quaternions in the frame of the parent, the identity for end sites
	Moves    []r3.Vec      // frames × Skeleton.Moving(), frame-major: places in the frame of the parent, in metres
	Line     int           // 1-based line of the file the motion begins at, 0 when not from a file
}

// Frames returns the number of frames.
func (m *Motion) Frames() int { return len(m.Turns) / len(m.Skeleton.Joints) }

// Pose returns how the joints are turned, and where the moving ones are, in
// frame i, as [body.Kinematics.Forward] takes them. Both are views.
func (m *Motion) Pose(i int) (turns []quat.Number, moves []r3.Vec) {
	n := len(m.Skeleton.Joints)
	k := len(m.Moves) / m.Frames()
	return m.Turns[i*n : (i+1)*n : (i+1)*n], m.Moves[i*k : (i+1)*k : (i+1)*k]
}

// Extensions returns the extension of BVH files.
func (Format) Extensions() []string { return []string{".bvh"} }

// Sniff accepts files that begin with the word HIERARCHY, and any file named
// as BVH, so that a damaged one is reported as such.
func (Format) Sniff(head []byte, name string) bool {
	words := strings.Fields(strings.TrimPrefix(string(head), byteOrderMark))
	return len(words) > 0 && strings.EqualFold(words[0], "HIERARCHY") ||
		strings.Contains(strings.ToLower(filepath.Base(name)), ".bvh")
}

// Read yields the one take of a file. It needs memory for the whole take.
func (f Format) Read(r io.Reader, in raw.Input) raw.Stream {
	return func(yield func(*raw.Take, error) bool) {
		m, err := f.Decode(r, in)
		if err != nil {
			yield(nil, err)
			return
		}
		yield(m.Take(), nil)
	}
}

// Decode reads a file. A fault of the file is a *fault.Error with the line;
// errors of r are passed on. Of in, the name and Notice are used.
func (f Format) Decode(r io.Reader, in raw.Input) (*Motion, error) {
	if f.LengthUnit != "" && !isLengthUnit(f.LengthUnit) {
		return nil, fmt.Errorf("unknown unit of length %q; legal units are %s", f.LengthUnit, strings.Join(LengthUnits(), ", "))
	}
	if in.Notice == nil {
		in.Notice = func(string, string) {}
	}
	t := newText(r, in.Name)
	s, err := readHierarchy(t)
	if err != nil {
		return nil, err
	}
	unit := f.LengthUnit
	if unit == "" {
		var evidence string
		unit, evidence = guessUnit(s.Span())
		in.Notice("states no unit of length and is read as "+unit, evidence)
	}
	rescale(s, unit)
	m, err := readMotion(t, s)
	if err != nil {
		return nil, err
	}
	if names := placeMoves(m); len(names) > 0 {
		in.Notice("position channels are read as places in the frame of the parent, not as moves from OFFSET",
			"those of "+abbreviate(names)+" lie nearer to OFFSET than to zero")
	}
	return m, nil
}
