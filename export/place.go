package export

import (
	"crypto/rand"
	"encoding/hex"
	"path/filepath"
	"regexp"
)

// partial is the ending of a file that is not finished. Before it stand eight
// random digits, so that two processes making the same file do not meet.
const partial = ".partial"

var partialName = regexp.MustCompile(`^(.+)\.[0-9a-f]{8}` + regexp.QuoteMeta(partial) + `$`)

// final returns the name that a file will have once it is finished, and
// whether it is not.
func final(name string) (string, bool) {
	if m := partialName.FindStringSubmatch(name); m != nil {
		return m[1], true
	}
	return name, false
}

// temporary is a file under its temporary name.
type temporary struct {
	file
	disk disk
	path string // the name it is to have
	now  string // the name it has
}

// createTemporary begins the file of a path under a name of its own.
func createTemporary(d disk, path string) (*temporary, error) {
	var digits [4]byte
	if _, err := rand.Read(digits[:]); err != nil {
		return nil, err
	}
	now := path + "." + hex.EncodeToString(digits[:]) + partial
	f, err := d.create(now)
	if err != nil {
		return nil, err
	}
	return &temporary{f, d, path, now}, nil
}

// place finishes the file and gives it its name, taking the place of one that
// has it: its bytes and then its name reach the disk before place returns. When
// it fails the temporary file is removed, as far as the disk allows.
func (t *temporary) place() error { return t.placeBy(t.disk.rename) }

// publish is place, unless a file has the name: then that file stays and the
// error is fs.ErrExist.
func (t *temporary) publish() error { return t.placeBy(t.disk.publish) }

func (t *temporary) placeBy(rename func(from, to string) error) error {
	err := t.Sync()
	if closed := t.Close(); err == nil {
		err = closed
	}
	if err == nil {
		err = rename(t.now, t.path)
	}
	if err != nil {
		_ = t.disk.remove(t.now) // the first failure is the one to tell of
		return err
	}
	return t.disk.syncDir(filepath.Dir(t.path))
}

// abandon closes and removes the file.
func (t *temporary) abandon() error {
	t.Close()
	return t.disk.remove(t.now)
}

// writeFile writes a whole file and puts it in place.
func writeFile(d disk, path string, data []byte) error {
	t, err := filled(d, path, data)
	if err != nil {
		return err
	}
	return t.place()
}

// filled returns a temporary file that holds the data.
func filled(d disk, path string, data []byte) (*temporary, error) {
	t, err := createTemporary(d, path)
	if err != nil {
		return nil, err
	}
	if _, err := t.Write(data); err != nil {
		_ = t.abandon()
		return nil, err
	}
	return t, nil
}
