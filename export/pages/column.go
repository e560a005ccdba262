package pages

import (
	"encoding/binary"
	"math"
)

// Kind is the type of a column.
type Kind uint8

// The kinds of column.
const (
	Text        Kind = iota // UTF-8 text
	Int32                   // 32-bit whole number
	Float64                 // 64-bit float
	Float32                 // 32-bit float
	Float32List             // list of 32-bit floats
	Int16List               // list of 16-bit whole numbers, each filled in as four bytes
)

// list reports whether rows of the kind hold lists.
func (k Kind) list() bool { return k == Float32List || k == Int16List }

// Column describes one column of a file. Only a flat column may be optional:
// a list without elements is an empty list.
type Column struct {
	Name     string
	Kind     Kind
	Optional bool // may hold nulls
}

// PageBytes is the size at which a page is cut: large enough for headers not
// to matter, small enough to be decoded in a processor's second-level cache.
const PageBytes = 1 << 20

// column is the state of one column while a row group fills: the page in the
// making, and the finished pages of the row group.
type column struct {
	Column
	width int // bytes per number, 0 for text

	// The page in the making.
	values      []byte // plain values
	indexes     runs   // indexes into the dictionary, text only
	repetitions runs   // 0 begins a list, 1 continues it
	definitions runs   // 1 is a value, 0 a null or an empty list
	entries     int    // values, nulls and empty lists
	missing     int    // nulls and empty lists among them

	// The row group.
	dictionary dictionary
	finished   []byte // data pages with their headers
	bounds     bounds
	rows       int64
	numValues  int64 // entries of the finished pages
	nulls      int64
	plainSize  int64 // finished pages and headers, before compression
}

func newColumn(c Column) *column {
	width := map[Kind]int{Int32: 4, Float64: 8, Float32: 4, Float32List: 4, Int16List: 4}
	return &column{Column: c, width: width[c.Kind]}
}

// full reports whether the page in the making should be cut. Text and nulls
// take no room while they repeat, so their number counts too.
func (c *column) full() bool {
	levels := 8 * (len(c.indexes) + len(c.repetitions) + len(c.definitions))
	return len(c.values)+levels >= PageBytes || c.entries >= PageBytes
}

// extend appends room for n numbers to the page and returns it.
func (c *column) extend(n int) []byte {
	from := len(c.values)
	need := from + n*c.width
	if need > cap(c.values) {
		grown := make([]byte, from, max(need, 2*cap(c.values)))
		copy(grown, c.values)
		c.values = grown
	}
	c.values = c.values[:need]
	return c.values[from:need:need]
}

// present records n flat values in n rows.
func (c *column) present(n int) {
	if c.Optional {
		c.definitions.add(1, n)
	}
	c.entries += n
	c.rows += int64(n)
}

// absent records n nulls in n rows.
func (c *column) absent(n int) {
	c.definitions.add(0, n)
	c.entries += n
	c.missing += n
	c.rows += int64(n)
}

// list records one row holding a list of n elements. An empty list has one
// entry of its own.
func (c *column) list(n int) {
	c.repetitions.add(0, 1)
	if n == 0 {
		c.definitions.add(0, 1)
		c.missing++
	} else {
		c.repetitions.add(1, n-1)
		c.definitions.add(1, n)
	}
	c.entries += max(n, 1)
	c.rows++
}

// reset empties the column for the next row group, keeping its memory.
func (c *column) reset() {
	c.dictionary.reset()
	c.finished = c.finished[:0]
	c.bounds = bounds{}
	c.rows, c.numValues, c.nulls, c.plainSize = 0, 0, 0, 0
}

func putFloat64(b []byte, v float64) { binary.LittleEndian.PutUint64(b, math.Float64bits(v)) }
func putInt32(b []byte, v int32)     { binary.LittleEndian.PutUint32(b, uint32(v)) }
