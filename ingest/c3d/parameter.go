package c3d

import (
	"bytes"
	"fmt"
	"slices"
	"strings"
	"unicode/utf8"
)

// Type is the type of a parameter's elements, by the number the format gives
// it: the size of an element in bytes, or -1 for text.
type Type int8

// The four types.
const (
	Char Type = -1
	Byte Type = 1
	Int  Type = 2 // 16 bits
	Real Type = 4
)

func (t Type) known() bool { return t == Char || t == Byte || t == Int || t == Real }

func (t Type) size() int64 { return int64(max(t, 1)) }

// Parameter is one parameter of a file: a scalar or an array of up to seven
// dimensions.
type Parameter struct {
	Group, Name string // upper case
	Type        Type
	Dims        []int // the fastest first; empty for a scalar
	Offset      int64 // of its first element in the file, in bytes

	order Order
	data  []byte
}

// Len returns the number of elements; for text, the number of bytes.
func (p *Parameter) Len() int { return len(p.data) / int(p.Type.size()) }

// Strings returns the texts of a Char parameter, whose first dimension is
// their length, without padding. It returns nil for other types. Text that is
// not UTF-8 is taken as ISO 8859-1.
func (p *Parameter) Strings() []string {
	if p.Type != Char || len(p.data) == 0 {
		return nil
	}
	width := 1
	if len(p.Dims) > 0 {
		width = p.Dims[0]
	}
	var out []string
	for b := range slices.Chunk(p.data, width) {
		out = append(out, text(b))
	}
	return out
}

// Numbers returns the elements of a parameter of numbers; those of Byte and
// Int are signed. It returns nil for text.
func (p *Parameter) Numbers() []float64 { return p.numbers(true) }

// Unsigned is like Numbers, but takes Byte and Int as having no sign, as counts
// do.
func (p *Parameter) Unsigned() []float64 { return p.numbers(false) }

func (p *Parameter) numbers(signed bool) []float64 {
	if p.Type == Char {
		return nil
	}
	out := make([]float64, p.Len())
	for i := range out {
		b := p.data[i*int(p.Type.size()):]
		switch {
		case p.Type == Real:
			out[i] = p.order.float(b)
		case p.Type == Int && signed:
			out[i] = float64(int16(p.order.uint16(b)))
		case p.Type == Int:
			out[i] = float64(p.order.uint16(b))
		case signed:
			out[i] = float64(int8(b[0]))
		default:
			out[i] = float64(b[0])
		}
	}
	return out
}

// same tells whether two parameters hold the same.
func (p *Parameter) same(q *Parameter) bool {
	return p.Type == q.Type && slices.Equal(p.Dims, q.Dims) && bytes.Equal(p.data, q.data)
}

// Parameters are the parameters of a file in its order.
type Parameters []Parameter

// Find returns a parameter by its names in upper case, nil when there is none.
func (ps Parameters) Find(group, name string) *Parameter {
	for i := range ps {
		if ps[i].Group == group && ps[i].Name == name {
			return &ps[i]
		}
	}
	return nil
}

// run returns a parameter and those that continue it where 255 elements are
// not enough: LABELS, LABELS2, LABELS3 …
func (ps Parameters) run(group, name string) []*Parameter {
	var out []*Parameter
	for next := name; ; next = fmt.Sprintf("%s%d", name, len(out)+1) {
		p := ps.Find(group, next)
		if p == nil {
			return out
		}
		out = append(out, p)
	}
}

// texts returns the texts of a parameter and its continuations.
func (ps Parameters) texts(group, name string) []string {
	var out []string
	for _, p := range ps.run(group, name) {
		out = append(out, p.Strings()...)
	}
	return out
}

// firstText returns the first text of a parameter, or none.
func (ps Parameters) firstText(group, name string) string {
	if all := ps.texts(group, name); len(all) > 0 {
		return all[0]
	}
	return ""
}

// text reads a fixed field of text: up to a zero byte, without spaces around.
func text(b []byte) string {
	b, _, _ = bytes.Cut(b, []byte{0})
	if utf8.Valid(b) {
		return strings.TrimSpace(string(b))
	}
	runes := make([]rune, len(b)) // ISO 8859-1 is the first 256 code points
	for i, c := range b {
		runes[i] = rune(c)
	}
	return strings.TrimSpace(string(runes))
}
