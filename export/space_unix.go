//go:build darwin || linux

package export

import (
	"errors"
	"io/fs"
	"path/filepath"
	"syscall"
)

// Free returns the bytes that this user may still write to the file system that
// holds a folder, or would hold it once it is made; known is false where the
// system does not say.
func Free(dir string) (bytes int64, known bool) {
	dir, err := filepath.Abs(dir)
	if err != nil {
		return 0, false
	}
	var s syscall.Statfs_t
	for err = syscall.Statfs(dir, &s); errors.Is(err, fs.ErrNotExist) && dir != filepath.Dir(dir); err = syscall.Statfs(dir, &s) {
		dir = filepath.Dir(dir)
	}
	if err != nil || s.Blocks == 0 { // some network file systems know no bounds
		return 0, false
	}
	return int64(s.Bavail) * int64(s.Bsize), true
}
