package main

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"reflect"
	"slices"
)

// facts is what one reader found in one set or stream. Readers that see the same
// set find equal facts.
type facts struct {
	Reader   string                       `json:"reader"`
	Tables   map[string]*table            `json:"tables"`
	Metadata map[string]map[string]string `json:"metadata"` // by table and key; empty for readers that show none
}

// table is what was found in one table.
type table struct {
	Rows    int64              `json:"rows"`
	Counts  map[string]int64   `json:"counts"`  // rows by split, label and origin (of frames by split), joined by |
	Numbers map[string]int64   `json:"numbers"` // how many values each column of numbers or lists holds
	Sums    map[string]float64 `json:"sums"`    // of those values
	Types   map[string]string  `json:"types"`   // as the reader names them; shown, not compared
}

func newTable() *table {
	return &table{Counts: map[string]int64{}, Numbers: map[string]int64{}, Sums: map[string]float64{}, Types: map[string]string{}}
}

// tolerance of two sums of 64-bit floats in different order, relative to the
// number of values, whose size is of the order of one to a hundred.
const tolerance = 1e-9

// differences lists how two readers' facts differ, in the tables and metadata
// that both have.
func (f *facts) differences(other *facts) []string {
	var out []string
	for name, t := range f.Tables {
		if o := other.Tables[name]; o != nil {
			out = append(out, t.differences(name, o)...)
		}
	}
	for name, mine := range f.Metadata {
		for key, text := range mine {
			if theirs := other.Metadata[name]; theirs != nil && !sameMetadata(text, theirs[key]) {
				out = append(out, fmt.Sprintf("%s: metadata %s differ:\n  %.300s\n  %.300s", name, key, text, theirs[key]))
			}
		}
	}
	slices.Sort(out)
	return out
}

// sameMetadata compares two JSON objects. A frame rate that one of them does not
// know, as a stream does not beforehand, may differ.
func sameMetadata(a, b string) bool {
	var one, two map[string]any
	if json.Unmarshal([]byte(a), &one) != nil || json.Unmarshal([]byte(b), &two) != nil {
		return false
	}
	if one["rate_hz"] == nil || two["rate_hz"] == nil {
		delete(one, "rate_hz")
		delete(two, "rate_hz")
	}
	return reflect.DeepEqual(one, two)
}

func (t *table) differences(name string, o *table) []string {
	var out []string
	if t.Rows != o.Rows || t.Rows == 0 {
		out = append(out, fmt.Sprintf("%s: %d rows and %d", name, t.Rows, o.Rows))
	}
	for _, m := range []struct {
		what string
		a, b map[string]int64
	}{{"rows of", t.Counts, o.Counts}, {"values of", t.Numbers, o.Numbers}} {
		for key := range m.a {
			if m.a[key] != m.b[key] {
				out = append(out, fmt.Sprintf("%s: %s %s: %d and %d", name, m.what, key, m.a[key], m.b[key]))
			}
		}
		if len(m.a) != len(m.b) {
			out = append(out, fmt.Sprintf("%s: %s %d keys and %d", name, m.what, len(m.a), len(m.b)))
		}
	}
	for key := range t.Sums {
		if math.Abs(t.Sums[key]-o.Sums[key]) > tolerance*float64(1+t.Numbers[key]) {
			out = append(out, fmt.Sprintf("%s: sum of %s: %v and %v", name, key, t.Sums[key], o.Sums[key]))
		}
	}
	return out
}

func readFacts(path string) (*facts, error) {
	text, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	var f facts
	if err := json.Unmarshal(text, &f); err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	return &f, nil
}

// compare holds the facts of all files against those of the first.
func compare(paths []string) error {
	first, err := readFacts(paths[0])
	if err != nil {
		return err
	}
	wrong := 0
	for _, path := range paths[1:] {
		f, err := readFacts(path)
		if err != nil {
			return err
		}
		if len(f.Tables) == 0 {
			return fmt.Errorf("%s found no table", f.Reader)
		}
		found := f.differences(first)
		for _, d := range found {
			fmt.Printf("%s against %s: %s\n", f.Reader, first.Reader, d)
		}
		wrong += len(found)
		if len(found) == 0 {
			fmt.Printf("%s agrees with %s:", f.Reader, first.Reader)
			for _, name := range slices.Sorted(keysOf(f.Tables)) {
				fmt.Printf(" %s %d rows of %d columns of numbers;", name, f.Tables[name].Rows, len(f.Tables[name].Sums))
			}
			fmt.Printf(" %d metadata\n", len(f.Metadata))
		}
	}
	if wrong > 0 {
		return fmt.Errorf("%d differences", wrong)
	}
	return nil
}
