package export

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"syscall"
)

// The names of an unfinished set's own folder. All but the lock are written
// whole or not at all.
const (
	stateFolder      = "unfinished"
	lockName         = stateFolder + "/lock"
	planName         = stateFolder + "/plan.json"
	notesName        = stateFolder + "/notes.json"
	bucketPrefix     = stateFolder + "/bucket-"
	attachmentPrefix = stateFolder + "/attached-"

	planFormat = "strandwise.unfinished/1"
)

func bucketRecord(number int) string      { return fmt.Sprintf("%s%05d.json", bucketPrefix, number) }
func attachmentRecord(name string) string { return attachmentPrefix + name }

// planned is what all that write one set must agree on: nothing else decides
// its bytes, the takes apart.
type planned struct {
	Format string `json:"format"`
	Options
	Layout Layout `json:"layout"`
}

// finished records one bucket that is in place.
type finished struct {
	Files   []File           `json:"files"`
	Counts  []Count          `json:"counts"`
	Tallies map[string]int64 `json:"tallies"`
}

// notes records what a run has to say about itself and the set.
type notes struct {
	Notices []string `json:"notices"`
	Card    Card     `json:"card"`
}

// state reads and writes an unfinished set's own folder.
type state struct {
	dir  string // of the set
	disk disk
}

func (s state) path(name string) string { return filepath.Join(s.dir, filepath.FromSlash(name)) }

// record writes one record whole; one of the same name is replaced.
func (s state) record(name string, v any) error {
	data, err := marshal(v, "")
	if err != nil {
		return err
	}
	return writeFile(s.disk, s.path(name), append(data, '\n'))
}

// read reads one record, if there is one.
func (s state) read(name string, v any) (found bool, err error) {
	data, err := os.ReadFile(s.path(name))
	if absent(err) {
		return false, nil
	}
	if err != nil {
		return false, err
	}
	if err := json.Unmarshal(data, v); err != nil {
		return false, fmt.Errorf("%s: %w", s.path(name), err)
	}
	return true, nil
}

// plan reads what the unfinished set is to be, nil without one. A file of its
// name that says something else is an error.
func (s state) plan() (*planned, error) {
	var p planned
	found, err := s.read(planName, &p)
	if err == nil && !found {
		return nil, nil
	}
	if err != nil || p.Format != planFormat {
		return nil, fmt.Errorf("%s was not written by this version of the program; choose another folder", s.path(planName))
	}
	return &p, nil
}

// bucket reads the record of a bucket, nil when it is not finished or one of
// its files is not there as it was.
func (s state) bucket(number int) (*finished, error) {
	var f finished
	found, err := s.read(bucketRecord(number), &f)
	if err != nil || !found {
		return nil, err
	}
	for _, file := range f.Files {
		if !s.stands(file) {
			return nil, nil
		}
	}
	return &f, nil
}

// stands reports whether a recorded file is there in its size.
func (s state) stands(f File) bool {
	info, err := os.Lstat(s.path(f.Path))
	return filepath.IsLocal(filepath.FromSlash(f.Path)) && err == nil && info.Mode().IsRegular() && info.Size() == f.Bytes
}

// attachments reads the records of what was attached, by name.
func (s state) attachments() ([]File, error) {
	entries, err := os.ReadDir(s.path(stateFolder))
	if err != nil && !absent(err) {
		return nil, err
	}
	var out []File
	for _, e := range entries {
		name := stateFolder + "/" + e.Name()
		if _, partly := final(name); partly || !strings.HasPrefix(name, attachmentPrefix) {
			continue
		}
		var f File
		if _, err := s.read(name, &f); err != nil {
			return nil, err
		}
		out = append(out, f)
	}
	return out, nil
}

// absent reports whether an error tells of a file that is not there.
func absent(err error) bool {
	return errors.Is(err, fs.ErrNotExist) || errors.Is(err, syscall.ENOTDIR)
}

// missing lists the buckets that are not finished.
func (s state) missing(buckets int) ([]int, error) {
	var out []int
	for b := range buckets {
		f, err := s.bucket(b)
		if err != nil {
			return nil, err
		}
		if f == nil {
			out = append(out, b)
		}
	}
	return out, nil
}

// differences lists how a plan differs from another, key by key.
func (p *planned) differences(other *planned) ([]string, error) {
	mine, err := p.keys()
	if err != nil {
		return nil, err
	}
	theirs, err := other.keys()
	if err != nil {
		return nil, err
	}
	var out []string
	for _, key := range union(mine, theirs) {
		if mine[key] != theirs[key] {
			out = append(out, fmt.Sprintf("%s was %s and is now %s", key, orNone(theirs[key]), orNone(mine[key])))
		}
	}
	return out, nil
}

// keys returns the plan as text by key; the keys of an object inside it follow
// its own after a dot.
func (p *planned) keys() (map[string]string, error) {
	text, err := marshal(p, "")
	if err != nil {
		return nil, err
	}
	out := map[string]string{}
	return out, flatten(out, "", text)
}

func flatten(dst map[string]string, prefix string, text []byte) error {
	parts, err := partsOf(text)
	if err != nil {
		return err
	}
	if parts == nil {
		dst[prefix] = string(text)
	}
	for key, value := range parts {
		if prefix != "" {
			key = prefix + "." + key
		}
		if err := flatten(dst, key, value); err != nil {
			return err
		}
	}
	return nil
}

// partsOf takes an object, or a list of objects, apart; anything else is one
// value, and the result nil.
func partsOf(text []byte) (parts map[string]json.RawMessage, err error) {
	switch {
	case bytes.HasPrefix(text, []byte("{")):
		err = json.Unmarshal(text, &parts)
	case bytes.HasPrefix(text, []byte("[{")):
		var items []json.RawMessage
		err = json.Unmarshal(text, &items)
		parts = map[string]json.RawMessage{}
		for i, item := range items {
			parts[strconv.Itoa(i)] = item
		}
	}
	return parts, err
}

func union(a, b map[string]string) []string {
	var out []string
	for key := range a {
		out = append(out, key)
	}
	for key := range b {
		if _, ok := a[key]; !ok {
			out = append(out, key)
		}
	}
	slices.Sort(out)
	return out
}

// orNone shortens a value for a message.
func orNone(text string) string {
	const most = 60
	switch {
	case text == "":
		return "not there"
	case len(text) > most:
		return strings.ToValidUTF8(text[:most], "") + "…"
	}
	return text
}
