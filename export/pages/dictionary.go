package pages

import "encoding/binary"

// dictionary numbers the distinct texts of a row group in the order of their
// first use. Its zero value is empty.
type dictionary struct {
	index    map[string]uint32
	plain    []byte // the texts, each after its length in four bytes
	last     string // the text asked for last
	lastAt   uint32
	low, top string // the smallest and the largest text
}

// at returns the number of a text, adding it when it is new.
func (d *dictionary) at(s string) uint32 {
	if len(d.index) > 0 && s == d.last {
		return d.lastAt
	}
	i, ok := d.index[s]
	if !ok {
		i = d.add(s)
	}
	d.last, d.lastAt = s, i
	return i
}

func (d *dictionary) add(s string) uint32 {
	if d.index == nil {
		d.index = make(map[string]uint32)
	}
	i := uint32(len(d.index))
	if i == 0 || s < d.low {
		d.low = s
	}
	if i == 0 || s > d.top {
		d.top = s
	}
	d.index[s] = i
	d.plain = binary.LittleEndian.AppendUint32(d.plain, uint32(len(s)))
	d.plain = append(d.plain, s...)
	return i
}

func (d *dictionary) reset() {
	clear(d.index)
	*d = dictionary{index: d.index, plain: d.plain[:0]}
}
