package columnar

import (
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"

	"github.com/apache/arrow/go/v15/arrow/float16"
	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/deprecated"
	"github.com/parquet-go/parquet-go/format"
)

// decode appends the values of a page, without nulls, to c.dense. The values of
// a dictionary it keeps in c.known.
func (c *parquetColumn) decode(p *page) error {
	if p.dictionary {
		c.known.reset()
		return c.convert(&c.known, p, p.values)
	}
	n := p.values
	if c.max > 0 {
		n = count(p.definitions, c.max)
	}
	//lint:ignore SA1019 older writers still use this encoding
	if p.encoding != format.RLEDictionary && p.encoding != format.PlainDictionary {
		return c.convert(&c.dense, p, n)
	}
	var err error
	if c.ints, err = indexes(c.ints, p.body, n); err != nil {
		return err
	}
	return c.dense.gather(c.as, &c.known, c.ints)
}

// count returns how many levels are a given one.
func count(levels []byte, level byte) (n int) {
	for _, l := range levels {
		if l == level {
			n++
		}
	}
	return n
}

// convert appends the n values of a page to dst, in the form c.as.
func (c *parquetColumn) convert(dst *values, p *page, n int) error {
	if n == 0 {
		return nil
	}
	if err := checkDelta(p.encoding, p.body, n); err != nil {
		return err
	}
	encoding := parquet.LookupEncoding(p.encoding)
	var err error
	switch c.kind {
	case parquet.Float:
		c.floats, err = encoding.DecodeFloat(c.floats[:0], p.body)
		return appendFirst(dst, c.as, c.floats, n, err, appendNumbers)
	case parquet.Double:
		c.doubles, err = encoding.DecodeDouble(c.doubles[:0], p.body)
		return appendFirst(dst, c.as, c.doubles, n, err, appendNumbers)
	case parquet.Int32:
		c.ints, err = encoding.DecodeInt32(c.ints[:0], p.body)
		if c.unsigned {
			return appendFirst(dst, c.as, c.ints, n, err, appendUnsigned32)
		}
		return appendFirst(dst, c.as, c.ints, n, err, appendWhole)
	case parquet.Int64:
		c.longs, err = encoding.DecodeInt64(c.longs[:0], p.body)
		if c.unsigned {
			return appendFirst(dst, c.as, c.longs, n, err, appendUnsigned64)
		}
		return appendFirst(dst, c.as, c.longs, n, err, appendWhole)
	case parquet.Int96:
		src, err := encoding.DecodeInt96(nil, p.body)
		return appendFirst(dst, c.as, src, n, err, appendStamps)
	case parquet.FixedLenByteArray: // 16-bit floats
		src, err := encoding.DecodeFixedLenByteArray(nil, p.body, 2)
		return appendFirst(dst, c.as, halves(src), n, err, appendNumbers)
	case parquet.ByteArray:
		bytes, offsets, err := encoding.DecodeByteArray(nil, p.body, nil)
		if err == nil && len(offsets) <= n {
			err = errShort
		}
		if err != nil {
			return err
		}
		return appendTexts(dst, bytes, offsets[:n+1])
	}
	return fmt.Errorf("values of type %s where others belong", c.kind)
}

var errShort = errors.New("fewer values than its levels say")

// appendFirst appends the first n values that were decoded, by add.
func appendFirst[T any](dst *values, as want, src []T, n int, err error, add func(*values, want, []T) error) error {
	switch {
	case err != nil:
		return err
	case len(src) < n:
		return errShort
	}
	return add(dst, as, src[:n])
}

func appendUnsigned32(dst *values, as want, src []int32) error {
	wide := make([]uint32, len(src))
	for i, v := range src {
		wide[i] = uint32(v)
	}
	return appendWhole(dst, as, wide)
}

func appendUnsigned64(dst *values, as want, src []int64) error {
	wide := make([]uint64, len(src))
	for i, v := range src {
		wide[i] = uint64(v)
	}
	return appendWhole(dst, as, wide)
}

func appendStamps(dst *values, as want, src []deprecated.Int96) error {
	for _, v := range src {
		dst.whole = append(dst.whole, nanoseconds(v))
	}
	return nil
}

// appendNumbers appends floats as floats or as text.
func appendNumbers[T float32 | float64](dst *values, as want, src []T) error {
	switch as {
	case floats:
		dst.floats = slices.Grow(dst.floats, len(src))
		for _, v := range src {
			dst.floats = append(dst.floats, float64(v))
		}
	case texts:
		bits := 64
		if _, single := any(src).([]float32); single {
			bits = 32
		}
		for _, v := range src {
			dst.texts = append(dst.texts, numberText(float64(v), bits))
		}
	default:
		return errors.New("floats where whole numbers belong")
	}
	return nil
}

// numberText writes a number of so many bits as the name it stands for. NaN is
// no name.
func numberText(v float64, bits int) string {
	if math.IsNaN(v) {
		return ""
	}
	return strconv.FormatFloat(v, 'f', -1, bits)
}

// appendWhole appends whole numbers in any form.
func appendWhole[T signed | unsigned](dst *values, as want, src []T) error {
	switch as {
	case floats:
		dst.floats = slices.Grow(dst.floats, len(src))
		for _, v := range src {
			dst.floats = append(dst.floats, float64(v))
		}
	case whole:
		for _, v := range src {
			if v > 0 && int64(v) < 0 {
				return errors.New("a time that is no 64-bit number")
			}
			dst.whole = append(dst.whole, int64(v))
		}
	case texts:
		for _, v := range src {
			dst.texts = append(dst.texts, fmt.Sprintf("%d", v))
		}
	}
	return nil
}

type (
	signed interface {
		~int8 | ~int16 | ~int32 | ~int64
	}
	unsigned interface {
		~uint8 | ~uint16 | ~uint32 | ~uint64
	}
)

// appendTexts appends text, sharing that of equal neighbours.
func appendTexts(dst *values, bytes []byte, offsets []uint32) error {
	last := ""
	for i := 1; i < len(offsets); i++ {
		from, to := offsets[i-1], offsets[i]
		if from > to || int(to) > len(bytes) {
			return errShort
		}
		if b := bytes[from:to]; string(b) != last {
			last = string(b)
		}
		dst.texts = append(dst.texts, last)
	}
	return nil
}

// halves widens 16-bit floats.
func halves(src []byte) []float32 {
	out := make([]float32, len(src)/2)
	for i := range out {
		out[i] = float16.FromBits(binary.LittleEndian.Uint16(src[2*i:])).Float32()
	}
	return out
}

// nanoseconds reads a legacy time stamp, nanoseconds of the day and Julian day,
// as nanoseconds since 1970, which is Julian day 2440588 (the convention of
// Impala and Spark).
func nanoseconds(v deprecated.Int96) int64 {
	ofDay := int64(v[0]) | int64(v[1])<<32
	return (int64(v[2])-2440588)*86_400_000_000_000 + ofDay
}
