package c3d_test

import (
	"fmt"
	"math"
	"strings"

	"strandwise/ingest/c3d"
)

// recording is what a test wants a C3D file to hold.
type recording struct {
	order  c3d.Order
	float  bool
	labels []string
	unit   string
	scale  float64 // of integer coordinates, positive
	rate   float64
	first  int
	frames int
	xyz    []float64 // frames × points × 3, as stored; NaN where missing

	channels  []channel
	perFrame  int
	genScale  float64
	unsigned  bool
	bits      int
	stored    []float64 // samples × channels, as stored
	events    []c3d.Event
	longCount string // how more than 65535 frames are stated: "", "LONG_FRAMES", "TRIAL" or "float"
	extra     []parameter
	edit      func(p *parameter) // changes parameters before they are written
}

type channel struct {
	label, unit   string
	offset, scale float64
}

// parameter is one record of the parameter section; a group when kind is 0.
type parameter struct {
	group, name string
	kind        c3d.Type
	dims        []int
	texts       []string
	numbers     []float64
}

// write makes the bytes of a C3D file, straight from the manual and sharing no
// code with the reader.
func (r *recording) write() []byte {
	section := r.section()
	blocks := (len(section) + 511) / 512
	section = append(section, make([]byte, blocks*512-len(section))...)
	if blocks > 255 {
		panic("c3d_test: parameter section too large")
	}
	section[2], section[3] = byte(blocks), byte(r.order)
	out := append(r.header(2+blocks), section...)
	return append(out, r.data()...)
}

func (r *recording) header(dataBlock int) []byte {
	h := make([]byte, 512)
	h[0], h[1] = 2, 0x50
	last := min(r.first+r.frames-1, 65535)
	for word, v := range map[int]int{
		2: len(r.labels), 3: len(r.channels) * r.perFrame, 4: r.first, 5: last, 6: 10, 9: dataBlock, 10: r.perFrame, 150: 12345,
	} {
		copy(h[2*(word-1):], r.word(v))
	}
	copy(h[12:], r.real(r.signedScale()))
	copy(h[20:], r.real(r.rate))
	n := 0
	for _, e := range r.events {
		if e.InHeader {
			copy(h[304+4*n:], r.real(e.Time))
			copy(h[396+4*n:], fmt.Sprintf("%-4s", e.Label))
			n++
		}
	}
	copy(h[300:], r.word(n))
	return h
}

func (r *recording) signedScale() float64 {
	if r.float {
		return -r.scale
	}
	return r.scale
}

func (r *recording) section() []byte {
	ps := []parameter{
		{group: "POINT", name: "USED", kind: c3d.Int, numbers: []float64{float64(len(r.labels))}},
		{group: "POINT", name: "SCALE", kind: c3d.Real, numbers: []float64{r.signedScale()}},
		{group: "POINT", name: "RATE", kind: c3d.Real, numbers: []float64{r.rate}},
		{group: "POINT", name: "DATA_START", kind: c3d.Int, numbers: []float64{0}},
		{group: "POINT", name: "UNITS", kind: c3d.Char, texts: []string{r.unit}},
	}
	ps = append(ps, lists("POINT", "LABELS", r.labels)...)
	ps = append(ps, r.counts()...)
	if len(r.channels) > 0 {
		ps = append(ps, r.analogParameters()...)
	}
	ps = append(ps, r.eventParameters()...)
	ps = append(ps, r.extra...)

	out := make([]byte, 4)
	ids := map[string]byte{}
	for _, p := range ps {
		if ids[p.group] == 0 {
			ids[p.group] = byte(len(ids) + 1)
			out = append(out, r.record(p.group, -ids[p.group], nil)...)
		}
		if r.edit != nil {
			r.edit(&p)
		}
		out = append(out, r.record(p.name, ids[p.group], r.contents(p))...)
	}
	return append(out, 0, 0)
}

// lists splits texts over parameters of at most 255.
func lists(group, name string, texts []string) (out []parameter) {
	for i := 0; i == 0 || i < len(texts); i += 255 {
		p := parameter{group: group, name: name, kind: c3d.Char, texts: texts[i:min(i+255, len(texts))]}
		if i > 0 {
			p.name = fmt.Sprintf("%s%d", name, i/255+1)
		}
		out = append(out, p)
	}
	return out
}

func (r *recording) counts() []parameter {
	n := float64(r.frames)
	frames := parameter{group: "POINT", name: "FRAMES", kind: c3d.Int, numbers: []float64{math.Min(n, 65535)}}
	switch r.longCount {
	case "float":
		frames.kind, frames.numbers = c3d.Real, []float64{n}
	case "LONG_FRAMES":
		return []parameter{frames, {group: "POINT", name: "LONG_FRAMES", kind: c3d.Real, numbers: []float64{n}}}
	case "TRIAL":
		halves := func(n int) []float64 { return []float64{float64(n % 65536), float64(n / 65536)} }
		return []parameter{
			frames,
			{group: "TRIAL", name: "ACTUAL_START_FIELD", kind: c3d.Int, dims: []int{2}, numbers: halves(r.first)},
			{group: "TRIAL", name: "ACTUAL_END_FIELD", kind: c3d.Int, dims: []int{2}, numbers: halves(r.first + r.frames - 1)},
		}
	}
	return []parameter{frames}
}

func (r *recording) analogParameters() []parameter {
	n := len(r.channels)
	labels, units := make([]string, n), make([]string, n)
	scale := parameter{group: "ANALOG", name: "SCALE", kind: c3d.Real, dims: []int{n}}
	offset := parameter{group: "ANALOG", name: "OFFSET", kind: c3d.Int, dims: []int{n}}
	for i, c := range r.channels {
		labels[i], units[i] = c.label, c.unit
		scale.numbers = append(scale.numbers, c.scale)
		offset.numbers = append(offset.numbers, c.offset)
	}
	format := "SIGNED"
	if r.unsigned {
		format = "UNSIGNED"
	}
	out := []parameter{
		{group: "ANALOG", name: "USED", kind: c3d.Int, numbers: []float64{float64(n)}},
		{group: "ANALOG", name: "RATE", kind: c3d.Real, numbers: []float64{r.rate * float64(r.perFrame)}},
		{group: "ANALOG", name: "GEN_SCALE", kind: c3d.Real, numbers: []float64{r.genScale}},
		{group: "ANALOG", name: "FORMAT", kind: c3d.Char, texts: []string{format}},
		{group: "ANALOG", name: "BITS", kind: c3d.Int, numbers: []float64{float64(r.bits)}},
		scale, offset,
	}
	out = append(out, lists("ANALOG", "LABELS", labels)...)
	return append(out, lists("ANALOG", "UNITS", units)...)
}

func (r *recording) eventParameters() []parameter {
	var labels, contexts, subjects []string
	var times []float64
	for _, e := range r.events {
		if !e.InHeader {
			seconds := e.Time + float64(max(r.first-1, 0))/r.rate
			labels, contexts, subjects = append(labels, e.Label), append(contexts, e.Context), append(subjects, e.Subject)
			times = append(times, math.Floor(seconds/60), seconds-60*math.Floor(seconds/60))
		}
	}
	if len(labels) == 0 {
		return nil
	}
	out := []parameter{
		{group: "EVENT", name: "USED", kind: c3d.Int, numbers: []float64{float64(len(labels))}},
		{group: "EVENT", name: "TIMES", kind: c3d.Real, dims: []int{2, len(labels)}, numbers: times},
	}
	out = append(out, lists("EVENT", "LABELS", labels)...)
	out = append(out, lists("EVENT", "CONTEXTS", contexts)...)
	return append(out, lists("EVENT", "SUBJECTS", subjects)...)
}

// record is a group or parameter without a description.
func (r *recording) record(name string, id byte, contents []byte) []byte {
	out := append([]byte{byte(len(name)), id}, name...)
	out = append(out, r.word(2+len(contents)+1)...)
	out = append(out, contents...)
	return append(out, 0)
}

func (r *recording) contents(p parameter) []byte {
	dims := p.dims
	if p.kind == c3d.Char && dims == nil {
		width := 0
		for _, s := range p.texts {
			width = max(width, len(s))
		}
		dims = []int{width, len(p.texts)}
	}
	out := []byte{byte(p.kind), byte(len(dims))}
	for _, n := range dims {
		out = append(out, byte(n))
	}
	for _, s := range p.texts {
		out = append(out, s...)
		out = append(out, strings.Repeat(" ", dims[0]-len(s))...)
	}
	for _, v := range p.numbers {
		switch p.kind {
		case c3d.Real:
			out = append(out, r.real(v)...)
		case c3d.Int:
			out = append(out, r.word(int(v))...)
		default:
			out = append(out, byte(int(v)))
		}
	}
	return out
}

func (r *recording) data() []byte {
	var out []byte
	points, analog := 3*len(r.labels), len(r.channels)*r.perFrame
	for f := range r.frames {
		for p := r.xyz[f*points : (f+1)*points]; len(p) > 0; p = p[3:] {
			if math.IsNaN(p[0]) {
				out = append(out, r.values(0, 0, 0, -1)...)
			} else {
				out = append(out, r.values(p[0], p[1], p[2], 0)...)
			}
		}
		out = append(out, r.values(r.stored[f*analog:(f+1)*analog]...)...)
	}
	return out
}

// values stores numbers of the data section.
func (r *recording) values(vs ...float64) (out []byte) {
	for _, v := range vs {
		if r.float {
			out = append(out, r.real(v)...)
		} else {
			out = append(out, r.word(int(v))...)
		}
	}
	return out
}

// word stores the low 16 bits of a number.
func (r *recording) word(v int) []byte {
	lo, hi := byte(v), byte(v>>8)
	if r.order == c3d.MIPS {
		return []byte{hi, lo}
	}
	return []byte{lo, hi}
}

func (r *recording) real(v float64) []byte {
	if r.order == c3d.DEC {
		return fFloating(v)
	}
	bits := math.Float32bits(float32(v))
	b := []byte{byte(bits), byte(bits >> 8), byte(bits >> 16), byte(bits >> 24)}
	if r.order == c3d.MIPS {
		b[0], b[1], b[2], b[3] = b[3], b[2], b[1], b[0]
	}
	return b
}

// fFloating stores a number as DEC machines did, from the definition of the
// format: a fraction of 24 bits between 1/2 and 1, whose first bit is not
// stored, and an exponent in excess of 128. NaN is the reserved operand.
func fFloating(v float64) []byte {
	if math.IsNaN(v) {
		return []byte{0, 0x80, 0, 0}
	}
	if v == 0 {
		return make([]byte, 4)
	}
	fraction, exponent := math.Frexp(math.Abs(v))
	f := uint32(fraction * (1 << 24))
	first := uint16(exponent+128)<<7 | uint16(f>>16)&0x7f
	if v < 0 {
		first |= 0x8000
	}
	second := uint16(f)
	return []byte{byte(first), byte(first >> 8), byte(second), byte(second >> 8)}
}
