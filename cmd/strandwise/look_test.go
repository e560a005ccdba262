package main

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"io"
	"net/http"
	"net/http/cookiejar"
	"path/filepath"
	"strings"
	"testing"
)

func TestLookAtNoSet(t *testing.T) {
	dir := t.TempDir()
	set := write(t, dir, "plain.txt", "no set\n")
	for _, tc := range []struct {
		name string
		args []string
		code int
		says string
	}{
		{"nothing there", []string{"look", filepath.Join(dir, "none")}, exitFault, "none"},
		{"a file", []string{"look", set}, exitFault, "not the folder of a set"},
		{"an empty folder", []string{"look", dir}, exitFault, "holds no finished set"},
		{"no set named", []string{"look"}, exitUsage, "arg"},
		{"no port", []string{"look", dir, "--port", "70000"}, exitUsage, "--port: 70000 is no port"},
	} {
		t.Run(tc.name, func(t *testing.T) {
			o := strandwise(t, "", tc.args...)
			if o.code != tc.code {
				t.Errorf("exit code %d, want %d", o.code, tc.code)
			}
			checkSays(t, o, tc.says)
		})
	}
}

// TestLook grows a set, opens its page by the address that look prints, and ends
// look as Ctrl-C does.
func TestLook(t *testing.T) {
	dir := t.TempDir()
	csv, set := write(t, dir, "long.csv", longCSV(2)), filepath.Join(dir, "set")
	must(t, "grow", csv, "--rate", "50", "--per-take", "2", "--gate", "all=off", "--out", set)
	out, in := io.Pipe()
	ctx, end := context.WithCancel(context.Background())
	defer end()
	var fault bytes.Buffer
	done := make(chan int, 1)
	go func() {
		s := Streams{In: strings.NewReader(""), Out: in, Err: &fault}
		done <- ExitCode(s, Run(ctx, s, []string{"look", set, "--json"}))
		in.Close()
	}()
	var said looking
	if err := json.NewDecoder(bufio.NewReader(out)).Decode(&said); err != nil {
		t.Fatal(err)
	}
	jar, err := cookiejar.New(nil)
	if err != nil {
		t.Fatal(err)
	}
	answer, err := (&http.Client{Jar: jar}).Get(said.Address)
	if err != nil {
		t.Fatal(err)
	}
	page, err := io.ReadAll(answer.Body)
	answer.Body.Close()
	if err != nil || answer.StatusCode != http.StatusOK || !bytes.Contains(page, []byte("Do you believe these takes?")) {
		t.Errorf("status %d, error %v: %.100s", answer.StatusCode, err, page)
	}
	if said.Takes < 4 {
		t.Errorf("%d takes", said.Takes)
	}
	end()
	if code := <-done; code != exitDone {
		t.Errorf("exit code %d: %s", code, fault.String())
	}
}
