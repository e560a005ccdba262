package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"syscall"
)

// plain is a disturbance that needs no preparation.
type plain struct{}

func (plain) folder(dir string) error { return makeRoom(dir) }
func (plain) lift(string) error       { return nil }
func (plain) done(dir string) error   { return os.RemoveAll(dir) }

// kill ends the process at once, as a crash does.
type kill struct{ plain }

func (kill) strike(_ string, run *exec.Cmd) error { return ended(run.Process.Kill()) }

// stop asks the process to end, as a scheduler does.
type stop struct{ plain }

func (stop) strike(_ string, run *exec.Cmd) error { return ended(run.Process.Signal(syscall.SIGTERM)) }

// ended passes over the error of a process that has ended by itself.
func ended(err error) error {
	if errors.Is(err, os.ErrProcessDone) {
		return nil
	}
	return err
}

// fill fills the disk: a small file system of its own.
type fill struct{}

func (fill) folder(dir string) error {
	if err := os.Mkdir(dir, 0o777); err != nil {
		return err
	}
	return syscall.Mount("strandwise-kill", dir, "tmpfs", 0, "size=20m,mode=0777")
}

// strike writes one file until nothing more fits.
func (fill) strike(dir string, _ *exec.Cmd) error {
	f, err := os.Create(filepath.Join(dir, "ballast"))
	if err != nil {
		return err
	}
	defer f.Close()
	block := make([]byte, 1<<20)
	for size := len(block); size >= 512; size /= 2 {
		for err = nil; err == nil; {
			_, err = f.Write(block[:size])
		}
		if !errors.Is(err, syscall.ENOSPC) {
			return fmt.Errorf("fill the disk: %w", err)
		}
	}
	return nil
}

func (fill) lift(dir string) error { return os.Remove(filepath.Join(dir, "ballast")) }
func (fill) done(dir string) error { return errors.Join(syscall.Unmount(dir, 0), os.Remove(dir)) }

// readOnly takes the right to write into any folder away from a user who is
// bound by rights.
type readOnly struct {
	plain
	bound bool
}

func (r readOnly) folder(dir string) error {
	if !r.bound {
		return errors.New("the superuser may write everywhere")
	}
	return r.plain.folder(dir)
}

func (readOnly) strike(dir string, _ *exec.Cmd) error { return chmodAll(dir, 0o555) }
func (readOnly) lift(dir string) error                { return chmodAll(dir, 0o777) }

// chmodAll changes the rights of a folder and all folders in it.
func chmodAll(dir string, mode fs.FileMode) error {
	return filepath.WalkDir(dir, func(path string, e fs.DirEntry, err error) error {
		if errors.Is(err, fs.ErrNotExist) {
			return nil // the run has just removed it
		}
		if err != nil || !e.IsDir() {
			return err
		}
		if err := os.Chmod(path, mode); !errors.Is(err, fs.ErrNotExist) {
			return err
		}
		return nil
	})
}
