//go:build darwin || dragonfly || freebsd || linux || netbsd || openbsd

package export

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"syscall"
)

// lock keeps other processes from claiming the file until it is closed or
// this process ends, however it ends: all others when alone, or else those
// that want it alone.
func lock(f *os.File, alone bool) error {
	how := syscall.LOCK_SH
	if alone {
		how = syscall.LOCK_EX
	}
	err := syscall.Flock(int(f.Fd()), how|syscall.LOCK_NB)
	switch {
	case errors.Is(err, syscall.EWOULDBLOCK):
		return fmt.Errorf("%s: %w", filepath.Dir(filepath.Dir(f.Name())), ErrBusy)
	case errors.Is(err, syscall.ENOTSUP), errors.Is(err, syscall.ENOSYS), errors.Is(err, syscall.ENOLCK):
		return nil // some network file systems know no locks; go on without
	case err != nil:
		return &os.PathError{Op: "lock", Path: f.Name(), Err: err}
	}
	return nil
}
