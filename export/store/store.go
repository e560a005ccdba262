// Package store keeps recordings and sets where there is no folder to share:
// in object storage. It holds the few things such storage is asked for
// ([Store]), folders in the same form ([Folder]), whole transfers that are tried
// again when they fail ([Transfer]), and how a set is written there ([Set]).
// The storage of a provider is an implementation of Store elsewhere, so that
// nothing of it is linked into programs that do not use it.
//
// Package export writes a set through a file system, with names that appear
// when their files are whole. Object storage gives the same by other means: an
// object is there once its last byte is. So a set is not written into storage
// directly. Each process writes its buckets into a folder of its own, by the
// same code as ever, and [Set] puts the finished files into storage, those that
// vouch for others behind them and the manifest last. That costs room for the
// buckets a process makes at a time, one more reading of what it wrote, and
// nothing else; in return the bytes are those of one run on one machine.
package store

import (
	"context"
	"io"
	"time"
)

// Store is object storage, or a part of it, in which objects have names with
// slashes. Its methods may be called at the same time. An object that is not
// there is an error that is fs.ErrNotExist.
type Store interface {
	// List returns the objects whose names begin with the prefix, by name.
	List(ctx context.Context, prefix string) ([]Object, error)
	// Open opens an object for reading any part of it. The caller closes it.
	Open(ctx context.Context, name string) (Reader, error)
	// Create begins an object, which takes the place of one of its name when
	// it is committed. Until then nobody sees anything of it. The caller calls
	// Commit or Abort; a process that ends before has aborted.
	Create(ctx context.Context, name string) (Writer, error)
	// Remove removes an object. It is no error when it is not there.
	Remove(ctx context.Context, name string) error
}

// Object tells of an object.
type Object struct {
	Name     string
	Bytes    int64
	Modified time.Time
}

// Reader reads parts of an object.
type Reader interface {
	io.ReaderAt
	io.Closer
	Size() int64
}

// Writer writes an object.
type Writer interface {
	io.Writer
	// Commit makes the object be there, whole. After an error it may be there,
	// whole, or not at all.
	Commit() error
	// Abort leaves everything as it was. It does nothing after Commit.
	Abort() error
}
