package cut_test

import (
	"encoding/csv"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"
)

// openData returns the folder of open recordings, or skips the test.
func openData(t testing.TB) string {
	t.Helper()
	dir := os.Getenv("STRANDWISE_DATA")
	if dir == "" {
		root, err := os.Getwd()
		if err != nil {
			t.Fatal(err)
		}
		for root != filepath.Dir(root) {
			if _, err := os.Stat(filepath.Join(root, "go.mod")); err == nil {
				break
			}
			root = filepath.Dir(root)
		}
		dir = filepath.Join(filepath.Dir(root), "shared", "data")
	}
	if _, err := os.Stat(dir); err != nil {
		t.Skipf("the open recordings are not here: %v", err)
	}
	return dir
}

// take is one take of an open set.
type take struct {
	name, label, subject string
	data                 []float64
}

// set reads an open set, training and test takes, and its number of channels.
func set(t testing.TB, name string) (takes []take, width int) {
	t.Helper()
	dir := openData(t)
	for _, part := range []string{"train.csv", "test.csv"} {
		f, err := os.Open(filepath.Join(dir, "sets", name, part))
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		rows, err := csv.NewReader(f).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		first := slices.Index(rows[0], "c0")
		width = len(rows[0]) - first
		for _, row := range rows[1:] {
			if n := len(takes); n == 0 || takes[n-1].name != row[0] {
				takes = append(takes, take{name: row[0], label: row[1], subject: row[2]})
			}
			last := &takes[len(takes)-1]
			for _, text := range row[first:] {
				v, err := strconv.ParseFloat(text, 64)
				if err != nil {
					t.Fatal(err)
				}
				last.data = append(last.data, v)
			}
		}
	}
	return takes, width
}
