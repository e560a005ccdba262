package main

import (
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

const head = "take,label,subject,split,frame,c0,c1\n"

// sound is a take that has nothing wrong with it.
const sound = "a,bow,ember,train,0,1,2\na,bow,ember,train,1,2,2\na,bow,ember,train,2,4,3\n"

func TestFaultsOfRecordings(t *testing.T) {
	for _, tc := range []struct {
		name, text string
		says       []string // beside the file's name
	}{
		{"empty", "", []string{"empty"}},
		{"header only", head, []string{"no"}},
		{"missing value", head + sound + "b,wave,pim,train,0,1,\nb,wave,pim,train,1,2,3\n", []string{":5", "c1"}},
		{"text in a number", head + sound + "b,wave,pim,train,0,1,two\nb,wave,pim,train,1,2,3\n", []string{":5", "c1", "two"}},
		{"NaN", head + sound + "b,wave,pim,train,0,NaN,2\nb,wave,pim,train,1,2,3\n", []string{":5", "c0", "NaN"}},
		{"infinity", head + sound + "b,wave,pim,train,0,1,inf\nb,wave,pim,train,1,2,3\n", []string{":5", "c1"}},
		{"a take of one frame", head + sound + "b,wave,pim,train,0,1,2\n", []string{":5", "take b", "1 frame"}},
		{"a constant take", head + sound + "b,wave,pim,train,0,1,2\nb,wave,pim,train,1,1,2\n", []string{":5", "take b", "constant"}},
		{"two labels for one take", head + sound + "b,wave,pim,train,0,1,2\nb,bow,pim,train,1,2,2\n", []string{":6", "take b", "label"}},
		{"rows apart", head + sound + "b,wave,pim,train,0,1,2\nb,wave,pim,train,1,2,2\na,bow,ember,train,3,4,5\n", []string{":7", ":2", "take a"}},
		{"a frame twice", head + "a,bow,ember,train,0,1,2\na,bow,ember,train,0,2,2\n", []string{":3", "take a"}},
		{"too few fields", head + sound + "b,wave,pim,train,0,1\n", []string{":5"}},
		{"no label", "take,frame,c0\na,0,1\na,1,2\n", []string{":2", "label"}},
		{"no channel", "take,label,frame\na,bow,0\na,bow,1\n", []string{"channel"}},
		{"binary", "\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR", []string{"PNG"}},
		{"bytes", "take,label\x00\x01\x02\x03", []string{}},
		{"unknown unit", "take,label,frame,c0 [furlong]\na,bow,0,1\na,bow,1,2\n", []string{"c0", "furlong", "m/s^2"}},
		{"unknown split", head + strings.ReplaceAll(sound, "train", "later"), []string{"later", "train and test"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			dir := t.TempDir()
			csv := write(t, dir, "wrong.csv", tc.text)
			set := filepath.Join(dir, "set")
			o := strandwise(t, "", "grow", csv, "--rate", "50", "--per-take", "2", "--out", set)
			checkFault(t, o, append(tc.says, "wrong.csv")...)
			checkAbsent(t, set)
		})
	}
}

func TestMissingColumnNamesFileAndChannel(t *testing.T) {
	dir := t.TempDir()
	one := write(t, dir, "one.csv", head+sound)
	two := write(t, dir, "two.csv", "take,label,subject,split,frame,c0\nb,wave,pim,train,0,1\nb,wave,pim,train,1,2\n")
	set := filepath.Join(dir, "set")
	checkFault(t, strandwise(t, "", "grow", one, two, "--rate", "50", "--out", set), "two.csv", "c1", "one.csv")
	checkAbsent(t, set)
}

func TestRecordingThatIsNotThere(t *testing.T) {
	set := filepath.Join(t.TempDir(), "set")
	checkFault(t, strandwise(t, "", "grow", "nowhere.csv", "--rate", "50", "--out", set), "nowhere.csv")
	checkAbsent(t, set)
}

func TestOutFolderThatCannotTakeASet(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(2))
	grow := func(out string) outcome {
		return strandwise(t, "", "grow", csv, "--rate", "50", "--per-take", "2", "--out", out)
	}
	write(t, dir, "full/letter.txt", "something else")
	checkFault(t, grow(filepath.Join(dir, "full")), "full", "letter.txt")
	checkFault(t, grow(filepath.Join(csv, "set")), "long.csv")
	set := filepath.Join(dir, "set")
	if o := grow(set); o.code != exitDone {
		t.Fatal(o.err)
	}
	checkFault(t, grow(set), "already holds a set")
	must(t, "verify", set)
}

func TestReadOnlyOutFolder(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(2))
	locked := filepath.Join(dir, "locked")
	if err := os.Mkdir(locked, 0o555); err != nil {
		t.Fatal(err)
	}
	if os.WriteFile(filepath.Join(locked, "try"), nil, 0o666) == nil {
		t.Skip("skipped: this user may write into read-only folders")
	}
	set := filepath.Join(locked, "set")
	checkFault(t, strandwise(t, "", "grow", csv, "--rate", "50", "--out", set), "locked")
	checkAbsent(t, set)
}

// TestFullDisk: a set that will not fit is refused before it is made, with what
// it needs and what there is. What a disk that fills up later does is tested in
// package export and by .ci/kill.
func TestFullDisk(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(8))
	small := filepath.Join(dir, "small")
	if err := os.Mkdir(small, 0o777); err != nil {
		t.Fatal(err)
	}
	if err := syscall.Mount("tmpfs", small, "tmpfs", 0, "size=200k"); err != nil {
		t.Skipf("skipped: no small disk can be mounted here: %v", err)
	}
	defer syscall.Unmount(small, 0)
	set := filepath.Join(small, "set")
	checkFault(t, strandwise(t, "", "grow", csv, "--rate", "50", "--per-take", "64", "--out", set), "about 2.1 MB are to be written, and 0.2 MB are free there", "small")
	checkAbsent(t, set)
}

func TestSetThatIsNone(t *testing.T) {
	dir := t.TempDir()
	checkFault(t, strandwise(t, "", "verify", dir), dir)
}

func checkFault(t *testing.T, o outcome, says ...string) {
	t.Helper()
	if o.code != exitFault {
		t.Errorf("exit code %d, want %d\n%s%s", o.code, exitFault, o.out, o.err)
	}
	checkSays(t, o, says...)
}

func checkSays(t *testing.T, o outcome, says ...string) {
	t.Helper()
	for _, s := range says {
		if !strings.Contains(o.err, s) {
			t.Errorf("the message does not name %q:\n%s", s, o.err)
		}
	}
}

// checkAbsent checks that nothing was left where a set would be.
func checkAbsent(t *testing.T, path string) {
	t.Helper()
	if _, err := os.Lstat(path); !os.IsNotExist(err) {
		t.Errorf("%s was left behind", path)
	}
}
