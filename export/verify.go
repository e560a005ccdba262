package export

import (
	"crypto/sha256"
	"errors"
	"fmt"
	"hash"
	"hash/crc32"
	"io"
	"io/fs"
	"os"
	"path/filepath"

	"strandwise/channels"
	"strandwise/export/marks"
)

// Problem is one way in which a set is not what its manifest says.
type Problem struct {
	File     string `json:"file"`                // inside the set, with slashes
	RowGroup *int   `json:"row_group,omitempty"` // of a Parquet file, from 0; nil when it is none or all
	Text     string `json:"text"`
}

// String returns the problem as one line: file, row group and text.
func (p Problem) String() string {
	if p.RowGroup != nil {
		return fmt.Sprintf("%s: row group %d: %s", p.File, *p.RowGroup, p.Text)
	}
	return p.File + ": " + p.Text
}

// Verification is the outcome of [Verify].
type Verification struct {
	Files    int       `json:"files"` // checked against the manifest
	Bytes    int64     `json:"bytes"` // in them
	Takes    int64     `json:"takes"` // rows of the table takes whose content was checked
	Problems []Problem `json:"problems"`

	// Copies are takes for testing that are nearly the same as one that trains,
	// looked for when there is no other problem. Those of synthetic takes stand
	// among the problems too; those of recorded ones do not, because some
	// recordings are so and the set says truly what they are.
	Copies []Copy `json:"copies"`
}

// Sound reports whether nothing was found.
func (v *Verification) Sound() bool { return len(v.Problems) == 0 }

// Verify holds the set in a folder against its manifest:
//
//   - the manifest against its own seal; when it is broken nothing else can be
//     checked, and that is the one problem;
//   - every file's size and SHA-256, and for a damaged Parquet file the row
//     groups whose own SHA-256 differ, or else its header or footer;
//   - files that are missing and files that nobody sealed;
//   - rows in the Parquet files' footers, and takes per split, label and
//     origin, against the manifest;
//   - the takes: no id twice, no synthetic take outside the split train, and
//     every source a recorded take in that split;
//   - the columns of every table;
//   - near-copies across the split; see [NearCopy].
//
// Files are read in blocks. Ids are compared by 64-bit hashes, 8 bytes held
// per take: a wrong source that has the hash of a right one is not noticed
// (1 in 2^64 per pair); ids reported as double were compared as texts.
//
// What is left of an unfinished set's own folder beside a manifest, from a crash
// in the last step of sealing, is no problem: the set is whole. The error is for
// a folder that holds no finished set or cannot be read.
func Verify(dir string) (*Verification, error) {
	v := &Verification{Problems: []Problem{}, Copies: []Copy{}}
	m, err := ReadManifest(dir)
	if errors.Is(err, ErrSeal) {
		v.problem(manifestName, "%v", ErrSeal)
		return v, nil
	}
	if err != nil {
		return nil, err
	}
	if err := v.checkNames(dir, m); err != nil {
		return nil, err
	}
	content := newContent(dir, m)
	for _, f := range m.Files {
		sound := v.checkFile(dir, f)
		if len(f.RowGroups) > 0 {
			content.take(v, f, sound)
		}
	}
	content.compare(v)
	if v.Sound() {
		v.checkCopies(content)
	}
	return v, nil
}

// checkCopies looks for near-copies across the split.
func (v *Verification) checkCopies(c *content) {
	if err := c.findCopies(v); err != nil {
		v.problem(string(Takes), "cannot be searched for near-copies: %v", err)
	}
	for _, found := range v.Copies {
		if found.Origin == channels.Synthetic {
			v.problem(string(Takes), "synthetic take %s, which trains, is nearly the same as take %s, which is for testing (difference %.2g of its movement)", found.Train, found.Test, found.Difference)
		}
	}
}

func (v *Verification) problem(file, format string, args ...any) {
	v.Problems = append(v.Problems, Problem{File: file, Text: fmt.Sprintf(format, args...)})
}

// checkNames reports files that the manifest does not name.
func (v *Verification) checkNames(dir string, m *Manifest) error {
	known := map[string]bool{manifestName: true, lockName: true, planName: true, marks.Name: true}
	for _, f := range m.Files {
		known[f.Path] = true
	}
	return walk(dir, func(_, name string, folder bool) error {
		if !folder && !known[name] && !isRecord(name) {
			v.problem(name, "nobody sealed this file")
		}
		return nil
	})
}

// checkFile holds one file's bytes against the manifest and reports whether
// they are the sealed ones.
func (v *Verification) checkFile(dir string, f File) bool {
	if !filepath.IsLocal(filepath.FromSlash(f.Path)) {
		v.problem(f.Path, "the manifest names a file outside the set")
		return false
	}
	file, err := os.Open(filepath.Join(dir, filepath.FromSlash(f.Path)))
	if errors.Is(err, fs.ErrNotExist) {
		v.problem(f.Path, "missing")
		return false
	}
	if err != nil {
		v.problem(f.Path, "cannot be read: %v", err)
		return false
	}
	defer file.Close()
	return v.checkBytes(file, f)
}

func (v *Verification) checkBytes(r io.Reader, f File) bool {
	whole := sha256.New()
	damaged, n, err := hashGroups(r, whole, f.RowGroups)
	v.Files++
	v.Bytes += n
	switch {
	case err != nil:
		v.problem(f.Path, "cannot be read: %v", err)
	case n != f.Bytes:
		v.problem(f.Path, "holds %d bytes, the manifest says %d", n, f.Bytes)
	case hexSum(whole) == f.SHA256:
		return true
	case len(f.RowGroups) == 0:
		v.problem(f.Path, "its bytes are not those that were sealed")
	case len(damaged) == 0:
		v.problem(f.Path, "footer or header: its bytes are not those that were sealed")
	}
	for _, i := range damaged {
		v.Problems = append(v.Problems, Problem{f.Path, &i, "its bytes are not those that were sealed"})
	}
	return false
}

// hashGroups reads a file to its end through the hash and returns the row
// groups whose own hash is not the one stated, and the bytes read.
func hashGroups(r io.Reader, whole hash.Hash, groups []RowGroup) (damaged []int, n int64, err error) {
	buffer := make([]byte, 1<<18)
	// Only io.Copy's plain loop uses the buffer, so both interfaces that would
	// take its place are hidden.
	copyN := func(w io.Writer, limit int64) error {
		c, err := io.CopyBuffer(struct{ io.Writer }{w}, struct{ io.Reader }{io.LimitReader(r, limit)}, buffer)
		n += c
		return err
	}
	for i, g := range groups {
		if g.Offset < n || g.Bytes < 0 {
			damaged = append(damaged, i) // overlaps the one before: no file of ours
			continue
		}
		if err := copyN(whole, g.Offset-n); err != nil {
			return damaged, n, err
		}
		own := crc32.NewIEEE()
		if err := copyN(io.MultiWriter(whole, own), g.Bytes); err != nil {
			return damaged, n, err
		}
		if hexSum(own) != g.CRC32 {
			damaged = append(damaged, i)
		}
	}
	return damaged, n, copyN(whole, 1<<62)
}
