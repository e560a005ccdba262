package export

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/parquet-go/parquet-go"
)

// isDescription reports whether a name is that of a file that describes the set.
func isDescription(name string) bool { return name == cardName || name == croissantName }

// Describe states what the card of the set is to say beside what the set knows
// of itself, before Note or Seal. A later call replaces it; without one CARD.md
// says less. What the buckets tallied under the name of a gate is added to the
// takes it refused.
func (w *Writer) Describe(c Card) { w.card = c }

// describe writes the files that describe the set, of whose tables all files are
// in place, and adds them to the files of the manifest.
func (s state) describe(m *Manifest, c Card) error {
	windows, err := readWindows(s.dir, m.Files)
	if err != nil {
		return err
	}
	c.Gates = slices.Clone(c.Gates)
	for i, g := range c.Gates {
		c.Gates[i].Refused += m.Tallies[g.Name]
	}
	if err := s.addFile(m, cardName, c.write(m, windows)); err != nil {
		return err
	}
	catalogue, err := croissant(m, windows)
	if err != nil {
		return err
	}
	return s.addFile(m, croissantName, catalogue)
}

// addFile writes a file of the set's own that is no table.
func (s state) addFile(m *Manifest, name string, data []byte) error {
	err := writeFile(s.disk, s.path(name), data)
	if err == nil {
		m.Files = append(m.Files, describe(name, data))
		m.sortFiles()
	}
	return err
}

// readWindows returns what the files of the table windows say of themselves,
// with the saturated values of all of them, or nil when there are none.
func readWindows(dir string, files []File) (*WindowsLayout, error) {
	var all *WindowsLayout
	for _, f := range files {
		if !strings.HasPrefix(f.Path, string(Windows)+"/") {
			continue
		}
		one, err := readWindowsFile(filepath.Join(dir, filepath.FromSlash(f.Path)), f.Bytes)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", f.Path, err)
		}
		if all == nil {
			all = one
			continue
		}
		if len(one.Scales) != len(all.Scales) {
			return nil, fmt.Errorf("%s: metadata %s: %d scales, other files have %d", f.Path, WindowsKey, len(one.Scales), len(all.Scales))
		}
		for c := range all.Scales {
			all.Scales[c].Saturated += one.Scales[c].Saturated
		}
	}
	return all, nil
}

func readWindowsFile(path string, size int64) (*WindowsLayout, error) {
	file, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	p, err := parquet.OpenFile(file, size, parquet.SkipBloomFilters(true), parquet.SkipPageIndex(true))
	if err != nil {
		return nil, err
	}
	return windowsLayout(p)
}
