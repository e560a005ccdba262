package ingest

import (
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// source is one file to read.
type source struct {
	name     string // as the user named it
	path     string // on disk; empty for standard input before it is spooled
	identity raw.Identity
	tail     string // what names its takes: tail of the path under a pattern, else its stem
	matched  bool   // a pattern covers it
}

// finder resolves what the user named into files.
type finder struct {
	options *Options
	pattern *pathPattern // nil for none
	sources []source
	seen    map[string]bool
	notices *notices
}

// add resolves one path of the options.
func (f *finder) add(name string) error {
	if name == "-" {
		f.include(name, "stdin", "")
		return nil
	}
	info, err := os.Stat(name)
	if err == nil {
		return f.addNamed(name, info)
	}
	if !strings.ContainsAny(name, `*?[`) {
		return &fault.Error{File: name, Problem: "cannot be opened", Err: err, Remedy: "check the path"}
	}
	found, globErr := filepath.Glob(name)
	if globErr != nil {
		return &UsageError{Key: "recordings", Problem: fmt.Sprintf("bad glob %q", name), Err: globErr}
	}
	if len(found) == 0 {
		return &UsageError{Key: "recordings", Problem: fmt.Sprintf("no file matches %q", name)}
	}
	for _, path := range found {
		info, err := os.Stat(path)
		if err != nil {
			return &fault.Error{File: path, Problem: "cannot be opened", Err: err, Remedy: "check the path"}
		}
		if err := f.addNamed(path, info); err != nil {
			return err
		}
	}
	return nil
}

func (f *finder) addNamed(name string, info fs.FileInfo) error {
	if info.IsDir() {
		return f.addFolder(name)
	}
	if !f.match(name) {
		return &UsageError{Key: "recordings", Problem: fmt.Sprintf("%s does not match the pattern %q", name, f.pattern.text)}
	}
	return nil
}

// addFolder takes up the recordings of a folder and those below it.
func (f *finder) addFolder(root string) error {
	before := len(f.sources) + len(f.seen)
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return &fault.Error{File: path, Problem: "cannot be opened", Err: err, Remedy: "check its permissions"}
		}
		hidden := path != root && strings.HasPrefix(d.Name(), ".")
		switch {
		case hidden && d.IsDir():
			return filepath.SkipDir
		case hidden || d.IsDir():
		case !isFile(path, d):
			f.notices.add(path, "is no regular file and is left out", "")
		case !f.knownExtension(path):
			f.notices.add(path, "is no recording by its extension and is left out", "")
		case !f.match(path):
			f.notices.add(path, fmt.Sprintf("does not match the pattern %q and is left out", f.pattern.text), "")
		}
		return nil
	})
	if err == nil && len(f.sources)+len(f.seen) == before {
		err = f.nothingIn(root)
	}
	return err
}

func (f *finder) nothingIn(root string) error {
	if f.pattern != nil {
		return &UsageError{Key: "recordings", Problem: fmt.Sprintf("no recording in folder %s matches the pattern %q", root, f.pattern.text)}
	}
	return &UsageError{Key: "recordings", Problem: fmt.Sprintf("no recording in folder %s; recordings end in %s", root, strings.Join(f.options.extensions(), ", "))}
}

// isFile tells whether an entry is a file or a link to one.
func isFile(path string, d fs.DirEntry) bool {
	if d.Type()&fs.ModeSymlink == 0 {
		return d.Type().IsRegular()
	}
	info, err := os.Stat(path)
	return err == nil && info.Mode().IsRegular()
}

// match takes a file up unless the pattern does not cover it.
func (f *finder) match(name string) bool {
	if f.pattern == nil {
		f.include(name, stem(filepath.Base(name)), name)
		return true
	}
	id, tail, ok := f.pattern.match(name)
	if ok && f.include(name, tail, name) {
		s := &f.sources[len(f.sources)-1]
		s.identity, s.matched = id, true
	}
	return ok
}

// include adds a file unless it is already in.
func (f *finder) include(name, tail, path string) bool {
	key := filepath.Clean(name)
	if f.seen[key] {
		f.notices.add(name, "is named twice and read once", "")
		return false
	}
	f.seen[key] = true
	f.sources = append(f.sources, source{name: name, path: path, tail: tail})
	return true
}

func (f *finder) knownExtension(name string) bool {
	return slices.Contains(f.options.extensions(), strings.ToLower(filepath.Ext(unpackedName(name))))
}
