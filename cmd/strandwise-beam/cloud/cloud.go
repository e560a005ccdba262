// Package cloud is the object storage of the large providers, and of all that
// speak one of their protocols, as a [store.Store]: Amazon S3 (s3://), Google
// Cloud Storage (gs://) and Azure Blob Storage (azblob://). Who may do what is
// up to the providers' own settings: environment, files of credentials, or the
// identity of the machine.
package cloud

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"net/url"
	"strings"

	"gocloud.dev/blob"
	_ "gocloud.dev/blob/azureblob" // azblob://
	_ "gocloud.dev/blob/gcsblob"   // gs://
	_ "gocloud.dev/blob/s3blob"    // s3://
	"gocloud.dev/gcerrors"

	"strandwise/export/store"
)

// Address is where objects lie: "s3://bucket/some/name?region=eu-north-1". What
// stands behind the question mark says how to reach the bucket, as told at
// gocloud.dev/blob, and is no part of a name.
type Address struct {
	Scheme string // s3, gs or azblob
	Bucket string
	Name   string // of an object, or what stands before the names of several
	Query  string
}

// IsAddress reports whether a text is meant as an address and not as a path.
func IsAddress(text string) bool { return strings.Contains(text, "://") }

// Parse reads an address. The error says what would be legal. A pattern in the
// name may have question marks as %3F alone.
func Parse(text string) (Address, error) {
	u, err := url.Parse(text)
	if err != nil {
		return Address{}, fmt.Errorf("%q is no address: %w", text, err)
	}
	switch u.Scheme {
	case "s3", "gs", "azblob":
	default:
		return Address{}, fmt.Errorf("%q: storage is addressed as s3://…, gs://… or azblob://…", text)
	}
	if u.Host == "" {
		return Address{}, fmt.Errorf("%q names no bucket; an address is s3://BUCKET/NAME", text)
	}
	return Address{u.Scheme, u.Host, strings.TrimPrefix(u.Path, "/"), u.RawQuery}, nil
}

// Base returns what stands before the names of the bucket's objects when they
// are spoken of.
func (a Address) Base() string { return a.Scheme + "://" + a.Bucket + "/" }

// Open opens the bucket of an address. The caller closes it.
func Open(ctx context.Context, a Address) (*Bucket, error) {
	u := url.URL{Scheme: a.Scheme, Host: a.Bucket, RawQuery: a.Query}
	b, err := blob.OpenBucket(ctx, u.String())
	if err != nil {
		return nil, fmt.Errorf("open %s: %w", a.Base(), err)
	}
	return &Bucket{b}, nil
}

// Bucket is a bucket, or container, of a provider.
type Bucket struct{ *blob.Bucket }

var _ store.Store = (*Bucket)(nil)

// List returns the objects whose names begin with the prefix.
func (b *Bucket) List(ctx context.Context, prefix string) ([]store.Object, error) {
	var out []store.Object
	all := b.Bucket.List(&blob.ListOptions{Prefix: prefix})
	for {
		o, err := all.Next(ctx)
		if err == io.EOF {
			return out, nil
		}
		if err != nil {
			return nil, plain(err)
		}
		if !strings.HasSuffix(o.Key, "/") || o.Size > 0 { // no folder as some tools make them
			out = append(out, store.Object{Name: o.Key, Bytes: o.Size, Modified: o.ModTime})
		}
	}
}

// Open opens an object.
func (b *Bucket) Open(ctx context.Context, name string) (store.Reader, error) {
	a, err := b.Attributes(ctx, name)
	if err != nil {
		return nil, plain(err)
	}
	return &reader{ctx, b.Bucket, name, a.Size}, nil
}

// reader asks for each part of an object by itself.
type reader struct {
	ctx    context.Context
	bucket *blob.Bucket
	name   string
	size   int64
}

// Size returns the size of the object when it was opened.
func (r *reader) Size() int64 { return r.size }

// Close does nothing: between two parts nothing is held.
func (r *reader) Close() error { return nil }

// ReadAt reads one part.
func (r *reader) ReadAt(p []byte, at int64) (int, error) {
	if at >= r.size {
		return 0, io.EOF
	}
	part, err := r.bucket.NewRangeReader(r.ctx, r.name, at, int64(len(p)), nil)
	if err != nil {
		return 0, plain(err)
	}
	defer part.Close()
	n, err := io.ReadFull(part, p)
	if err == io.ErrUnexpectedEOF && at+int64(n) == r.size {
		err = io.EOF
	}
	return n, plain(err)
}

// Create begins an object.
func (b *Bucket) Create(ctx context.Context, name string) (store.Writer, error) {
	ctx, cancel := context.WithCancel(ctx)
	w, err := b.NewWriter(ctx, name, &blob.WriterOptions{ContentType: "application/octet-stream"})
	if err != nil {
		cancel()
		return nil, plain(err)
	}
	return &writer{w: w, cancel: cancel}, nil
}

// writer writes an object, which the provider shows once it is closed and never
// when its context was ended before.
type writer struct {
	w      *blob.Writer
	cancel context.CancelFunc
	done   bool
}

// Write writes the next bytes.
func (w *writer) Write(p []byte) (int, error) {
	n, err := w.w.Write(p)
	return n, plain(err)
}

// Commit makes the object be there.
func (w *writer) Commit() error {
	w.done = true
	defer w.cancel()
	return plain(w.w.Close())
}

// Abort gives the object up.
func (w *writer) Abort() error {
	if w.done {
		return nil
	}
	w.done = true
	w.cancel()
	_ = w.w.Close() // tells that the context has ended
	return nil
}

// Remove removes an object.
func (b *Bucket) Remove(ctx context.Context, name string) error {
	err := plain(b.Delete(ctx, name))
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	return err
}

// plain adds to an error of a provider what it is in the words of package fs.
func plain(err error) error {
	switch gcerrors.Code(err) {
	case gcerrors.NotFound:
		return fmt.Errorf("%w: %w", fs.ErrNotExist, err)
	case gcerrors.PermissionDenied:
		return fmt.Errorf("%w: %w", fs.ErrPermission, err)
	case gcerrors.InvalidArgument:
		return fmt.Errorf("%w: %w", fs.ErrInvalid, err)
	}
	return err
}
