package pages

import (
	"encoding/binary"
	"math/bits"
)

// run is a value repeated count times.
type run struct{ value, count uint32 }

// runs is a sequence of small numbers held as runs, neighbouring runs having
// different values.
type runs []run

// add appends n times v.
func (r *runs) add(v uint32, n int) {
	if n == 0 {
		return
	}
	if last := len(*r) - 1; last >= 0 && (*r)[last].value == v {
		(*r)[last].count += uint32(n)
		return
	}
	*r = append(*r, run{v, uint32(n)})
}

// appendTo appends the runs in Parquet's run-length encoding to dst, each
// value taking the whole bytes that hold width bits. The format also knows
// bit-packed stretches; the sequences here, levels and sorted keys, are made
// of long runs, so they are not used.
func (r runs) appendTo(dst []byte, width int) []byte {
	for _, e := range r {
		dst = binary.AppendUvarint(dst, uint64(e.count)<<1)
		for shift := 0; shift < width; shift += 8 {
			dst = append(dst, byte(e.value>>shift))
		}
	}
	return dst
}

// appendLevels appends the runs as the levels of a version 1 data page: a
// four-byte length, then the run-length encoding of one-bit values.
func (r runs) appendLevels(dst []byte) []byte {
	at := len(dst)
	dst = r.appendTo(append(dst, 0, 0, 0, 0), 1)
	binary.LittleEndian.PutUint32(dst[at:], uint32(len(dst)-at-4))
	return dst
}

// indexWidth returns the bits needed for an index into n values, at least 1.
func indexWidth(n int) int { return max(1, bits.Len(uint(max(n-1, 0)))) }
