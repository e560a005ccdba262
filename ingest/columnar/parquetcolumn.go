package columnar

import (
	"io"
	"slices"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/format"
)

// parquetColumn decodes one column chunk after another. It holds the decoded
// values of a page and hands them out by rows.
type parquetColumn struct {
	leaf     int
	index    int // of the column in the file
	as       want
	kind     parquet.Kind
	unsigned bool
	list     bool
	max      byte // definition level of a value
	listed   byte // definition level of an element of a list, be it null

	pages pages
	ended bool   // the chunk is read
	known values // of the dictionary
	dense values // of the page, without nulls

	// Memory for decoding.
	floats  []float32
	doubles []float64
	ints    []int32
	longs   []int64

	held values // decoded, nulls included
	from int    // first of them not handed out
	ends []int  // of lists: where the elements of each row end
	null []bool
	row  int // first row not handed out
}

// open begins a column chunk of a row group of so many rows.
func (c *parquetColumn) open(file random, chunk *format.ColumnChunk, rows int64) error {
	c.ended = false
	c.known.reset()
	c.held.reset()
	c.ends, c.null, c.from, c.row = c.ends[:0], c.null[:0], 0, 0
	return c.pages.open(file, chunk, rows)
}

// ready returns how many rows can be taken, at least one. It returns io.EOF at
// the end of the chunk.
func (c *parquetColumn) ready() (int, error) {
	for {
		if n := c.rows() - c.row; n > 0 {
			return n, nil
		}
		if c.ended {
			return 0, io.EOF
		}
		if err := c.readPage(); err != nil {
			return 0, noEOF(err)
		}
	}
}

// rows returns how many whole rows are held. The last row of a page may go on
// in the next one (in data pages of version 1).
func (c *parquetColumn) rows() int {
	switch {
	case !c.list:
		return c.held.len()
	case c.ended:
		return len(c.ends)
	}
	return len(c.ends) - 1
}

// take hands out rows that are ready.
func (c *parquetColumn) take(rows int) vector {
	first := c.row
	c.row += rows
	if !c.list {
		return c.held.slice(c.as, first, c.row)
	}
	v := c.held.slice(c.as, 0, c.held.len())
	v.first, v.ends, v.null = c.from, c.ends[first:c.row], c.null[first:c.row]
	c.from = c.ends[c.row-1]
	return v
}

// readPage decodes one more page, and forgets what was handed out. At the end
// of the chunk it lets go of it.
func (c *parquetColumn) readPage() error {
	p, err := c.pages.next()
	if isEOF(err) {
		c.ended = true
		return nil
	}
	if err != nil {
		return err
	}
	c.dense.reset()
	if err := c.decode(p); err != nil || p.dictionary {
		return err
	}
	c.forget()
	return c.place(p.repetitions, p.definitions)
}

func (c *parquetColumn) forget() {
	if !c.list {
		c.held.reset()
		c.row = 0
		return
	}
	c.held.drop(c.as, c.from)
	c.ends = slices.Delete(c.ends, 0, c.row)
	c.null = slices.Delete(c.null, 0, c.row)
	for i := range c.ends {
		c.ends[i] -= c.from
	}
	c.from, c.row = 0, 0
}

// place puts the values of a page among its nulls, and into lists.
func (c *parquetColumn) place(repetitions, definitions []byte) error {
	had := c.held.len()
	switch n := c.dense.len(); {
	case n == len(definitions) || c.max == 0:
		if had == 0 {
			c.held, c.dense = c.dense, c.held
		} else {
			c.held.append(&c.dense)
		}
	default:
		if err := c.held.expand(c.as, &c.dense, definitions, c.listed, c.max); err != nil {
			return err
		}
	}
	if c.list {
		return c.placeRows(repetitions, definitions, had)
	}
	if c.max > 0 && c.held.len() != len(definitions) {
		return errLevels
	}
	return nil
}

// placeRows notes where the rows of a page of lists end: a repetition level of
// 0 begins a row; a definition level below that of an element is an empty list
// or, two below, a null one.
func (c *parquetColumn) placeRows(repetitions, definitions []byte, end int) error {
	if len(repetitions) != len(definitions) {
		return errLevels
	}
	for i, r := range repetitions {
		d := definitions[i]
		switch {
		case r == 0:
			c.ends, c.null = append(c.ends, end), append(c.null, d+1 < c.listed)
		case len(c.ends) == 0 || d < c.listed:
			return errLevels
		}
		if d >= c.listed {
			end++
			c.ends[len(c.ends)-1] = end
		}
	}
	if c.held.len() != end {
		return errLevels
	}
	return nil
}
