package columnar

import (
	"errors"
	"fmt"
	"math"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// kind is what a column holds.
type kind int

const (
	other   kind = iota // nothing that a take has a place for
	number              // floats
	integer             // whole numbers
	instant             // whole numbers on a clock: time stamps, times of day, durations
	text
)

// leaf is one column of a table, or of a structure within it.
type leaf struct {
	name string // parts of a nested column joined by dots
	kind kind
	list bool   // each row holds a list of values
	unit string // as the metadata state it; of an instant s, ms, us or ns
	what string // of other: what it holds, for the notice
}

// want is the form in which the values of a column are asked for.
type want int

const (
	floats want = iota + 1
	whole       // integers and instants, exactly
	texts       // text and numbers
)

// noInstant stands for a missing whole value. Some writers use it as such
// themselves.
const noInstant = math.MinInt64

// vector is the values of one column in some rows. One of its three slices is
// in use.
type vector struct {
	floats []float64 // NaN where a value is missing
	whole  []int64   // noInstant where a value is missing
	texts  []string  // empty where a value is missing; valid until the next rows

	// Of lists: the elements of row i end at ends[i] and begin where those of
	// the row before end, or at first. A null row has no elements.
	first int
	ends  []int
	null  []bool
}

// span returns where the elements of a row begin and end.
func (v *vector) span(row int) (from, to int) {
	if v.null[row] {
		return 0, 0
	}
	if row == 0 {
		return v.first, v.ends[0]
	}
	return v.ends[row-1], v.ends[row]
}

// source is a table being read.
type source interface {
	// leaves lists the columns.
	leaves() []leaf

	// metadata returns what the file states under a key, empty for nothing.
	metadata(key string) string

	// use says that a column will be read, and in which form. It is called
	// before the first next.
	use(leaf int, as want)

	// next reads some rows, at most n, and returns their number and the
	// vectors of the columns in use by leaf, valid until the next call. It
	// returns io.EOF when there are no more.
	next(n int) (rows int, columns []vector, err error)

	close()
}

// guard runs what calls a decoding library, and turns its panics and errors
// into faults of the file. io.EOF is passed on.
func guard(in raw.Input, do func() error) (err error) {
	defer func() {
		if r := recover(); r != nil {
			err = damaged(in, fmt.Errorf("%v", r))
		}
	}()
	return damaged(in, do())
}

// damaged makes an error of reading a fault, unless it is io.EOF or comes of
// one.
func damaged(in raw.Input, err error) error {
	var known *fault.Error
	switch {
	case err == nil || isEOF(err):
		return err
	case errors.As(err, &known):
		return known
	}
	return &fault.Error{File: in.Name, Problem: "is a Parquet or Arrow file that is damaged or cut short", Err: err, Remedy: "copy or write it again"}
}
