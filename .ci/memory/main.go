// Command memory writes a long invented recording of a given size, grows or
// checks it with the given program and reports the program's peak resident
// memory.
//
//	go run ./memory -mb 1000 -limit 300 ./strandwise
//	go run ./memory -do check -mb 2000 -limit 200 ./strandwise
//
// The recording is one CSV of many takes: two wrist channels of three axes at
// 50 Hz, sines of random frequency with noise.
package main

import (
	"bufio"
	"flag"
	"fmt"
	"log"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"syscall"
	"time"
)

func main() {
	do := flag.String("do", "grow", "what to do with the recording: grow or check")
	mb := flag.Int("mb", 100, "size of the recording in MB")
	limit := flag.Int64("limit", 300, "most resident memory allowed, in MiB")
	perTake := flag.Int("per-take", 4, "synthetic takes for each recorded one")
	folder := flag.String("in", os.TempDir(), "folder to work in")
	flag.Parse()
	log.SetFlags(0)
	dir, err := os.MkdirTemp(*folder, "memory")
	if err != nil {
		log.Fatal(err)
	}
	peak, err := measure(flag.Arg(0), *do, dir, *mb, *perTake)
	if err := os.RemoveAll(dir); err != nil {
		log.Print(err)
	}
	if err != nil {
		log.Fatal(err)
	}
	if peak > *limit {
		log.Fatalf("peak of %d MiB is above %d MiB", peak, *limit)
	}
}

// measure grows or checks a recording and returns the peak resident memory in
// MiB.
func measure(program, do, dir string, mb, perTake int) (int64, error) {
	recording := filepath.Join(dir, "long.csv")
	takes, err := write(recording, mb)
	if err != nil {
		return 0, err
	}
	begin := time.Now()
	args := []string{do, recording}
	if do == "grow" {
		args = append(args, "--per-take", strconv.Itoa(perTake), "--out", filepath.Join(dir, "set"))
	}
	run := exec.Command(program, args...)
	run.Stdout, run.Stderr = os.Stdout, os.Stderr
	if err := run.Run(); err != nil {
		return 0, err
	}
	peak := run.ProcessState.SysUsage().(*syscall.Rusage).Maxrss / 1024
	fmt.Printf("%s of %d MB, %d takes: peak resident %d MiB, %.0f s\n", do, mb, takes, peak, time.Since(begin).Seconds())
	return peak, nil
}

// write writes a recording of at least mb megabytes and returns its number of
// takes.
func write(path string, mb int) (int, error) {
	f, err := os.Create(path)
	if err != nil {
		return 0, err
	}
	defer f.Close()
	w := bufio.NewWriterSize(f, 1<<20)
	fmt.Fprintln(w, "take,label,subject,time_s,left_wrist.accel.x,left_wrist.accel.y,left_wrist.accel.z,right_wrist.accel.x,right_wrist.accel.y,right_wrist.accel.z")
	rng := rand.New(rand.NewPCG(1, 2))
	size, take := 0, 0
	for ; size < mb*1_000_000; take++ {
		line := []byte(nil)
		frequency := 0.5 + float64(take%6)/3 + 0.1*rng.NormFloat64()
		for i := range 128 {
			line = fmt.Appendf(line[:0], "t%07d,cue-%d,person-%d,%.2f", take, take%6, take%10, float64(i)/50)
			for c := range 6 {
				v := 3*math.Sin(2*math.Pi*frequency*float64(i)/50+float64(c)) + 0.1*rng.NormFloat64()
				line = strconv.AppendFloat(append(line, ','), v, 'f', 5, 64)
			}
			line = append(line, '\n')
			size += len(line)
			if _, err := w.Write(line); err != nil {
				return 0, err
			}
		}
	}
	return take, w.Flush()
}
