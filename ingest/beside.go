package ingest

import (
	"crypto/sha256"
	"encoding/hex"
	"io"
	"os"
	"path/filepath"

	"strandwise/ingest/fault"
)

// maxBeside is the largest file read whole along with a recording, in bytes.
const maxBeside = 64 << 20

// readBeside reads a file in the folder of a recording.
func readBeside(s source, name string) ([]byte, File, error) {
	return readWhole(filepath.Join(filepath.Dir(s.path), name), "keep it beside "+s.name)
}

// readWhole reads a small file that is read along with a recording. The remedy
// is for when it is not there.
func readWhole(path, remedy string) ([]byte, File, error) {
	at, err := os.Open(path)
	if err != nil {
		return nil, File{}, &fault.Error{File: path, Problem: "cannot be opened", Err: err, Remedy: remedy}
	}
	defer at.Close()
	b, err := io.ReadAll(io.LimitReader(at, maxBeside+1))
	switch {
	case err != nil:
		return nil, File{}, &fault.Error{File: path, Problem: "cannot be read", Err: err, Remedy: "copy it again"}
	case len(b) > maxBeside:
		return nil, File{}, &fault.Error{File: path, Problem: "is too large for a file read along with a recording", Remedy: "check what it is"}
	}
	sum := sha256.Sum256(b)
	return b, File{Path: path, Bytes: int64(len(b)), SHA256: hex.EncodeToString(sum[:])}, nil
}
