package spill

import (
	"encoding/binary"
	"math"

	"strandwise/channels"
	"strandwise/channels/body"
)

// appendTake appends a take: its texts, each after its length; the numbers of
// its layout and skeleton; the number of frames; the clock; the values.
func appendTake(dst []byte, t *channels.Take, layout, skeleton uint64) []byte {
	for _, text := range []string{t.ID, t.Label, t.Subject, t.Session, string(t.Split), t.Where} {
		dst = binary.AppendUvarint(dst, uint64(len(text)))
		dst = append(dst, text...)
	}
	dst = binary.AppendUvarint(dst, layout)
	dst = binary.AppendUvarint(dst, skeleton)
	dst = binary.AppendUvarint(dst, uint64(len(t.Time)))
	dst = appendFloats(dst, t.Time)
	return appendFloats(dst, t.Data)
}

func appendFloats(dst []byte, values []float64) []byte {
	for _, v := range values {
		dst = binary.LittleEndian.AppendUint64(dst, math.Float64bits(v))
	}
	return dst
}

// reader takes values off the front of some bytes, until they are too short.
type reader struct {
	data  []byte
	short bool
}

func (r *reader) take(layouts []*channels.Layout, skeletons []*body.Skeleton) *channels.Take {
	t := &channels.Take{ID: r.text(), Label: r.text(), Subject: r.text(), Session: r.text(), Split: channels.Split(r.text()), Where: r.text()}
	layout, skeleton, frames := r.number(), r.number(), r.number()
	if r.short || layout >= uint64(len(layouts)) || skeleton >= uint64(len(skeletons)) {
		r.short = true
		return nil
	}
	t.Layout, t.Skeleton = layouts[layout], skeletons[skeleton]
	t.Time = r.floats(frames)
	t.Data = r.floats(frames * uint64(t.Width()))
	return t
}

func (r *reader) number() uint64 {
	v, n := binary.Uvarint(r.data)
	if n <= 0 {
		r.short = true
		return 0
	}
	r.data = r.data[n:]
	return v
}

func (r *reader) text() string { return string(r.bytes(r.number())) }

func (r *reader) bytes(n uint64) []byte {
	if n > uint64(len(r.data)) {
		r.short = true
		return nil
	}
	out := r.data[:n]
	r.data = r.data[n:]
	return out
}

func (r *reader) floats(n uint64) []float64 {
	if n > uint64(len(r.data))/8 {
		r.short = true
		return nil
	}
	out := make([]float64, n)
	for i := range out {
		out[i] = math.Float64frombits(binary.LittleEndian.Uint64(r.data[8*i:]))
	}
	r.data = r.data[8*n:]
	return out
}
