// Command loopback runs a command in a network namespace of its own, where there
// is no network but the loopback interface: what it listens on, nobody else
// reaches.
//
//	go run ./loopback COMMAND …
//
// Its exit code is that of the command, and 125 where no such namespace may be
// made.
package main

import (
	"errors"
	"fmt"
	"os"
	"os/exec"
	"syscall"
	"unsafe"
)

const (
	inside = "STRANDWISE_LOOPBACK" // set for the process in the namespace
	failed = 125
)

func main() {
	if len(os.Args) < 2 {
		fail(errors.New("no command is named"))
	}
	if os.Getenv(inside) == "" {
		outer()
	}
	if err := up("lo"); err != nil {
		fail(err)
	}
	os.Unsetenv(inside)
	path, err := exec.LookPath(os.Args[1])
	if err == nil {
		err = syscall.Exec(path, os.Args[1:], os.Environ())
	}
	fail(err)
}

// outer starts this program again in a new namespace, and ends with it.
func outer() {
	self, err := os.Executable()
	if err != nil {
		fail(err)
	}
	c := exec.Command(self, os.Args[1:]...)
	c.Stdin, c.Stdout, c.Stderr = os.Stdin, os.Stdout, os.Stderr
	c.Env = append(os.Environ(), inside+"=1")
	c.SysProcAttr = &syscall.SysProcAttr{Cloneflags: syscall.CLONE_NEWNET}
	if id := os.Geteuid(); id != 0 {
		c.SysProcAttr.Cloneflags |= syscall.CLONE_NEWUSER
		c.SysProcAttr.UidMappings = []syscall.SysProcIDMap{{ContainerID: 0, HostID: id, Size: 1}}
		c.SysProcAttr.GidMappings = []syscall.SysProcIDMap{{ContainerID: 0, HostID: os.Getegid(), Size: 1}}
	}
	if err := c.Run(); c.ProcessState == nil {
		fail(err)
	}
	os.Exit(c.ProcessState.ExitCode())
}

// up brings an interface up: ioctl SIOCSIFFLAGS, see netdevice(7).
func up(name string) error {
	s, err := syscall.Socket(syscall.AF_INET, syscall.SOCK_DGRAM, 0)
	if err != nil {
		return err
	}
	defer syscall.Close(s)
	request := struct {
		name  [syscall.IFNAMSIZ]byte
		flags uint16
		_     [22]byte
	}{flags: syscall.IFF_UP | syscall.IFF_RUNNING}
	copy(request.name[:], name)
	if _, _, no := syscall.Syscall(syscall.SYS_IOCTL, uintptr(s), syscall.SIOCSIFFLAGS, uintptr(unsafe.Pointer(&request))); no != 0 {
		return fmt.Errorf("bring %s up: %w", name, no)
	}
	return nil
}

func fail(err error) {
	fmt.Fprintln(os.Stderr, "loopback:", err)
	os.Exit(failed)
}
