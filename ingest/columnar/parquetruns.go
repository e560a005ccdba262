package columnar

import (
	"encoding/binary"
	"errors"

	"github.com/parquet-go/parquet-go/encoding/rle"
	"github.com/parquet-go/parquet-go/format"
)

var errRuns = errors.New("runs that do not fit their page")

// padding is by how many numbers, or groups of them, a writer may fill up a run.
const padding = 504

// runs returns the part of data that holds at least n numbers of so many bits,
// in the run-length and bit-packed encoding of Parquet (Encodings.md, "RLE").
// The library that decodes it allocates for whatever length a run claims.
func runs(data []byte, bits, n int) ([]byte, error) {
	at := 0
	for found := uint64(0); found < uint64(n); {
		header, k := binary.Uvarint(data[at:])
		if k <= 0 {
			return nil, errRuns
		}
		at += k
		count, size := header>>1, uint64(bits+7)/8
		if count > uint64(n)+padding {
			return nil, errRuns
		}
		if header&1 == 1 {
			count, size = 8*count, count*uint64(bits)
		}
		if size > uint64(len(data)-at) {
			return nil, errRuns
		}
		at += int(size)
		found += count
	}
	return data[:at], nil
}

// levels decodes n levels, into memory that is free again.
func levels(free, data []byte, bits, n int) ([]byte, error) {
	data, err := runs(data, bits, n)
	if err != nil {
		return nil, err
	}
	out, err := (&rle.Encoding{BitWidth: bits}).DecodeLevels(free[:0], data)
	if err == nil && len(out) < n {
		err = errRuns
	}
	if err != nil {
		return nil, err
	}
	return out[:n], nil
}

// indexes decodes n indexes into a dictionary, which their width precedes, into
// memory that is free again.
func indexes(free []int32, data []byte, n int) ([]int32, error) {
	if n == 0 {
		return nil, nil
	}
	if len(data) == 0 || data[0] > 32 {
		return nil, errRuns
	}
	bits := int(data[0])
	data, err := runs(data[1:], bits, n)
	if err != nil {
		return nil, err
	}
	out, err := (&rle.Encoding{BitWidth: bits}).DecodeInt32(free[:0], data)
	if err == nil && len(out) < n {
		err = errRuns
	}
	if err != nil {
		return nil, err
	}
	return out[:n], nil
}

// checkDelta checks how many values a page in one of the delta encodings claims
// to hold: the third number of its header (Encodings.md, "DELTA_BINARY_PACKED",
// which begins the others too).
func checkDelta(encoding format.Encoding, data []byte, n int) error {
	switch encoding {
	case format.DeltaBinaryPacked, format.DeltaLengthByteArray, format.DeltaByteArray:
	default:
		return nil
	}
	for range 2 {
		_, k := binary.Uvarint(data)
		if k <= 0 {
			return errRuns
		}
		data = data[k:]
	}
	if claimed, k := binary.Uvarint(data); k <= 0 || claimed > uint64(n) {
		return errRuns
	}
	return nil
}
