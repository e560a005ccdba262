package columnar

import (
	"encoding/binary"
	"errors"
)

// Descriptions of messages are FlatBuffers. The library allocates by the
// lengths it finds in them and follows their offsets wherever they lead, so
// they are checked first: every list lies within the message, and no field
// lies within itself. Field numbers are those of the Arrow specification
// (Message.fbs and Schema.fbs).

var errMessage = errors.New("a message that describes nothing sound")

const (
	maxDepth  = 64      // of fields within fields; the library's own limit
	maxFields = 1 << 16 // in all
)

// flatTable is a table of a FlatBuffers message. Its methods panic where an
// offset leads out of the data.
type flatTable struct {
	data  []byte
	pos   int
	slots int // where the list begins that tells where each field lies
}

func u16(data []byte, pos int) int { return int(binary.LittleEndian.Uint16(data[pos:])) }
func u32(data []byte, pos int) int { return int(binary.LittleEndian.Uint32(data[pos:])) }

// tableAt returns the table at a position.
func tableAt(data []byte, pos int) flatTable {
	return flatTable{data, pos, pos - int(int32(u32(data, pos)))}
}

// field returns the position of a field, 0 when the table lacks it.
func (t flatTable) field(n int) int {
	slot := 4 + 2*n
	if slot >= u16(t.data, t.slots) {
		return 0
	}
	if off := u16(t.data, t.slots+slot); off > 0 {
		return t.pos + off
	}
	return 0
}

// table returns the table a field refers to.
func (t flatTable) table(n int) (flatTable, bool) {
	at := t.field(n)
	if at == 0 {
		return flatTable{}, false
	}
	return tableAt(t.data, at+u32(t.data, at)), true
}

// list returns where the elements of a list begin, and their number.
func (t flatTable) list(n, size int) (first, length int) {
	at := t.field(n)
	if at == 0 {
		return 0, 0
	}
	at += u32(t.data, at)
	length = u32(t.data, at)
	_ = t.data[at+4 : at+4+length*size]
	return at + 4, length
}

func (t flatTable) int64(n int) int64 {
	at := t.field(n)
	if at == 0 {
		return 0
	}
	return int64(binary.LittleEndian.Uint64(t.data[at:]))
}

// Kinds of message.
const (
	schemaMessage     = 1
	dictionaryMessage = 2
	batchMessage      = 3
)

// checkMessage checks the description of a message and returns the length of
// the body that follows it.
func checkMessage(about []byte) (body int64, err error) {
	defer func() {
		if recover() != nil {
			err = errMessage
		}
	}()
	t := tableAt(about, u32(about, 0))
	header, ok := t.table(2)
	kind := t.field(1)
	if !ok || kind == 0 {
		return 0, errMessage
	}
	switch about[kind] {
	case schemaMessage:
		left := maxFields
		err = checkFields(header, 1, maxDepth, &left)
		header.list(2, 4)
	case dictionaryMessage:
		if header, ok = header.table(1); !ok {
			return 0, errMessage
		}
		err = checkBatch(header)
	case batchMessage:
		err = checkBatch(header)
	default:
		err = errMessage
	}
	if body = t.int64(3); body < 0 {
		err = errMessage
	}
	return body, err
}

// checkFields checks a list of fields, and those within them.
func checkFields(t flatTable, n, depth int, left *int) error {
	first, length := t.list(n, 4)
	if *left -= length; *left < 0 || depth == 0 {
		return errMessage
	}
	for i := range length {
		at := first + 4*i
		field := tableAt(t.data, at+u32(t.data, at))
		field.list(6, 4)
		if err := checkFields(field, 5, depth-1, left); err != nil {
			return err
		}
	}
	return nil
}

// checkBatch checks the lengths in a batch.
func checkBatch(t flatTable) error {
	nodes, n := t.list(1, 16)
	for i := range n {
		if int64(binary.LittleEndian.Uint64(t.data[nodes+16*i:])) < 0 {
			return errMessage
		}
	}
	_, buffers := t.list(2, 16)
	first, n := t.list(4, 8)
	for i := range n {
		if binary.LittleEndian.Uint64(t.data[first+8*i:]) > uint64(buffers) {
			return errMessage
		}
	}
	return nil
}
