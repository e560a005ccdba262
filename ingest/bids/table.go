package bids

import (
	"bytes"
	"fmt"
	"io"
	"slices"
	"strings"

	"strandwise/ingest/delimited"
	"strandwise/ingest/fault"
)

// table is a file of rows below a header, of which some columns are read.
type table struct {
	file    string
	rows    *delimited.Rows
	columns []string
	at      []int // where each column stands, -1 for none
	width   int
	header  int      // line of the header
	cells   []string // of the row read last, by column; empty for n/a
	line    int      // of that row
}

// openTable reads the header of a table. Columns from the number required on
// may be missing.
func openTable(s *sidecar, columns []string, required int) (*table, error) {
	rows, err := delimited.NewRows(bytes.NewReader(s.data), s.file, '\t')
	if err != nil {
		return nil, err
	}
	t := &table{file: s.file, rows: rows, columns: columns, cells: make([]string, len(columns))}
	fields, line, err := rows.Text()
	switch {
	case err == io.EOF:
		return nil, &fault.Error{File: s.file, Problem: "is empty", Remedy: "write its header " + strings.Join(columns[:required], ", ")}
	case err != nil:
		return nil, err
	}
	t.header, t.width = line, len(fields)
	names := make([]string, len(fields))
	for i, f := range fields {
		names[i] = strings.TrimSpace(string(f))
		if names[i] != "" && slices.Contains(names[:i], names[i]) {
			return nil, t.fault(line, "", fmt.Sprintf("has two columns %q", names[i]), "rename or remove one of them")
		}
	}
	for i, column := range columns {
		t.at = append(t.at, slices.Index(names, column))
		if t.at[i] < 0 && i < required {
			return nil, t.fault(line, "", "has no column "+column, "add it, after a tab, to the header and to every row")
		}
	}
	return t, nil
}

func (t *table) fault(line int, channel, problem, remedy string) *fault.Error {
	return &fault.Error{File: t.file, Line: line, Channel: channel, Problem: problem, Remedy: remedy}
}

// next reads a row into t.cells. At the end it returns io.EOF.
func (t *table) next() error {
	fields, line, err := t.rows.Text()
	if err != nil {
		return err
	}
	if len(fields) != t.width {
		return t.fault(line, "", fmt.Sprintf("has %d fields where there are %d columns", len(fields), t.width), "repair the line; fields are separated by tabs, and n/a stands for no value")
	}
	t.line = line
	for i, at := range t.at {
		t.cells[i] = ""
		if at < 0 {
			continue
		}
		text := bytes.TrimSpace(fields[at])
		if what := unclean(text); what != "" {
			return t.fault(line, "", fmt.Sprintf("its %s %q %s", t.columns[i], text, what), "save the file as UTF-8 text, and repair the name")
		}
		if string(text) != "n/a" {
			t.cells[i] = string(text)
		}
	}
	return nil
}

// number returns a cell of the row as a number, and whether it holds one: 0
// when it does not.
func (t *table) number(column int) (v float64, ok bool, err error) {
	v, missing, err := delimited.Number([]byte(t.cells[column]))
	if err != nil {
		return 0, false, t.fault(t.line, "", fmt.Sprintf("its %s %v", t.columns[column], err), "write a number with a decimal point, or n/a")
	}
	if missing {
		return 0, false, nil
	}
	return v, true, nil
}
