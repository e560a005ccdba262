package export

import (
	"os"
	"path/filepath"

	"strandwise/channels"
)

// CreateOnly begins a set of one table, for measuring it alone.
func CreateOnly(dir string, l *channels.Layout, o Options, only Table) (*Writer, error) {
	w, err := Create(dir, l, o)
	if err == nil {
		w.options.Tables = []Table{only}
	}
	return w, err
}

// CreateOn is Create on another disk.
func CreateOn(d *Disk, dir string, l *channels.Layout, o Options) (*Writer, error) {
	return create(d, dir, l, o)
}

// Reseal changes the manifest of a sealed set and seals it again, as a forger
// would.
func Reseal(dir string, change func(*Manifest)) error {
	m, err := ReadManifest(dir)
	if err != nil {
		return err
	}
	change(m)
	data, err := m.encode()
	if err != nil {
		return err
	}
	return os.WriteFile(filepath.Join(dir, manifestName), data, 0o666)
}

// Disk is the operating system's file system, without waiting for the disk,
// that counts the steps asked of it and can fail at one of them.
type Disk struct {
	Steps  int
	FailAt int   // the step that fails, from 1; 0 for none
	Err    error // what it fails with
	Crash  bool  // every later step fails too, as after the process has died
	Writes []int // the steps that wrote to a file

	open []file
}

func (d *Disk) step() error {
	d.Steps++
	if d.FailAt > 0 && (d.Steps == d.FailAt || d.Crash && d.Steps > d.FailAt) {
		return d.Err
	}
	return nil
}

// Die closes the files that are open, as the end of a process does.
func (d *Disk) Die() {
	for _, f := range d.open {
		f.Close()
	}
}

func (d *Disk) mkdir(path string) error {
	if err := d.step(); err != nil {
		return err
	}
	return osDisk{}.mkdir(path)
}

func (d *Disk) rename(from, to string) error {
	if err := d.step(); err != nil {
		return err
	}
	return osDisk{}.rename(from, to)
}

func (d *Disk) remove(path string) error {
	if err := d.step(); err != nil {
		return err
	}
	return osDisk{}.remove(path)
}

func (d *Disk) syncDir(string) error { return d.step() }

func (d *Disk) create(path string) (file, error) { return d.keep(osDisk{}.create, path) }
func (d *Disk) claim(path string, alone bool) (file, error) {
	return d.keep(func(path string) (file, error) { return osDisk{}.claim(path, alone) }, path)
}

func (d *Disk) publish(from, to string) error {
	if err := d.step(); err != nil {
		return err
	}
	return osDisk{}.publish(from, to)
}

func (d *Disk) keep(open func(string) (file, error), path string) (file, error) {
	if err := d.step(); err != nil {
		return nil, err
	}
	f, err := open(path)
	if err != nil {
		return nil, err
	}
	d.open = append(d.open, f)
	return diskFile{f, d}, nil
}

// diskFile is a file whose steps count.
type diskFile struct {
	file
	disk *Disk
}

func (f diskFile) Write(p []byte) (int, error) {
	f.disk.Writes = append(f.disk.Writes, f.disk.Steps+1)
	if err := f.disk.step(); err != nil {
		n, _ := f.file.Write(p[:len(p)/2]) // a full disk takes part of it
		return n, err
	}
	return f.file.Write(p)
}

func (f diskFile) Sync() error { return f.disk.step() }

func (f diskFile) Close() error {
	failed := f.disk.step()
	if err := f.file.Close(); failed == nil {
		return err
	}
	return failed
}
