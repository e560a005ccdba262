package ingest

import (
	"io"
	"os"

	"strandwise/ingest/fault"
)

// spool keeps standard input in a temporary file, because recordings are read
// more than once and standard input can be read only once.
func spool(in io.Reader) (path string, err error) {
	if in == nil {
		in = os.Stdin
	}
	f, err := os.CreateTemp("", "strandwise-*")
	if err != nil {
		return "", &fault.Error{File: "-", Problem: "cannot be kept in a temporary file", Err: err, Remedy: "set TMPDIR to a folder with room"}
	}
	_, err = io.Copy(f, in)
	if closeErr := f.Close(); err == nil {
		err = closeErr
	}
	if err != nil {
		os.Remove(f.Name())
		return "", &fault.Error{File: "-", Problem: "cannot be kept in a temporary file", Err: err, Remedy: "set TMPDIR to a folder with room"}
	}
	return f.Name(), nil
}
