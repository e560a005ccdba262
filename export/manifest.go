package export

import (
	"bytes"
	"cmp"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"

	"strandwise/channels"
)

const (
	manifestName   = "manifest.json"
	manifestFormat = "strandwise.set/1" // the form of the manifest
)

// Manifest says what a set holds and how it came about. It is an indented JSON
// file; the fields stand in this order, so the same set has the same bytes.
type Manifest struct {
	Format         string           `json:"format"` // "strandwise.set/1"
	ProgramVersion string           `json:"program_version"`
	About          About            `json:"about"`
	Seed           uint64           `json:"seed,string"` // a JSON string: readers lose digits of numbers above 2^53
	Plan           json.RawMessage  `json:"plan"`
	Recordings     []Recording      `json:"recordings"`
	Repairs        json.RawMessage  `json:"repairs"` // counts of what was repaired in them; null when nothing was looked for
	Cautions       []string         `json:"cautions"`
	Notices        []string         `json:"notices"` // what this run has to say about itself
	Layout         Layout           `json:"layout"`
	Counts         []Count          `json:"counts"`
	Tallies        map[string]int64 `json:"tallies"` // what was counted while takes were made; see [Bucket.Tally]
	Buckets        int              `json:"buckets"` // into which the takes are divided by their source; see [BucketOf]
	Files          []File           `json:"files"`   // by path

	// Seal is the SHA-256 of the manifest's own bytes, in hexadecimal, with
	// the 64 digits of the seal itself written as zeros.
	Seal string `json:"seal"`
}

// File is one file of the set.
type File struct {
	Path      string     `json:"path"` // inside the set, with slashes
	Bytes     int64      `json:"bytes"`
	SHA256    string     `json:"sha256"`
	Rows      int64      `json:"rows,omitempty"`       // Parquet files only
	RowGroups []RowGroup `json:"row_groups,omitempty"` // Parquet files only, in order
}

// RowGroup is one row group of a Parquet file: Bytes bytes from Offset on. Its
// checksum only says where in a file the damage is; whether there is any, the
// file's SHA-256 says.
type RowGroup struct {
	Rows   int64  `json:"rows"`
	Offset int64  `json:"offset"`
	Bytes  int64  `json:"bytes"`
	CRC32  string `json:"crc32"` // IEEE 802.3, as in gzip, in hexadecimal
}

// Takes returns the number of takes of an origin in all splits.
func (m *Manifest) Takes(origin channels.Origin) int64 {
	var n int64
	for _, c := range m.Counts {
		if c.Origin == origin {
			n += c.Takes
		}
	}
	return n
}

// manifest returns the manifest of a set of this plan, without its seal.
func (p *planned) manifest(files []File, counts []Count, tallies map[string]int64, notices []string) *Manifest {
	m := &Manifest{
		Format:         manifestFormat,
		ProgramVersion: p.Version,
		About:          p.About,
		Seed:           p.Seed,
		Plan:           p.Plan,
		Recordings:     append([]Recording{}, p.Recordings...),
		Repairs:        p.Repairs,
		Cautions:       Cautions(),
		Notices:        notices,
		Layout:         p.Layout,
		Counts:         counts,
		Tallies:        tallies,
		Buckets:        p.Buckets,
		Files:          files,
	}
	m.sortFiles()
	return m
}

func (m *Manifest) sortFiles() {
	slices.SortFunc(m.Files, func(a, b File) int { return cmp.Compare(a.Path, b.Path) })
}

// describe returns the entry of an attachment.
func describe(name string, data []byte) File {
	sum := sha256.Sum256(data)
	return File{Path: name, Bytes: int64(len(data)), SHA256: hex.EncodeToString(sum[:])}
}

// The seal is the last field, so its digits stand at a fixed distance from the
// end of the file.
const (
	sealEnd    = "\"\n}\n"
	sealDigits = 2 * sha256.Size
)

// encode returns the manifest's bytes and sets its seal.
func (m *Manifest) encode() ([]byte, error) {
	m.Seal = hex.EncodeToString(make([]byte, sha256.Size))
	data, err := marshal(m, "  ")
	if err != nil {
		return nil, fmt.Errorf("encode manifest: %w", err)
	}
	data = append(data, '\n')
	_, m.Seal = sealOf(data)
	copy(data[len(data)-len(sealEnd)-sealDigits:], m.Seal)
	return data, nil
}

// sealOf returns the seal that a manifest's bytes carry and the one that
// belongs to them. Bytes too few to carry one have none.
func sealOf(data []byte) (carried, due string) {
	at := len(data) - len(sealEnd) - sealDigits
	if at < 0 {
		return "", "none"
	}
	h := sha256.New()
	h.Write(data[:at])
	h.Write(bytes.Repeat([]byte("0"), sealDigits))
	h.Write(data[at+sealDigits:])
	return string(data[at : at+sealDigits]), hexSum(h)
}

// ErrSeal is returned by [ReadManifest] when the manifest's own bytes are not
// those that were sealed.
var ErrSeal = errors.New("the manifest does not match its own seal: it was changed after the set was sealed")

// ReadManifest reads the manifest of a set and checks its seal. A folder
// without a manifest holds no set, or one that was never finished.
func ReadManifest(dir string) (*Manifest, error) {
	path := filepath.Join(dir, manifestName)
	data, err := os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, fmt.Errorf("%s holds no finished set: %w", dir, err)
	}
	if err != nil {
		return nil, err
	}
	m, err := parseManifest(data)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	return m, nil
}

func parseManifest(data []byte) (*Manifest, error) {
	if carried, due := sealOf(data); carried != due {
		return nil, ErrSeal
	}
	var m Manifest
	if err := json.Unmarshal(data, &m); err != nil {
		return nil, err
	}
	if m.Format != manifestFormat {
		return nil, fmt.Errorf("format %q is not %q, the one this program reads", m.Format, manifestFormat)
	}
	return &m, nil
}
