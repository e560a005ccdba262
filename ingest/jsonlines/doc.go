// Package jsonlines reads takes from JSON: one object after another, on lines of
// their own or not, or all in one list. An object is one of three things.
//
// It is a frame, as loggers write them. Objects within it count as columns
// whose names are joined by dots, here accel.x, accel.y and accel.z:
//
//	{"take":"t01","label":"wave","t":0.00,"accel":{"x":0.1,"y":0.2,"z":9.8}}
//	{"take":"t01","label":"wave","t":0.02,"accel":{"x":0.1,"y":0.3,"z":9.7}}
//
// Or it is a sample of one sensor, whose columns bear its name, here
// accelerometer.x and gyroscope.x. Several sensors may share a take, each with
// times of its own; the columns of the others are missing in their frames.
//
//	{"sensor":"accelerometer","time":1704164645000000000,"x":0.1,"y":0.2,"z":9.8}
//	{"sensor":"gyroscope","time":1704164645003000000,"values":[0.01,0.02,0.03]}
//
// Or an object is a take, with its times and channels as lists:
//
//	{"label":"wave","time_s":[0,0.02,0.04],"ax":[0.1,0.1,0.2]}
//
// Fields named take, label, subject, session and split, upper or lower case,
// state what an object belongs to. Frames of one take stand together; without
// a take field they are one take. An object that holds no frame states what is
// so for those after it: for the rest of the file, or for one take if it names
// that. The clock is the field named time, t, timestamp or elapsed, of numbers
// or dates as RFC 3339 writes them, else one named frame or index, which counts
// frames. Every other field that holds numbers is a channel, whose name may
// state its unit in brackets; truth values and text are left out with a notice.
//
// A list of three numbers within a frame is x, y and z; of any other length, its
// elements are numbered from 0. Numbers may stand in quotes. A value that is
// null, NaN, or not there while others of its take have it, is missing.
//
// Memory: one object and one take.
package jsonlines

import (
	"bytes"
	"errors"
	"io"

	"strandwise/ingest/raw"
)

// Format is JSON, in lines or in a list. It is stateless and safe for
// concurrent use.
type Format struct{}

var _ raw.Format = Format{}

// Extensions returns the usual extensions of JSON in lines. Files named .json
// are not taken for recordings, since many other things are; they are read
// when the user names them.
func (Format) Extensions() []string { return []string{".jsonl", ".ndjson"} }

// Sniff accepts text that begins with an object, or with a list of objects.
func (Format) Sniff(head []byte, name string) bool {
	const space = " \t\r\n"
	text := bytes.TrimLeft(bytes.TrimPrefix(head, mark), space)
	if list, ok := bytes.CutPrefix(text, []byte("[")); ok {
		text = bytes.TrimLeft(list, space)
	}
	text, ok := bytes.CutPrefix(text, []byte("{"))
	text = bytes.TrimLeft(text, space)
	return ok && (len(text) == 0 || text[0] == '"' || text[0] == '}')
}

// mark may begin text in UTF-8.
var mark = []byte("\ufeff")

// Read yields the takes of one file.
func (Format) Read(r io.Reader, in raw.Input) raw.Stream {
	return func(yield func(*raw.Take, error) bool) {
		if in.Notice == nil {
			in.Notice = func(string, string) {}
		}
		d := &reader{in: in, yield: yield, source: newObjects(r), columns: map[string]*column{}}
		if err := d.read(); err != nil && err != errStopped {
			yield(nil, err)
		}
	}
}

var errStopped = errors.New("receiver stopped")
