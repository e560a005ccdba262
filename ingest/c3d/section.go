package c3d

import (
	"fmt"
	"strings"
)

// Byte offsets in the 4 bytes that begin the parameter section.
const (
	blockCountAt = 2
	orderAt      = 3
	sectionHead  = 4
)

// readParameters reads the parameter section, and with it the order of the
// file.
func (d *decoder) readParameters() error {
	first := int(d.head[parameterBlockAt])
	start := offsetOf(first)
	if err := d.skipTo(start, "its parameters"); err != nil {
		return err
	}
	var head [sectionHead]byte
	if err := d.need(head[:], "its parameters"); err != nil {
		return err
	}
	d.file.Order = Order(head[orderAt])
	if !d.file.Order.known() {
		return d.fault(start+orderAt, fmt.Sprintf("states the machine %d; known are 84 (Intel), 85 (DEC) and 86 (MIPS)", head[orderAt]), "export it again")
	}
	blocks, err := d.sectionBlocks(first, int(head[blockCountAt]))
	if err != nil {
		return err
	}
	section := make([]byte, blocks*block-sectionHead)
	if err := d.need(section, "its parameters"); err != nil {
		return err
	}
	s := sectionReader{decoder: d, base: start + sectionHead, groups: map[int]string{}}
	return s.read(section)
}

// sectionBlocks returns the length of the parameter section, which is at most
// 255 blocks. It ends where the data begins, whatever the count says.
func (d *decoder) sectionBlocks(first, count int) (int, error) {
	data := d.word(dataBlockAt)
	switch {
	case data == 0 && count == 0:
		return 0, d.fault(dataBlockAt, "does not say where its parameters end", "export it again")
	case data == 0:
		return count, nil
	case data <= first:
		return 0, d.contradiction(dataBlockAt, fmt.Sprintf("places its data in block %d, before the end of its parameters, which begin in block %d", data, first))
	case count == 0:
		return min(data-first, 255), nil
	}
	return min(data-first, count), nil
}

// sectionReader reads the records of the parameter section.
type sectionReader struct {
	*decoder
	base   int64          // offset of the section's first record in the file
	groups map[int]string // name of each group by its number
	owners []int          // number of the group of each parameter read
}

// read reads all records. Groups may be named after their parameters, so the
// parameters get the names of their groups last.
func (s *sectionReader) read(section []byte) error {
	at := 0
	for at < len(section) && section[at] != 0 {
		n, err := s.record(section[at:], s.base+int64(at))
		if err != nil {
			return err
		}
		if n == 0 {
			break
		}
		at += n
	}
	return s.resolve()
}

// record reads one group or parameter that stands at an offset of the file and
// returns the distance to the next, 0 after the last.
//
//	length of name (negative: locked), group number (negative: this is a
//	group), name, distance from here to the next record, contents
func (s *sectionReader) record(b []byte, offset int64) (int, error) {
	name := 2 + abs(b[0])
	if len(b) < name+2 {
		return 0, s.fault(offset, "holds a parameter that runs past the end of its section", "export it again")
	}
	next := int(s.file.Order.uint16(b[name:]))
	end := name + next
	switch {
	case next == 0:
		end = len(b)
	case next < 2 || end > len(b):
		return 0, s.fault(offset+int64(name), fmt.Sprintf("places the parameter after this one %d bytes on, outside their section", next), "export it again")
	}
	id, label := int(int8(b[1])), strings.ToUpper(text(b[2:name]))
	var err error
	switch {
	case id == 0 || !printable(b[2:name]):
		err = s.fault(offset, fmt.Sprintf("holds a parameter named %q of group %d", label, id), "export it again")
	case id < 0:
		err = s.group(-id, label, offset)
	default:
		err = s.parameter(id, label, b[name+2:end], offset+int64(name)+2)
	}
	if err != nil || next == 0 {
		return 0, err
	}
	return end, nil
}

func (s *sectionReader) group(id int, name string, offset int64) error {
	if known, ok := s.groups[id]; ok && known != name {
		return s.contradiction(offset, fmt.Sprintf("has two groups of number %d, %s and %s", id, known, name))
	}
	s.groups[id] = name
	return nil
}

// parameter reads the contents of a parameter:
//
//	type, number of dimensions, dimensions (a byte each), elements
func (s *sectionReader) parameter(id int, name string, b []byte, offset int64) error {
	cut := func() error {
		return s.fault(offset, fmt.Sprintf("holds too little for the parameter %s", name), "export it again")
	}
	if len(b) < 2 || len(b) < 2+int(b[1]) {
		return cut()
	}
	p := Parameter{Name: name, Type: Type(b[0]), Offset: offset + 2 + int64(b[1]), order: s.file.Order}
	if !p.Type.known() || b[1] > 7 {
		return s.fault(offset, fmt.Sprintf("gives the parameter %s the type %d and %d dimensions; there are the types -1, 1, 2, 4 and up to 7 dimensions", name, p.Type, b[1]), "export it again")
	}
	size := p.Type.size()
	for _, n := range b[2 : 2+b[1]] {
		p.Dims = append(p.Dims, int(n))
		size *= int64(n)
	}
	if b = b[2+b[1]:]; size > int64(len(b)) {
		return cut()
	}
	p.data = b[:size:size]
	s.file.Parameters = append(s.file.Parameters, p)
	s.owners = append(s.owners, id)
	return nil
}

// resolve names the groups of the parameters, and drops what is said twice.
func (s *sectionReader) resolve() error {
	var out Parameters
	at := map[[2]string]int{}
	for i, p := range s.file.Parameters {
		name, ok := s.groups[s.owners[i]]
		if !ok {
			s.Notice("has parameters of no group, which are left out", p.Name)
			continue
		}
		p.Group = name
		known, again := at[[2]string{name, p.Name}]
		switch {
		case !again:
			at[[2]string{name, p.Name}] = len(out)
			out = append(out, p)
		case !out[known].same(&p):
			return s.contradiction(p.Offset, fmt.Sprintf("states %s:%s twice, and differently", name, p.Name))
		}
	}
	s.file.Parameters = out
	return nil
}

func abs(b byte) int {
	n := int(int8(b))
	return max(n, -n)
}

func printable(name []byte) bool {
	for _, c := range name {
		if c < ' ' || c > '~' {
			return false
		}
	}
	return true
}
