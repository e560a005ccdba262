// Package opendata finds and reads the open recordings that tests hold the
// program against. They are read in place and are no part of the project.
package opendata

import (
	"encoding/csv"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"strandwise/channels"
)

// Path returns the path of a file or folder of the open recordings. Their
// folder is named by the environment variable STRANDWISE_DATA; without it, it
// is ../shared/data beside the project. Where it is not there, the test is
// skipped.
func Path(t testing.TB, parts ...string) string {
	t.Helper()
	if !Here(t) {
		t.Skip("skipped: the open recordings are not there; name their folder in STRANDWISE_DATA")
	}
	return filepath.Join(append([]string{folder(t)}, parts...)...)
}

// Here tells whether the open recordings are there.
func Here(t testing.TB) bool {
	t.Helper()
	_, err := os.Stat(folder(t))
	return err == nil
}

func folder(t testing.TB) string {
	if dir := os.Getenv("STRANDWISE_DATA"); dir != "" {
		return dir
	}
	return filepath.Join(filepath.Dir(root(t)), "shared", "data")
}

// root returns the folder of the project.
func root(t testing.TB) string {
	t.Helper()
	at, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	for dir := at; dir != filepath.Dir(dir); dir = filepath.Dir(dir) {
		if _, err := os.Stat(filepath.Join(dir, "go.mod")); err == nil {
			return dir
		}
	}
	t.Fatalf("no go.mod in %s or above", at)
	return ""
}

// Set reads an open set by its name: its training takes and then its test
// takes, on a clock of one frame a second, their numbers as the files have
// them. The channels have no quantity and are in no group.
func Set(t testing.TB, name string) []*channels.Take {
	t.Helper()
	var takes []*channels.Take
	for _, part := range []string{"train.csv", "test.csv"} {
		f, err := os.Open(Path(t, "sets", name, part))
		if err != nil {
			t.Fatal(err)
		}
		rows, err := csv.NewReader(f).ReadAll()
		f.Close()
		if err == nil {
			takes, err = appendTakes(takes, rows)
		}
		if err != nil {
			t.Fatalf("%s/%s: %v", name, part, err)
		}
	}
	return takes
}

// appendTakes reads the rows of one file: take, label, subject, split, frame,
// and one column per channel.
func appendTakes(takes []*channels.Take, rows [][]string) ([]*channels.Take, error) {
	const first = 5
	layout := &channels.Layout{}
	if len(takes) > 0 {
		layout = takes[0].Layout
	} else {
		for _, name := range rows[0][first:] {
			layout.Channels = append(layout.Channels, channels.Channel{Name: name, Quantity: channels.Misc})
		}
	}
	for _, row := range rows[1:] {
		if n := len(takes); n == 0 || takes[n-1].ID != row[0] {
			takes = append(takes, &channels.Take{ID: row[0], Label: row[1], Subject: row[2], Split: channels.Split(row[3]), Layout: layout})
		}
		t := takes[len(takes)-1]
		t.Time = append(t.Time, float64(len(t.Time)))
		for _, text := range row[first:] {
			v, err := strconv.ParseFloat(text, 64)
			if err != nil {
				return nil, err
			}
			t.Data = append(t.Data, v)
		}
	}
	return takes, nil
}
