package channels

import (
	"encoding/binary"
	"errors"
	"math"
)

// MarshalBinary returns the scales in a form that another process can go on
// with, to the bit.
func (s *Scales) MarshalBinary() ([]byte, error) {
	var out []byte
	for g := range s.squares {
		out = binary.BigEndian.AppendUint64(out, math.Float64bits(s.squares[g]))
		out = binary.BigEndian.AppendUint64(out, math.Float64bits(s.counts[g]))
	}
	return out, nil
}

// UnmarshalBinary takes up what MarshalBinary returned.
func (s *Scales) UnmarshalBinary(data []byte) error {
	if len(data)%16 != 0 {
		return errors.New("scales are cut short")
	}
	*s = Scales{}
	for ; len(data) > 0; data = data[16:] {
		s.squares = append(s.squares, math.Float64frombits(binary.BigEndian.Uint64(data)))
		s.counts = append(s.counts, math.Float64frombits(binary.BigEndian.Uint64(data[8:])))
	}
	return nil
}
