package puppets

import (
	"fmt"
	"os"
	"path/filepath"
	"strconv"

	"strandwise/channels"
)

// Pattern says what the paths that [WriteCSV] writes stand for. No subject,
// label, session or take number holds an underscore, so it is read in one way.
const Pattern = "{subject}/{label}_{session}_{take}.csv"

// WriteCSV writes the takes of [Takes] into the folder dir, one file each, at
// the paths of [Pattern], making folders as needed and replacing files of those
// names. A file has a header, time_s and the channel names with their units,
// and one line per frame: time in seconds to four decimals, readings in SI
// units to five. It returns the paths written, sorted. After an error some
// files may be missing or cut short.
func WriteCSV(dir string, seed uint64) ([]string, error) {
	var paths []string
	for t, err := range Takes(seed) {
		if err != nil {
			return paths, err
		}
		path := filepath.Join(dir, filepath.FromSlash(t.ID)+".csv")
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			return paths, fmt.Errorf("make folder: %w", err)
		}
		if err := os.WriteFile(path, appendCSV(nil, t), 0o666); err != nil {
			return paths, fmt.Errorf("write recording: %w", err)
		}
		paths = append(paths, path)
	}
	return paths, nil
}

// appendCSV appends the take as CSV text.
func appendCSV(dst []byte, t *channels.Take) []byte {
	dst = append(dst, "time_s"...)
	for _, c := range t.Layout.Channels {
		dst = fmt.Appendf(dst, ",%s [%s]", c.Name, c.Unit)
	}
	dst = append(dst, '\n')
	for i, s := range t.Time {
		dst = strconv.AppendFloat(dst, s, 'f', 4, 64)
		for _, v := range t.Frame(i) {
			dst = append(dst, ',')
			dst = strconv.AppendFloat(dst, v, 'f', 5, 64)
		}
		dst = append(dst, '\n')
	}
	return dst
}
