package bids

import (
	"bytes"
	"errors"
	"io/fs"
	"iter"
	"path/filepath"
	"slices"
	"unicode"
	"unicode/utf8"
)

// sidecar is a file that describes a recording.
type sidecar struct {
	file string // for messages
	data []byte
}

// nearest returns the file that is nearest to the recording, and then the most
// specific, nil when there is none.
func (c *recording) nearest(suffix, ext string) (*sidecar, error) {
	for s, err := range c.sidecars(suffix, ext) {
		return s, err
	}
	return nil, nil
}

// sidecars yields all files that describe the recording, the nearest and most
// specific first. An error ends them.
func (c *recording) sidecars(suffix, ext string) iter.Seq2[*sidecar, error] {
	return func(yield func(*sidecar, error) bool) {
		names := c.name.applicable(suffix, ext)
		for _, folder := range c.folders {
			for _, name := range names {
				data, err := c.in.Beside(folder + name)
				switch {
				case errors.Is(err, fs.ErrNotExist):
					continue
				case err != nil:
					yield(nil, err)
					return
				}
				file := filepath.Join(filepath.Dir(c.in.Name), folder+name)
				if !yield(&sidecar{file, data}, nil) {
					return
				}
			}
		}
	}
}

// line returns the line on which the byte at this place stands.
func (s *sidecar) line(at int) int {
	return 1 + bytes.Count(s.data[:min(max(at, 0), len(s.data))], []byte{'\n'})
}

// unclean says what makes a text unfit as a name, empty when nothing does.
func unclean(text []byte) string {
	switch {
	case !utf8.Valid(text):
		return "is not valid UTF-8"
	case slices.ContainsFunc([]rune(string(text)), unicode.IsControl):
		return "holds control characters"
	}
	return ""
}
