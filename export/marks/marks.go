package marks

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
)

// Name is the name of the file of marks in the folder of a set.
const Name = "marks.csv"

// Mark is what a person said of a take.
type Mark string

// The marks. None is a take that has no mark, or none any more.
const (
	None Mark = "none"
	Drop Mark = "drop"
	Keep Mark = "keep"
)

// Parse reads the name of a mark. The error lists the legal ones.
func Parse(name string) (Mark, error) {
	switch m := Mark(name); m {
	case None, Drop, Keep:
		return m, nil
	}
	return None, fmt.Errorf("unknown mark %q; legal marks are drop, keep and none", name)
}

// Read returns the marks of the set in a folder by the ids of the takes, without
// those that are none. A set that nobody marked has none. The error names the
// line of the file that cannot be understood.
func Read(dir string) (map[string]Mark, error) {
	h, err := load(filepath.Join(dir, Name))
	if err != nil {
		return nil, err
	}
	return h.marks, nil
}

// load reads a file of marks; one that is not there has none.
func load(path string) (*history, error) {
	data, err := os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) {
		return newHistory(), nil
	}
	if err != nil {
		return nil, err
	}
	h, err := replay(data)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	return h, nil
}
