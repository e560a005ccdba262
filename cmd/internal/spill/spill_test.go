package spill_test

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/cmd/internal/spill"
)

// invented draws a take of one of these layouts and skeletons.
func invented(t *rapid.T, id string, layouts []*channels.Layout, skeletons []*body.Skeleton) *channels.Take {
	l := rapid.SampledFrom(layouts).Draw(t, "layout")
	n := rapid.IntRange(1, 20).Draw(t, "frames")
	any64 := rapid.Custom(func(t *rapid.T) float64 { return math.Float64frombits(rapid.Uint64().Draw(t, "bits")) })
	return &channels.Take{
		ID: id, Label: rapid.String().Draw(t, "label"), Subject: string(rapid.SliceOf(rapid.Byte()).Draw(t, "subject")),
		Session: rapid.String().Draw(t, "session"), Split: rapid.SampledFrom([]channels.Split{channels.None, channels.Train, channels.Test}).Draw(t, "split"),
		Where: rapid.String().Draw(t, "where"), Layout: l, Skeleton: rapid.SampledFrom(skeletons).Draw(t, "skeleton"),
		Time: rapid.SliceOfN(any64, n, n).Draw(t, "time"), Data: rapid.SliceOfN(any64, n*len(l.Channels), n*len(l.Channels)).Draw(t, "data"),
	}
}

func layouts() []*channels.Layout {
	return []*channels.Layout{
		{Channels: []channels.Channel{{Name: "x"}}},
		{Channels: []channels.Channel{{Name: "x"}, {Name: "y"}}},
	}
}

// TestTakesComeBack: every heap gives its takes back in order and to the bit,
// any number of times.
func TestTakesComeBack(t *testing.T) {
	dir := t.TempDir()
	rapid.Check(t, func(t *rapid.T) {
		s, err := spill.New(dir)
		if err != nil {
			t.Fatal(err)
		}
		defer s.Close()
		kinds, skeletons := layouts(), []*body.Skeleton{nil, {}, {}}
		want := map[int][]*channels.Take{}
		for i := range rapid.IntRange(0, 30).Draw(t, "takes") {
			take := invented(t, fmt.Sprint("take ", i), kinds, skeletons)
			heap := rapid.IntRange(0, 3).Draw(t, "heap")
			if err := s.Add(heap, take); err != nil {
				t.Fatal(err)
			}
			want[heap] = append(want[heap], take)
		}
		for _, heap := range []int{3, 0, 2, 1, 3, 4} {
			checkTakes(t, want[heap], s.Takes(heap))
		}
	})
	if left, err := os.ReadDir(dir); err != nil || len(left) > 0 {
		t.Errorf("left behind: %v, %v", left, err)
	}
}

func checkTakes(t *rapid.T, want []*channels.Take, got channels.Stream) {
	var takes []*channels.Take
	for take, err := range got {
		if err != nil {
			t.Fatal(err)
		}
		takes = append(takes, take)
	}
	shared := cmp.Options{
		cmp.Comparer(func(a, b *channels.Layout) bool { return a == b }),
		cmp.Comparer(func(a, b *body.Skeleton) bool { return a == b }),
		cmp.Comparer(func(a, b float64) bool { return math.Float64bits(a) == math.Float64bits(b) }),
		cmpopts.EquateEmpty(),
	}
	if diff := cmp.Diff(want, takes, shared); diff != "" {
		t.Errorf("takes (-added +read):\n%s", diff)
	}
}

// TestReceiverMayStop: the heap can be read again after a reader that stopped.
func TestReceiverMayStop(t *testing.T) {
	s, err := spill.New(t.TempDir())
	if err != nil {
		t.Fatal(err)
	}
	defer s.Close()
	l := layouts()[0]
	for i := range 3 {
		if err := s.Add(0, &channels.Take{ID: fmt.Sprint(i), Layout: l, Time: []float64{0}, Data: []float64{float64(i)}}); err != nil {
			t.Fatal(err)
		}
	}
	for range 2 {
		for take, err := range s.Takes(0) {
			if err != nil || take.ID != "0" {
				t.Errorf("%v, %v, want take 0", take, err)
			}
			break
		}
	}
}

// TestFaultsAreErrors: a folder that is not there, and a file that is cut short
// behind the program's back.
func TestFaultsAreErrors(t *testing.T) {
	dir := t.TempDir()
	if _, err := spill.New(filepath.Join(dir, "nowhere")); err == nil {
		t.Error("no error of a folder that is not there")
	}
	s, err := spill.New(dir)
	if err != nil {
		t.Fatal(err)
	}
	defer s.Close()
	if err := s.Add(0, &channels.Take{ID: "a", Layout: layouts()[0], Time: []float64{0}, Data: []float64{1}}); err != nil {
		t.Fatal(err)
	}
	for range s.Takes(0) {
		break // which writes the take to the file
	}
	files, err := filepath.Glob(filepath.Join(dir, "*"))
	if err != nil || len(files) != 1 {
		t.Fatal(files, err)
	}
	if err := os.Truncate(files[0], 5); err != nil {
		t.Fatal(err)
	}
	for take, err := range s.Takes(0) {
		if err == nil {
			t.Errorf("take %v of a file that was cut short", take)
		}
	}
}

// BenchmarkSpill writes takes of 128 frames and 6 channels to a file and reads
// them again, and reports the bytes of their numbers per second.
//
//	go test -bench Spill -run '^$' ./cmd/internal/spill
func BenchmarkSpill(b *testing.B) {
	l := &channels.Layout{Channels: make([]channels.Channel, 6)}
	take := &channels.Take{ID: "a take", Layout: l, Time: make([]float64, 128), Data: make([]float64, 128*6)}
	const takes = 4096
	for b.Loop() {
		s, err := spill.New(b.TempDir())
		if err != nil {
			b.Fatal(err)
		}
		for i := range takes {
			if err := s.Add(i%16, take); err != nil {
				b.Fatal(err)
			}
		}
		for heap := range 16 {
			for _, err := range s.Takes(heap) {
				if err != nil {
					b.Fatal(err)
				}
			}
		}
		if err := s.Close(); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.N)*takes*128*7*8/1e6/b.Elapsed().Seconds(), "MB/s")
}
