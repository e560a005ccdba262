package c3d

import (
	"io"

	"strandwise/ingest/fault"
)

// File is what one C3D file holds.
type File struct {
	Order      Order
	Float      bool // frames are stored as floats, not as integers
	Parameters Parameters
	First      int // number of the first frame, as the recording counted
	Frames     int
	Points     Points
	Analog     Analog
	Events     []Event // those of the header, then those of the EVENT group
}

// Points are the points of a file in space.
type Points struct {
	Labels  []string  // one for each point, unique
	Unit    string    // of the coordinates, as stated; empty when not stated
	Rate    float64   // frames per second; 0 when not stated
	Data    []float64 // frames × points × 3; NaN where a point is missing
	Missing []int     // for each point, in how many frames it is missing
}

// Analog are the analog channels of a file. They have a clock of their own,
// several samples to a frame.
type Analog struct {
	Labels   []string  // one for each channel, unique
	Units    []string  // one for each channel, as stated; empty when not stated
	Rate     float64   // samples per second; 0 when not stated
	PerFrame int       // samples of each channel in a frame
	Unsigned bool      // stored integers have no sign
	Bits     int       // resolution of the converter; 0 when not stated
	Data     []float64 // samples × channels, in units
	Missing  []int     // for each channel, how many samples are NaN
}

// Options says how a file is read. The zero value reads all of it.
type Options struct {
	Name       string // of the file, for messages
	Size       int64  // of the file in bytes; 0 when not known
	SkipPoints bool   // leaves Points.Data and Points.Missing nil
	SkipAnalog bool   // leaves Analog.Data and Analog.Missing nil

	// Notice is told what a user should know, and the evidence for it, which
	// may be empty. Nil tells no one.
	Notice func(text, evidence string)
}

// Read reads a file from start to end. An error is a *fault.Error with the
// offset of the byte at fault, or comes from r.
//
// It reads r once, in order. Memory is that of the frames that are really
// there, at most 130 kB of parameters, and the buffer of one or a few frames;
// where the size of the file is not known, it is up to twice the frames.
func Read(r io.Reader, o Options) (*File, error) {
	if o.Notice == nil {
		o.Notice = func(string, string) {}
	}
	d := &decoder{Options: o, r: r, file: &File{}}
	for _, step := range []func() error{d.readHead, d.readParameters, d.readShape, d.readNames, d.readEvents, d.readFrames} {
		if err := step(); err != nil {
			return nil, err
		}
	}
	return d.file, nil
}

// decoder reads one file. Its parts are filled in the order of the steps.
type decoder struct {
	Options
	r     io.Reader
	at    int64 // bytes read from r
	head  [block]byte
	file  *File
	shape shape
}

// block is the unit in which sections are placed, in bytes.
const block = 512

// fill reads b, and less only where the file ends.
func (d *decoder) fill(b []byte) (n int, err error) {
	n, err = io.ReadFull(d.r, b)
	d.at += int64(n)
	if err == io.EOF || err == io.ErrUnexpectedEOF {
		err = nil
	}
	return n, err
}

// need reads b, which the file must hold for the sake of what.
func (d *decoder) need(b []byte, what string) error {
	n, err := d.fill(b)
	if err == nil && n < len(b) {
		err = d.fault(d.at, "ends inside "+what, "copy or export it again")
	}
	return err
}

// skipTo passes over bytes up to an offset, for the sake of what.
func (d *decoder) skipTo(offset int64, what string) error {
	n, err := io.CopyN(io.Discard, d.r, offset-d.at)
	d.at += n
	if err == io.EOF {
		err = d.fault(d.at, "ends before "+what, "copy or export it again")
	}
	return err
}

func (d *decoder) fault(offset int64, problem, remedy string) error {
	return &fault.Error{File: d.Name, Offset: offset, Problem: problem, Remedy: remedy}
}

// contradiction is the fault of a file that says two things.
func (d *decoder) contradiction(offset int64, problem string) error {
	return d.fault(offset, problem, "export it again, or correct it with a C3D editor")
}
