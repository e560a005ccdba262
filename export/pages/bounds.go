package pages

import (
	"encoding/binary"
	"math"

	"github.com/parquet-go/parquet-go/format"
)

// maxBound is the length above which the bounds of a text column are left
// out: long texts, such as JSON, are not what a reader skips by.
const maxBound = 64

// bounds holds the smallest and largest number of a row group; its zero value
// knows of none. Whole numbers of 32 bits are exact in a float64.
type bounds struct {
	low, top float64
	known    bool
}

// take widens the bounds by the numbers of one page. What is not a number
// has no order and is passed over.
func (b *bounds) take(kind Kind, values []byte) {
	low, top := math.Inf(1), math.Inf(-1)
	switch kind {
	case Int32:
		for i := 0; i+4 <= len(values); i += 4 {
			v := float64(int32(binary.LittleEndian.Uint32(values[i:])))
			if v < low {
				low = v
			}
			if v > top {
				top = v
			}
		}
	case Float64:
		for i := 0; i+8 <= len(values); i += 8 {
			v := math.Float64frombits(binary.LittleEndian.Uint64(values[i:]))
			if v < low {
				low = v
			}
			if v > top {
				top = v
			}
		}
	}
	if low > top {
		return
	}
	if b.known {
		low, top = min(low, b.low), max(top, b.top)
	}
	b.low, b.top, b.known = low, top, true
}

// statistics returns what the footer states of the column's row group. A zero
// that bounds it is written as −0 below and +0 above, as the format asks.
func (c *column) statistics() format.Statistics {
	s := format.Statistics{NullCount: c.nulls}
	switch c.Kind {
	case Text:
		d := &c.dictionary
		if len(d.index) > 0 && len(d.low) <= maxBound && len(d.top) <= maxBound {
			s.MinValue, s.MaxValue = []byte(d.low), []byte(d.top)
		}
	case Int32:
		if c.bounds.known {
			s.MinValue = binary.LittleEndian.AppendUint32(nil, uint32(int32(c.bounds.low)))
			s.MaxValue = binary.LittleEndian.AppendUint32(nil, uint32(int32(c.bounds.top)))
		}
	case Float64:
		if c.bounds.known {
			s.MinValue = appendBound(c.bounds.low, math.Copysign(0, -1))
			s.MaxValue = appendBound(c.bounds.top, 0)
		}
	}
	return s
}

func appendBound(v, zero float64) []byte {
	if v == 0 {
		v = zero
	}
	return binary.LittleEndian.AppendUint64(nil, math.Float64bits(v))
}
