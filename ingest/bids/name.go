package bids

import (
	"math/bits"
	"path/filepath"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"
)

// name is the name of a file as BIDS builds it: entities, a suffix and an
// extension.
type name struct {
	entities []entity // in the order of the name
	suffix   string   // "motion"
	ext      string   // ".tsv"
}

// entity is one part of a name: "sub-01".
type entity struct{ key, value string }

// keys lists the entities that names around motion recordings hold.
func keys() []string {
	return []string{"sub", "ses", "task", "tracksys", "acq", "run", "recording", "space", "desc"}
}

// parseName reads the last element of a path, packed or not. It refuses names
// that BIDS does not build.
func parseName(path string) (name, bool) {
	base := filepath.Base(path)
	for _, packed := range []string{".gz", ".zst"} {
		base = strings.TrimSuffix(base, packed)
	}
	stem, ext, ok := strings.Cut(base, ".")
	parts := strings.Split(stem, "_")
	n := name{suffix: parts[len(parts)-1], ext: "." + ext}
	if !ok || n.suffix == "" || strings.Contains(n.suffix, "-") {
		return n, false
	}
	for _, part := range parts[:len(parts)-1] {
		key, value, _ := strings.Cut(part, "-")
		if !isLabel(value) || !slices.Contains(keys(), key) || n.value(key) != "" {
			return n, false
		}
		n.entities = append(n.entities, entity{key, value})
	}
	return n, true
}

// isLabel tells whether a text is the value of an entity. The standard has
// letters and digits alone; this is a little wider.
func isLabel(text string) bool {
	return text != "" && utf8.ValidString(text) && !strings.ContainsFunc(text, func(r rune) bool {
		return !unicode.IsLetter(r) && !unicode.IsDigit(r) && r != '+' && r != '-'
	})
}

// value returns the value of an entity, empty when the name does not hold it.
func (n name) value(key string) string {
	for _, e := range n.entities {
		if e.key == key {
			return e.value
		}
	}
	return ""
}

// stem returns the name up to its suffix, which names the recording.
func (n name) stem() string {
	return strings.TrimSuffix(n.with(n.entities, "", ""), "_")
}

func (n name) with(entities []entity, suffix, ext string) string {
	var b strings.Builder
	for _, e := range entities {
		b.WriteString(e.key + "-" + e.value + "_")
	}
	return b.String() + suffix + ext
}

// applicable returns the names of files of another suffix that may describe
// this one: those without any other entity than its own, the most specific
// first.
func (n name) applicable(suffix, ext string) []string {
	sets := make([]uint, 1<<len(n.entities))
	for i := range sets {
		sets[i] = uint(len(sets) - 1 - i)
	}
	slices.SortStableFunc(sets, func(a, b uint) int { return bits.OnesCount(b) - bits.OnesCount(a) })
	out := make([]string, len(sets))
	for i, set := range sets {
		var kept []entity
		for k, e := range n.entities {
			if set&(1<<k) != 0 {
				kept = append(kept, e)
			}
		}
		out[i] = n.with(kept, suffix, ext)
	}
	return out
}

// folders returns the folders in which files that describe a recording may
// stand, as paths from the folder of the recording: that folder, and those
// above it up to the one that holds the folder of the subject.
func (n name) folders(path string) []string {
	out := []string{""}
	dir, err := filepath.Abs(path)
	if path == "" || err != nil {
		return out
	}
	for up := "../"; ; up += "../" {
		dir = filepath.Dir(dir)
		switch filepath.Base(dir) {
		case "motion", "ses-" + n.value("ses"), "sub-" + n.value("sub"):
			out = append(out, up)
		default:
			return out
		}
	}
}
