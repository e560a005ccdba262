package body_test

import (
	"os"
	"path/filepath"
	"testing"

	"strandwise/channels"
	"strandwise/ingest/raw"
	"strandwise/testdata/opendata"
)

// openTake reads the one take of an open motion file.
func openTake(t testing.TB, f raw.Format, path ...string) *raw.Take {
	t.Helper()
	file, err := os.Open(filepath.Join(opendata.Path(t, path[0]), path[1]))
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	for take, err := range f.Read(file, raw.Input{Name: path[1]}) {
		if err != nil {
			t.Fatal(err)
		}
		return take
	}
	t.Fatalf("%s holds no take", path[1])
	return nil
}

// placesOf returns the names and places of the tracked points of a take.
func placesOf(take *raw.Take) (names []string, places []float64) {
	var list []int
	for i, c := range take.Layout.Columns {
		if c.Channel.Quantity == channels.Position {
			list = append(list, i)
			if c.Channel.Component == "x" {
				names = append(names, c.Channel.TrackedPoint)
			}
		}
	}
	w := len(take.Layout.Columns)
	for f := range take.Time {
		for _, i := range list {
			places = append(places, take.Data[f*w+i])
		}
	}
	return names, places
}
