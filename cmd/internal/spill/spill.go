// Package spill keeps recorded takes in a temporary file, in heaps that are
// read again one after another. With it one pass over the recordings serves many
// parts of a set: the file holds recorded takes alone, which are a small part of
// what is made from them.
package spill

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"os"

	"strandwise/channels"
	"strandwise/channels/body"
)

// Spill is a temporary file of takes. In memory it keeps 16 bytes for each take,
// the layouts and skeletons the takes share, and the buffers of a file.
type Spill struct {
	file      *os.File
	out       *bufio.Writer
	size      int64
	heaps     map[int][]place
	layouts   shared[*channels.Layout]
	skeletons shared[*body.Skeleton]
	scratch   []byte
}

// place is where a take stands in the file.
type place struct{ from, bytes int64 }

// New begins a spill in a folder, the system's own for temporary files when the
// name is empty. The caller closes it.
func New(dir string) (*Spill, error) {
	f, err := os.CreateTemp(dir, "strandwise-takes-*")
	if err != nil {
		return nil, fmt.Errorf("keep takes in a temporary file: %w", err)
	}
	return &Spill{file: f, out: bufio.NewWriterSize(f, 1<<20), heaps: map[int][]place{}}, nil
}

// Add puts a recorded take on a heap. It copies what it needs.
func (s *Spill) Add(heap int, t *channels.Take) error {
	s.scratch = appendTake(s.scratch[:0], t, s.layouts.number(t.Layout), s.skeletons.number(t.Skeleton))
	n, err := s.out.Write(s.scratch)
	if err != nil {
		return fmt.Errorf("keep takes in a temporary file: %w", err)
	}
	s.heaps[heap] = append(s.heaps[heap], place{s.size, int64(n)})
	s.size += int64(n)
	return nil
}

// Takes returns the takes of a heap in the order they were added, to the bit.
// Nothing may be added any more.
func (s *Spill) Takes(heap int) channels.Stream {
	return func(yield func(*channels.Take, error) bool) {
		err := s.out.Flush()
		for i := 0; i < len(s.heaps[heap]) && err == nil; i++ {
			var t *channels.Take
			if t, err = s.read(s.heaps[heap][i]); err == nil && !yield(t, nil) {
				return
			}
		}
		if err != nil {
			yield(nil, fmt.Errorf("read takes kept in a temporary file: %w", err))
		}
	}
}

func (s *Spill) read(at place) (*channels.Take, error) {
	data := make([]byte, at.bytes)
	if _, err := io.ReadFull(io.NewSectionReader(s.file, at.from, at.bytes), data); err != nil {
		return nil, err
	}
	r := reader{data: data}
	t := r.take(s.layouts.items, s.skeletons.items)
	if r.short || len(r.data) > 0 {
		return nil, errors.New("it was changed")
	}
	return t, nil
}

// Close removes the file.
func (s *Spill) Close() error {
	return errors.Join(s.file.Close(), os.Remove(s.file.Name()))
}

// shared numbers things that many takes share.
type shared[T comparable] struct {
	items []T
	known map[T]uint64
}

func (s *shared[T]) number(item T) uint64 {
	n, ok := s.known[item]
	if !ok {
		if s.known == nil {
			s.known = map[T]uint64{}
		}
		n = uint64(len(s.items))
		s.known[item] = n
		s.items = append(s.items, item)
	}
	return n
}
