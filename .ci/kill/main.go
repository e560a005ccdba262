// Command kill holds the given program to what it promises of a set that is
// being written: whatever happens to the process or the disk, the folder holds
// either no manifest, and the same command goes on to the same bytes, or a whole
// set; nothing else.
//
//	go run ./kill -n 100 -full 20 -in DIR ./strandwise
//
// It lets one run of grow finish, and then, at random moments of further runs,
// kills the process, asks it to stop, fills the disk (a small tmpfs, which needs
// the right to mount one) and makes the folder read-only. The moments are drawn
// from -seed.
package main

import (
	"flag"
	"fmt"
	"log"
	"math/rand/v2"
	"os"
	"path/filepath"
	"time"
)

func main() {
	n := flag.Int("n", 20, "times the process is killed, and a fifth as often asked to stop")
	full := flag.Int("full", 5, "times the disk is filled, and the folder made read-only")
	seed := flag.Uint64("seed", uint64(time.Now().UnixNano()), "seed of the random moments")
	folder := flag.String("in", os.TempDir(), "folder to work in")
	flag.Parse()
	log.SetFlags(0)
	dir, err := os.MkdirTemp(*folder, "kill")
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("seed %d\n", *seed)
	err = run(flag.Arg(0), dir, *n, *full, rand.New(rand.NewPCG(*seed, 1)))
	if gone := os.RemoveAll(dir); gone != nil {
		log.Print(gone)
	}
	if err != nil {
		log.Fatal(err)
	}
}

func run(program, dir string, n, full int, random *rand.Rand) error {
	program, err := filepath.Abs(program)
	if err != nil {
		return err
	}
	t := &trial{program: program, dir: dir, random: random}
	if err := t.prepare(); err != nil {
		return err
	}
	for _, disturb := range []struct {
		name  string
		times int
		how   disturbance
	}{
		{"killed", n, kill{}}, {"asked to stop", (n + 4) / 5, stop{}}, {"disk filled", full, fill{}}, {"made read-only", full, readOnly{bound: t.user != nil || os.Geteuid() != 0}},
	} {
		if err := t.disturb(disturb.name, disturb.times, disturb.how); err != nil {
			return fmt.Errorf("%s: %w", disturb.name, err)
		}
	}
	return nil
}
