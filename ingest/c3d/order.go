package c3d

import (
	"encoding/binary"
	"fmt"
	"math"
)

// Order is the kind of machine whose byte order and number format a file is
// written in, by the number the parameter section states.
type Order byte

// The three orders. Intel and MIPS floats are IEEE 754, DEC floats are
// F_floating.
const (
	Intel Order = 84 // little endian
	DEC   Order = 85 // PDP-11 and VAX: little endian words, high word first
	MIPS  Order = 86 // big endian
)

// String names the order.
func (o Order) String() string {
	switch o {
	case Intel:
		return "Intel"
	case DEC:
		return "DEC"
	case MIPS:
		return "MIPS"
	}
	return fmt.Sprintf("unknown order %d", byte(o))
}

func (o Order) known() bool { return o >= Intel && o <= MIPS }

func (o Order) uint16(b []byte) uint16 {
	if o == MIPS {
		return binary.BigEndian.Uint16(b)
	}
	return binary.LittleEndian.Uint16(b)
}

func (o Order) float(b []byte) float64 {
	switch o {
	case MIPS:
		return float64(math.Float32frombits(binary.BigEndian.Uint32(b)))
	case DEC:
		return decFloat(b)
	}
	return float64(math.Float32frombits(binary.LittleEndian.Uint32(b)))
}

// decFloat reads an F_floating number of 4 bytes. Its first word, low byte
// first, holds the sign in bit 15, an exponent e in excess of 128 in bits 14
// to 7, and the high 7 bits of the fraction; its second word holds the low 16
// bits. With the leading bit of the fraction f hidden, the value is
//
//	(−1)^sign · 0.1f · 2^(e−128)
//
// An exponent of zero is the number 0, or with the sign set a reserved value
// that stands for no number, read as NaN (VAX Architecture Reference Manual,
// 1987, chapter 1). Every value is exact in float64.
func decFloat(b []byte) float64 {
	bits := uint64(binary.LittleEndian.Uint16(b))<<16 | uint64(binary.LittleEndian.Uint16(b[2:]))
	sign, e, f := bits>>31, bits>>23&0xff, bits&(1<<23-1)
	switch {
	case e != 0:
		return math.Float64frombits(sign<<63 | (e-129+1023)<<52 | f<<(52-23))
	case sign != 0:
		return math.NaN()
	}
	return 0
}

// ints reads len(dst) signed 16-bit integers.
func (o Order) ints(dst []float64, b []byte) {
	b = b[:2*len(dst)]
	if o == MIPS {
		for i := range dst {
			dst[i] = float64(int16(binary.BigEndian.Uint16(b[2*i:])))
		}
		return
	}
	for i := range dst {
		dst[i] = float64(int16(binary.LittleEndian.Uint16(b[2*i:])))
	}
}

// floats reads len(dst) 32-bit floats.
func (o Order) floats(dst []float64, b []byte) {
	b = b[:4*len(dst)]
	switch o {
	case MIPS:
		for i := range dst {
			dst[i] = float64(math.Float32frombits(binary.BigEndian.Uint32(b[4*i:])))
		}
	case DEC:
		for i := range dst {
			dst[i] = decFloat(b[4*i:])
		}
	default:
		for i := range dst {
			dst[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(b[4*i:])))
		}
	}
}
