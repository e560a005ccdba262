//go:build darwin || dragonfly || freebsd || linux || netbsd || openbsd

package export

import (
	"errors"
	"fmt"
	"os"
	"syscall"
)

// lock keeps other processes from claiming the file until it is closed or
// this process ends.
func lock(f *os.File) error {
	err := syscall.Flock(int(f.Fd()), syscall.LOCK_EX|syscall.LOCK_NB)
	switch {
	case errors.Is(err, syscall.EWOULDBLOCK):
		return fmt.Errorf("%s: another process is writing this set", f.Name())
	case errors.Is(err, syscall.ENOTSUP), errors.Is(err, syscall.ENOSYS), errors.Is(err, syscall.ENOLCK):
		return nil // some network file systems know no locks; go on without
	case err != nil:
		return &os.PathError{Op: "lock", Path: f.Name(), Err: err}
	}
	return nil
}
