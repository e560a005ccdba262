//go:build unix

package template_test

import (
	"syscall"
	"time"
)

// processTime returns the processor time of this process so far: on a shared
// machine it says more than the time of day.
func processTime() time.Duration {
	var r syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &r); err != nil {
		panic("template: no process time: " + err.Error())
	}
	return time.Duration(r.Utime.Nano() + r.Stime.Nano())
}
