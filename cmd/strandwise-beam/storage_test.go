package main

import (
	"bytes"
	"fmt"
	"io"
	"log"
	"net/http"
	"net/http/httptest"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"github.com/johannesboyne/gofakes3"
	"github.com/johannesboyne/gofakes3/backend/s3mem"

	"strandwise/channels"
	"strandwise/export"
)

// storage is object storage on the loopback interface that speaks the protocol
// of S3 and fails as it is told.
type storage struct {
	*httptest.Server
	backend gofakes3.Backend

	mu     sync.Mutex
	puts   map[string]int // requests to write each object
	order  []string       // objects in the order of the first request
	failed int
	fail   func(nth, try int, name string) bool // whether a try to write the nth object fails
}

const bucket = "lab"

func newStorage(t *testing.T) *storage {
	t.Helper()
	s := &storage{backend: s3mem.New()}
	fake := gofakes3.New(s.backend, gofakes3.WithLogger(gofakes3.StdLog(log.New(io.Discard, "", 0)))).Server()
	s.Server = httptest.NewServer(http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		if r.Method == http.MethodPut && s.strikes(strings.TrimPrefix(r.URL.Path, "/"+bucket+"/")) {
			// Half of the object arrives, and the answer is that of a server in trouble.
			io.CopyN(io.Discard, r.Body, r.ContentLength/2)
			http.Error(w, "<Error><Code>InternalError</Code></Error>", http.StatusInternalServerError)
			return
		}
		fake.ServeHTTP(w, r)
	}))
	t.Cleanup(s.Close)
	if err := s.backend.CreateBucket(bucket); err != nil {
		t.Fatal(err)
	}
	s.heal()
	return s
}

// heal forgets what was asked of the storage, which fails no more.
func (s *storage) heal() {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.puts, s.order, s.failed, s.fail = map[string]int{}, nil, 0, func(int, int, string) bool { return false }
}

func (s *storage) strikes(name string) bool {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.puts[name]++; s.puts[name] == 1 {
		s.order = append(s.order, name)
	}
	nth := 0
	for i, n := range s.order {
		if n == name {
			nth = i + 1
		}
	}
	if s.fail(nth, s.puts[name], name) {
		s.failed++
		return true
	}
	return false
}

// at returns the address of a name.
func (s *storage) at(name string) string {
	return fmt.Sprintf("s3://%s/%s?region=us-east-1&use_path_style=true&endpoint=%s", bucket, name, s.URL)
}

// environment says who asks.
func (s *storage) environment() []string {
	return []string{"AWS_ACCESS_KEY_ID=someone", "AWS_SECRET_ACCESS_KEY=something", "AWS_EC2_METADATA_DISABLED=true"}
}

func (s *storage) put(t *testing.T, name, path string) {
	t.Helper()
	data, err := os.ReadFile(path)
	if err == nil {
		_, err = s.backend.PutObject(bucket, name, map[string]string{}, bytes.NewReader(data), int64(len(data)), nil)
	}
	if err != nil {
		t.Fatal(err)
	}
}

// bring writes all objects below a name into a folder.
func (s *storage) bring(t *testing.T, below, dir string) {
	t.Helper()
	prefix := gofakes3.NewFolderPrefix(below)
	prefix.HasDelimiter = false
	list, err := s.backend.ListBucket(bucket, &prefix, gofakes3.ListBucketPage{})
	if err != nil {
		t.Fatal(err)
	}
	for _, o := range list.Contents {
		object, err := s.backend.GetObject(bucket, o.Key, nil)
		if err != nil {
			t.Fatal(err)
		}
		data, err := io.ReadAll(object.Contents)
		path := filepath.Join(dir, strings.TrimPrefix(o.Key, below))
		if err == nil {
			err = os.MkdirAll(filepath.Dir(path), 0o777)
		}
		if err == nil {
			err = os.WriteFile(path, data, 0o666)
		}
		if err != nil {
			t.Fatal(err)
		}
	}
}

// TestStorage: recordings are read from and the set is written to S3-like
// storage. Its third object fails more often than the client of the storage
// tries again by itself, and then is there.
func TestStorage(t *testing.T) {
	s, dir := newStorage(t), t.TempDir()
	local := filepath.Join(dir, "recordings")
	if err := os.Mkdir(local, 0o777); err != nil {
		t.Fatal(err)
	}
	s.put(t, "recordings/long.csv", long(t, local, 24))
	s.put(t, "recordings/README", filepath.Join(local, "long.csv")) // no recording by its name
	flags := append([]string{s.at("recordings"), "--per-take", "4", "--buckets", "4"}, quick...)

	must(t, s.environment(), append(flags, "--out", filepath.Join(dir, "out"))...)
	want := sums(t, filepath.Join(dir, "out"))

	s.fail = func(nth, try int, _ string) bool { return nth == 3 && try <= 5 }
	must(t, s.environment(), append(flags, "--out", s.at("sets/one"))...)
	if s.failed != 5 {
		t.Errorf("the storage failed %d times, want 5", s.failed)
	}
	s.bring(t, "sets/one/", filepath.Join(dir, "one"))
	same(t, want, sums(t, filepath.Join(dir, "one")))
	s.bring(t, "sets/", filepath.Join(dir, "all"))
	if left, err := os.ReadDir(filepath.Join(dir, "all")); err != nil || len(left) != 1 {
		t.Errorf("beside the set there is something: %v (%v)", left, err)
	}

	o := beamed(t, s.environment(), append(flags, "--out", s.at("sets/one"))...)
	if o.code != exitFault || !strings.Contains(o.err, "already holds a set") {
		t.Errorf("over a set: exit code %d\n%s", o.code, o.err)
	}
	alone(t, append([]string{local, "--per-take", "4", "--buckets", "4", "--out", filepath.Join(dir, "alone")}, quick...)...)
	here, err := export.ReadManifest(filepath.Join(dir, "alone"))
	if err != nil {
		t.Fatal(err)
	}
	there, err := export.ReadManifest(filepath.Join(dir, "one"))
	if err != nil {
		t.Fatal(err)
	}
	if a, b := here.Takes(channels.Synthetic), there.Takes(channels.Synthetic); a != b || b == 0 {
		t.Errorf("%d synthetic takes are made of files and %d of objects", a, b)
	}
	if there.Recordings[0].SHA256 != here.Recordings[0].SHA256 || there.Recordings[0].Path != "s3://lab/recordings/long.csv" {
		t.Errorf("the manifest says the recording is %+v", there.Recordings[0])
	}
}

// TestStorageThatDoesNotRecover: when a table cannot be written the run ends with
// exit code 1, the set is not there and no object is half there; once the storage
// is well again the same command makes the set.
func TestStorageThatDoesNotRecover(t *testing.T) {
	s, dir := newStorage(t), t.TempDir()
	s.put(t, "recordings/long.csv", long(t, dir, 24))
	flags := append([]string{s.at("recordings/long.csv"), "--per-take", "4", "--buckets", "4"}, quick...)
	must(t, s.environment(), append(flags, "--out", filepath.Join(dir, "out"))...)
	want := sums(t, filepath.Join(dir, "out"))

	s.fail = func(_, _ int, name string) bool { return strings.HasSuffix(name, "part-00002.parquet") }
	o := beamed(t, s.environment(), append(flags, "--out", s.at("set"))...)
	if o.code != exitFault || !strings.Contains(o.err, "part-00002.parquet: tried 5 times") {
		t.Errorf("exit code %d\n%s", o.code, o.err)
	}
	s.bring(t, "set/", filepath.Join(dir, "broken"))
	found := 0
	for name, sum := range sums(t, filepath.Join(dir, "broken")) {
		switch {
		case name == "manifest.json", strings.HasSuffix(name, "part-00002.parquet"), name == "unfinished/bucket-00002.json":
			t.Errorf("%s is there", name)
		case strings.HasSuffix(name, ".parquet"):
			if found++; sum != want[name] {
				t.Errorf("%s is not what it should be", name)
			}
		}
	}
	if found == 0 {
		t.Error("nothing that is whole is there")
	}
	s.heal()
	must(t, s.environment(), append(flags, "--out", s.at("set"))...)
	s.bring(t, "set/", filepath.Join(dir, "set"))
	same(t, want, sums(t, filepath.Join(dir, "set")))
	for name := range s.puts {
		if strings.HasSuffix(name, "part-00000.parquet") {
			t.Errorf("%s was made again", name)
		}
	}
}
