package look

import (
	"encoding/binary"
	"fmt"
	"math"
	"slices"
)

// Bounds of what is held and sent of signals.
const (
	groupValues = 8 << 20 // a row group of more values than this (32 MiB) is read take by take
	groupsKept  = 3       // row groups held
	sentValues  = 4 << 20 // a take of more values than this (16 MiB) is sent thinned
)

// signals are the clock and the channels of takes that stand one after the other.
type signals struct {
	time     []float32   // seconds from the first frame of each take
	channels [][]float32 // in the order of the layout
}

// slice returns the signals of n frames.
func (s signals) slice(from, n int) signals {
	out := signals{time: s.time[from : from+n]}
	for _, c := range s.channels {
		out.channels = append(out.channels, c[from:from+n])
	}
	return out
}

// thin returns every step-th frame.
func (s signals) thin(step int) signals {
	out := signals{time: every(s.time, step)}
	for _, c := range s.channels {
		out.channels = append(out.channels, every(c, step))
	}
	return out
}

func every(values []float32, step int) []float32 {
	out := make([]float32, 0, (len(values)+step-1)/step)
	for i := 0; i < len(values); i += step {
		out = append(out, values[i])
	}
	return out
}

// encode returns the clock and then each channel as little-endian 32-bit floats.
func (s signals) encode() []byte {
	out := make([]byte, 0, 4*len(s.time)*(1+len(s.channels)))
	for _, list := range append([][]float32{s.time}, s.channels...) {
		for _, v := range list {
			out = binary.LittleEndian.AppendUint32(out, math.Float32bits(v))
		}
	}
	return out
}

// groupCache holds the signals of the row groups that were read last.
type groupCache struct {
	held []heldGroup // the one used last at the end
}

type heldGroup struct {
	file, group uint16
	signals     signals
}

func (c *groupCache) find(file, group uint16) (signals, bool) {
	i := slices.IndexFunc(c.held, func(h heldGroup) bool { return h.file == file && h.group == group })
	if i < 0 {
		return signals{}, false
	}
	h := c.held[i]
	c.held = append(slices.Delete(c.held, i, i+1), h)
	return h.signals, true
}

func (c *groupCache) add(h heldGroup) {
	if len(c.held) == groupsKept {
		c.held = slices.Delete(c.held, 0, 1)
	}
	c.held = append(c.held, h)
}

// step returns which frames of a take are sent: every one, or every step-th of
// a take too long to be sent whole.
func (s *Set) step(r *row) int {
	values := int(r.frames) * (1 + len(s.columns))
	return (values + sentValues - 1) / sentValues
}

// motion reads the signals of a take. They belong to the set, and are not to be
// changed.
func (s *Set) motion(r *row) (signals, error) {
	f := s.files[r.file]
	s.mu.Lock()
	defer s.mu.Unlock()
	if held, ok := s.groups.find(r.file, r.group); ok {
		return held.slice(int(r.before), int(r.frames)), nil
	}
	whole := int(f.frames[r.group])
	if whole*(1+len(s.columns)) > groupValues {
		return s.read(f, r.group, int(r.before), int(r.frames))
	}
	all, err := s.read(f, r.group, 0, whole)
	if err != nil {
		return signals{}, err
	}
	s.groups.add(heldGroup{r.file, r.group, all})
	return all.slice(int(r.before), int(r.frames)), nil
}

// read reads n frames of a row group from a frame on.
func (s *Set) read(f *file, group uint16, from, n int) (signals, error) {
	g := f.groups[group]
	out := signals{channels: make([][]float32, len(s.columns))}
	err := guarded(func() (err error) {
		if out.time, err = floats(g, "time_s", from, n); err != nil {
			return err
		}
		for c, name := range s.columns {
			if out.channels[c], err = floats(g, name, from, n); err != nil {
				return err
			}
		}
		return nil
	})
	if err != nil {
		return signals{}, fmt.Errorf("%s: row group %d: %w", f.path, group, err)
	}
	return out, nil
}

// making is what the row of a take says of how it was made.
type making struct {
	source, method string
	parameters     map[string]float64
}

// making reads how a synthetic take was made.
func (s *Set) making(r *row) (making, error) {
	f := s.files[r.file]
	var m making
	err := guarded(func() error {
		c := columns{group: f.groups[r.group], rows: int(f.groups[r.group].NumRows())}
		id, source, method, parameters := c.texts("id"), c.texts("source"), c.texts("method"), c.texts("parameters")
		if c.err != nil {
			return c.err
		}
		if string(id[r.place]) != r.id {
			return fmt.Errorf("row %d is take %q, which was %q: the set was changed while it was looked at; start again", r.place, id[r.place], r.id)
		}
		m.source, m.method = string(source[r.place]), string(method[r.place])
		if parameters[r.place] == nil {
			return nil
		}
		var err error
		m.parameters, err = parseParameters(parameters[r.place])
		return err
	})
	if err != nil {
		return making{}, fmt.Errorf("%s: row group %d: %w", f.path, r.group, err)
	}
	return m, nil
}
