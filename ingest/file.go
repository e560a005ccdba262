package ingest

import (
	"bufio"
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"hash"
	"io"
	"os"
	"strings"
	"time"

	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/zstd"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// File is one file that was read.
type File struct {
	Path   string // as the user named it; "-" is standard input
	Bytes  int64  // on disk
	SHA256 string // of the bytes on disk, lower-case hexadecimal
}

// known is a file of an earlier pass.
type known struct {
	File
	modified time.Time
}

// file is one file being read: counted and hashed as on disk, unpacked for
// its format.
type file struct {
	source
	on       *os.File
	options  *Options
	before   *known // nil on the first pass
	modified time.Time
	hash     hash.Hash // nil when the hash is known
	bytes    int64
	opened   io.Closer // the unpacker, if it holds anything
}

// openFile opens a file, which must not have changed since an earlier pass.
func openFile(s source, o *Options, before *known) (*file, error) {
	on, err := os.Open(s.path)
	if err != nil {
		return nil, &fault.Error{File: s.name, Problem: "cannot be opened", Err: err, Remedy: "check the path and its permissions"}
	}
	f := &file{source: s, on: on, options: o, before: before}
	info, err := on.Stat()
	if err != nil {
		f.close()
		return nil, f.damaged("cannot be read", err)
	}
	f.modified = info.ModTime()
	switch {
	case before == nil:
		f.hash = sha256.New()
	case before.Bytes != info.Size() || !before.modified.Equal(f.modified):
		f.close()
		return nil, &fault.Error{File: s.name, Problem: "has changed since it was first read", Remedy: "start again once it is complete"}
	}
	return f, nil
}

// Read reads and hashes the file as it is on disk.
func (f *file) Read(p []byte) (int, error) {
	n, err := f.on.Read(p)
	f.bytes += int64(n)
	if f.hash != nil {
		f.hash.Write(p[:n])
	}
	return n, err
}

func (f *file) close() {
	if f.opened != nil {
		f.opened.Close()
	}
	f.on.Close()
}

// takes reads the file by its format.
func (f *file) takes(in raw.Input) raw.Stream {
	return func(yield func(*raw.Take, error) bool) {
		br, err := f.unpack()
		if err != nil {
			yield(nil, err)
			return
		}
		head, err := br.Peek(raw.SniffSize)
		if err != nil && err != io.EOF {
			yield(nil, err)
			return
		}
		format := f.options.formatOf(head, f.name)
		if kind := kindOf(head); format == nil || kind != "" {
			yield(nil, f.unknown(kind, len(head) == 0))
			return
		}
		format.Read(br, in)(yield)
	}
}

func kindOf(head []byte) string {
	for _, m := range magics {
		if bytes.HasPrefix(head, []byte(m.head)) {
			return m.kind
		}
	}
	return ""
}

func (f *file) unknown(kind string, empty bool) error {
	e := &fault.Error{File: f.name, Remedy: "leave it out, or convert it to delimited text in UTF-8"}
	switch {
	case empty:
		e.Problem, e.Remedy = "is empty", "leave it out or record it again"
	case kind != "":
		e.Problem = "is " + kind + ", not a recording"
	default:
		e.Problem = "is binary data of no known kind, not a recording"
	}
	return e
}

// finish reads what the format left unread and returns what is known of the
// file.
func (f *file) finish() (known, error) {
	if f.before != nil {
		return *f.before, nil
	}
	if _, err := io.Copy(io.Discard, f); err != nil {
		return known{}, f.damaged("cannot be read", err)
	}
	return known{File{Path: f.name, Bytes: f.bytes, SHA256: hex.EncodeToString(f.hash.Sum(nil))}, f.modified}, nil
}

const bufferSize = 64 << 10

// unpack returns the text or data in the file, whatever it is packed with. It
// looks at the content, not at the name. Read errors are faults.
func (f *file) unpack() (*bufio.Reader, error) {
	br := bufio.NewReaderSize(reading{f, f, "cannot be read"}, bufferSize)
	head, err := br.Peek(4)
	if err != nil && err != io.EOF {
		return nil, err
	}
	switch {
	case bytes.HasPrefix(head, []byte{0x1f, 0x8b}): // RFC 1952
		z, err := gzip.NewReader(br)
		if err != nil {
			return nil, f.damaged(badGzip, err)
		}
		f.opened = z
		return bufio.NewReaderSize(reading{f, z, badGzip}, bufferSize), nil
	case bytes.Equal(head, []byte{0x28, 0xb5, 0x2f, 0xfd}): // RFC 8878
		z, err := zstd.NewReader(br, zstd.WithDecoderConcurrency(1), zstd.WithDecoderMaxMemory(maxWindow))
		if err != nil {
			return nil, f.damaged(badZstd, err)
		}
		f.opened = z.IOReadCloser()
		return bufio.NewReaderSize(reading{f, z, badZstd}, bufferSize), nil
	}
	return br, nil
}

const (
	badGzip   = "its gzip data is damaged or cut short"
	badZstd   = "its zstd data is damaged or cut short"
	maxWindow = 128 << 20 // memory a packed file may ask for
)

// reading turns the errors of a reader into faults.
type reading struct {
	f    *file
	r    io.Reader
	what string
}

// Read reads from the reader below.
func (r reading) Read(p []byte) (int, error) {
	n, err := r.r.Read(p)
	if err != nil && err != io.EOF {
		err = r.f.damaged(r.what, err)
	}
	return n, err
}

// damaged wraps an error unless it is a fault already.
func (f *file) damaged(what string, err error) error {
	var known *fault.Error
	if errors.As(err, &known) {
		return err
	}
	return &fault.Error{File: f.name, Problem: what, Err: err, Remedy: "copy or record it again"}
}

// unpackedName returns a file name without the extension of its packing.
func unpackedName(name string) string {
	for _, ext := range []string{".gz", ".zst"} {
		if cut, ok := strings.CutSuffix(name, ext); ok {
			return cut
		}
	}
	return name
}
