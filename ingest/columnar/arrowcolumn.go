package columnar

import (
	"errors"
	"fmt"
	"math"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/array"
)

// elements stands in a path for the elements of a list.
const elements = -1

// arrowColumn is one leaf of a schema, and its values in the batch at hand.
type arrowColumn struct {
	leaf
	path []int // fields of structures, and elements
	at   int   // position of the leaf
	as   want

	above  []arrow.Array  // structures that hold the list, or the values
	lists  array.ListLike // nil for none
	within []arrow.Array  // structures in the list that hold the values
	array  arrow.Array
	known  *values         // of the array's dictionary
	of     arrow.ArrayData // the dictionary they are of

	values values
	ends   []int
	null   []bool
}

// open finds the arrays of the column in a batch.
func (c *arrowColumn) open(batch arrow.Record) error {
	c.above, c.lists, c.within = c.above[:0], nil, c.within[:0]
	c.array = stored(batch.Column(c.path[0]))
	for _, step := range c.path[1:] {
		if step == elements {
			lists, ok := c.array.(array.ListLike)
			if !ok {
				return errors.New("no list where one should be")
			}
			c.lists, c.array = lists, stored(lists.ListValues())
			continue
		}
		s, ok := c.array.(*array.Struct)
		if !ok {
			return errors.New("no structure where one should be")
		}
		if c.lists == nil {
			c.above = append(c.above, s)
		} else {
			c.within = append(c.within, s)
		}
		c.array = stored(s.Field(step))
	}
	return c.openDictionary()
}

// stored returns the array in which one of an extension type is stored.
func stored(a arrow.Array) arrow.Array {
	if e, ok := a.(array.ExtensionArray); ok {
		return e.Storage()
	}
	return a
}

// openDictionary reads the dictionary of the array, unless it is the one of
// the batch before.
func (c *arrowColumn) openDictionary() error {
	d, ok := c.array.(*array.Dictionary)
	if !ok {
		return nil
	}
	if dictionary := d.Dictionary(); c.known == nil || c.of != dictionary.Data() {
		c.known, c.of = &values{}, dictionary.Data()
		dictionary = stored(dictionary)
		if err := appendArray(c.known, c.as, dictionary, 0, dictionary.Len()); err != nil {
			return err
		}
		c.known.hideNulls(c.as, 0, dictionary, 0)
	}
	return nil
}

// vector returns the values in some rows of the batch.
func (c *arrowColumn) vector(from, to int) (vector, error) {
	c.values.reset()
	if c.lists == nil {
		if err := c.read(from, to, c.above); err != nil {
			return vector{}, err
		}
		return c.values.slice(c.as, 0, to-from), nil
	}
	c.ends, c.null = c.ends[:0], c.null[:0]
	for row := from; row < to; row++ {
		null := c.lists.IsNull(row) || anyNull(c.above, row)
		if !null {
			first, end := c.lists.ValueOffsets(row)
			if first < 0 || end < first || end > int64(c.array.Len()) {
				return vector{}, errors.New("a list beyond its values")
			}
			if err := c.read(int(first), int(end), c.within); err != nil {
				return vector{}, err
			}
		}
		c.ends, c.null = append(c.ends, c.values.len()), append(c.null, null)
	}
	v := c.values.slice(c.as, 0, c.values.len())
	v.ends, v.null = c.ends, c.null
	return v, nil
}

func anyNull(arrays []arrow.Array, i int) bool {
	for _, a := range arrays {
		if a.IsNull(i) {
			return true
		}
	}
	return false
}

// read appends values of the array, missing where it or what holds it is null.
func (c *arrowColumn) read(from, to int, holders []arrow.Array) error {
	had := c.values.len()
	if d, ok := c.array.(*array.Dictionary); ok {
		if err := c.lookUp(d, from, to); err != nil {
			return err
		}
	} else if err := appendArray(&c.values, c.as, c.array, from, to); err != nil {
		return err
	}
	if c.values.len() != had+to-from {
		return errors.New("fewer values than rows")
	}
	c.values.hideNulls(c.as, had, c.array, from)
	for _, h := range holders {
		c.values.hideNulls(c.as, had, h, from)
	}
	return nil
}

func (c *arrowColumn) lookUp(d *array.Dictionary, from, to int) error {
	for i := from; i < to; i++ {
		index := -1
		if !d.IsNull(i) {
			if index = d.GetValueIndex(i); index < 0 || index >= c.known.len() {
				return errIndex
			}
		}
		switch c.as {
		case floats:
			c.values.floats = append(c.values.floats, at(c.known.floats, index))
		case whole:
			c.values.whole = append(c.values.whole, at(c.known.whole, index))
		case texts:
			c.values.texts = append(c.values.texts, at(c.known.texts, index))
		}
	}
	return nil
}

// at returns an element, or zero, to be hidden, for a null's index.
func at[T any](list []T, index int) (v T) {
	if index >= 0 {
		v = list[index]
	}
	return v
}

// hideNulls makes the values from a position on missing that an array says are
// null, the first of them being element i of it.
func (v *values) hideNulls(as want, from int, a arrow.Array, i int) {
	if a.NullN() == 0 {
		return
	}
	for at := from; at < v.len(); at, i = at+1, i+1 {
		if !a.IsNull(i) {
			continue
		}
		switch as {
		case floats:
			v.floats[at] = math.NaN()
		case whole:
			v.whole[at] = noInstant
		case texts:
			v.texts[at] = ""
		}
	}
}

// appendArray appends values of an array, null ones as they come.
func appendArray(dst *values, as want, a arrow.Array, from, to int) error {
	switch a := a.(type) {
	case *array.Float32:
		return appendNumbers(dst, as, a.Float32Values()[from:to])
	case *array.Float64:
		return appendNumbers(dst, as, a.Float64Values()[from:to])
	case *array.Float16:
		for _, v := range a.Values()[from:to] {
			if err := appendNumbers(dst, as, []float32{v.Float32()}); err != nil {
				return err
			}
		}
		return nil
	case *array.Int8:
		return appendWhole(dst, as, a.Int8Values()[from:to])
	case *array.Int16:
		return appendWhole(dst, as, a.Int16Values()[from:to])
	case *array.Int32:
		return appendWhole(dst, as, a.Int32Values()[from:to])
	case *array.Int64:
		return appendWhole(dst, as, a.Int64Values()[from:to])
	case *array.Uint8:
		return appendWhole(dst, as, a.Uint8Values()[from:to])
	case *array.Uint16:
		return appendWhole(dst, as, a.Uint16Values()[from:to])
	case *array.Uint32:
		return appendWhole(dst, as, a.Uint32Values()[from:to])
	case *array.Uint64:
		return appendWhole(dst, as, a.Uint64Values()[from:to])
	case *array.Timestamp:
		return appendWhole(dst, as, a.TimestampValues()[from:to])
	case *array.Duration:
		return appendWhole(dst, as, a.DurationValues()[from:to])
	case *array.Time32:
		return appendWhole(dst, as, a.Time32Values()[from:to])
	case *array.Time64:
		return appendWhole(dst, as, a.Time64Values()[from:to])
	case array.StringLike:
		if as != texts {
			return errors.New("text where numbers belong")
		}
		for i := from; i < to; i++ {
			dst.texts = append(dst.texts, a.Value(i))
		}
		return nil
	}
	return fmt.Errorf("values of type %s where others belong", a.DataType().Name())
}
