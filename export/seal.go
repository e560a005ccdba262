package export

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"runtime"
	"strings"
)

// releasesLate tells of systems on which an open file cannot be removed.
const releasesLate = runtime.GOOS == "windows"

// Seal makes a set of a folder that all shards have written into: it checks
// that every bucket is there, writes the manifest and removes the folder of an
// unfinished set. The result is, byte for byte, what one writer would have
// made. The error says what is missing; one that comes with a manifest is told
// of at [Writer.Seal]. A set that is sealed already, by another
// call, is no error: its manifest is returned.
func Seal(dir string) (*Manifest, error) { return sealOn(osDisk{}, dir) }

func sealOn(d disk, dir string) (*Manifest, error) {
	s := state{filepath.Clean(dir), d}
	if _, err := os.Stat(s.path(planName)); err != nil {
		if m, err := ReadManifest(dir); err == nil {
			return m, nil
		}
		return nil, fmt.Errorf("%s holds no unfinished set", dir)
	}
	lock, err := d.claim(s.path(lockName), true)
	if err != nil {
		return nil, fmt.Errorf("seal set: %w", err)
	}
	m, err := s.seal(lock)
	if m == nil {
		err = errors.Join(err, lock.Close())
	}
	if err != nil {
		err = fmt.Errorf("seal set: %w", err)
	}
	return m, err
}

// seal writes the manifest of a set that is whole and removes the unfinished
// set's own folder. It needs the lock, alone, and closes it when it succeeds.
func (s state) seal(lock file) (*Manifest, error) {
	left, err := s.leftovers()
	if err != nil {
		return nil, err
	}
	m, card, err := s.gather()
	if err != nil {
		return nil, err
	}
	if err := s.clean(left, true); err != nil {
		return nil, err
	}
	if err := s.describe(m, card); err != nil {
		return nil, err
	}
	data, err := m.encode()
	if err != nil {
		return nil, err
	}
	if err := writeFile(s.disk, s.path(manifestName), data); err != nil {
		return nil, err
	}
	// From here on the folder holds a whole set; until its own folder is gone
	// it is one that looks unfinished, which readers do not mind.
	var own []leftover
	for _, l := range left {
		if strings.HasPrefix(l.name, stateFolder+"/") && !l.partial {
			own = append(own, l)
		}
	}
	return m, errors.Join(s.empty(own, lock), s.disk.syncDir(s.dir))
}

// gather puts the manifest together from the records of a whole set, without
// the files that describe it.
func (s state) gather() (*Manifest, Card, error) {
	p, err := s.plan()
	if err == nil && p == nil {
		err = errors.New("the plan of the unfinished set is missing")
	}
	if err != nil {
		return nil, Card{}, err
	}
	missing, err := s.missing(p.Buckets)
	if err == nil && len(missing) > 0 {
		err = fmt.Errorf("%d of %d buckets are not finished: %s; run the shards that make them (shard i of n makes the buckets that leave i when divided by n)", len(missing), p.Buckets, numbers(missing))
	}
	if err != nil {
		return nil, Card{}, err
	}
	var n notes
	if found, err := s.read(notesName, &n); err != nil || !found {
		return nil, Card{}, errors.Join(errors.New("shard 0, which scores the set, has not finished"), err)
	}
	m, err := s.collect(p, n)
	return m, n.Card, err
}

// collect adds the records up.
func (s state) collect(p *planned, n notes) (*Manifest, error) {
	all, tallies := counts{}, map[string]int64{}
	files, err := s.attachments()
	if err != nil {
		return nil, err
	}
	for _, f := range files {
		if !s.stands(f) {
			return nil, fmt.Errorf("%s is missing or cut short; run shard 0 again", f.Path)
		}
	}
	for number := range p.Buckets {
		b, err := s.bucket(number)
		if err != nil || b == nil {
			return nil, errors.Join(fmt.Errorf("bucket %d went missing", number), err)
		}
		files = append(files, b.Files...)
		for _, c := range b.Counts {
			all.add(c.Split, c.Label, c.Origin, c.Takes, c.Frames)
		}
		for name, count := range b.Tallies {
			tallies[name] += count
		}
	}
	if len(all) == 0 {
		return nil, errors.New("no take was added")
	}
	return p.manifest(files, all.list(), tallies, n.Notices), nil
}

func numbers(list []int) string {
	var out []string
	for _, n := range list {
		out = append(out, fmt.Sprint(n))
	}
	return listed(out, ", ")
}
