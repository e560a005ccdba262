package recording_test

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/array"
	"github.com/apache/arrow/go/v15/arrow/ipc"
	"github.com/apache/arrow/go/v15/arrow/memory"
	"github.com/apache/arrow/go/v15/parquet/file"
	"github.com/apache/arrow/go/v15/parquet/pqarrow"
	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/export"
	"strandwise/export/recording"
)

// table is a file read back by arrow/go.
type table struct {
	fields   []string // "name: type", with a ? where nulls may be
	rows     []map[string]any
	metadata map[string]string
}

// columnarForms are the forms of one row a take, each with a reader that shares
// no code with what writes it, but for the library under Arrow.
func columnarForms() map[string]func(data []byte) (*table, error) {
	return map[string]func([]byte) (*table, error){
		"parquet": readParquet, "arrow file": readArrowFile, "arrow stream": readArrowStream,
	}
}

func formOf(name string) form {
	all := forms()
	return all[slices.IndexFunc(all, func(f form) bool { return f.name == name })]
}

func readParquet(data []byte) (*table, error) {
	f, err := file.NewParquetReader(bytes.NewReader(data))
	if err != nil {
		return nil, err
	}
	defer f.Close()
	out := newTable(map[string]string{})
	for _, kv := range f.MetaData().KeyValueMetadata() {
		out.metadata[kv.Key] = kv.GetValue()
	}
	r, err := pqarrow.NewFileReader(f, pqarrow.ArrowReadProperties{}, memory.DefaultAllocator)
	if err != nil {
		return nil, err
	}
	t, err := r.ReadTable(context.Background())
	if err != nil {
		return nil, err
	}
	batches := array.NewTableReader(t, 0)
	for batches.Next() {
		out.add(batches.Record())
	}
	if int64(len(out.rows)) != f.NumRows() {
		return nil, fmt.Errorf("%d rows read, the footer says %d", len(out.rows), f.NumRows())
	}
	return out, batches.Err()
}

func readArrowFile(data []byte) (*table, error) {
	r, err := ipc.NewFileReader(bytes.NewReader(data))
	if err != nil {
		return nil, err
	}
	out := newTable(r.Schema().Metadata().ToMap())
	for i := range r.NumRecords() {
		batch, err := r.Record(i)
		if err != nil {
			return nil, err
		}
		out.add(batch)
	}
	return out, r.Close()
}

func readArrowStream(data []byte) (*table, error) {
	r, err := ipc.NewReader(bytes.NewReader(data))
	if err != nil {
		return nil, err
	}
	out := newTable(r.Schema().Metadata().ToMap())
	for r.Next() {
		out.add(r.Record())
	}
	return out, r.Err()
}

func newTable(metadata map[string]string) *table { return &table{metadata: metadata} }

func (t *table) add(batch arrow.Record) {
	t.fields = nil
	first := len(t.rows)
	for range batch.NumRows() {
		t.rows = append(t.rows, map[string]any{})
	}
	for c, field := range batch.Schema().Fields() {
		kind := field.Type.String()
		if list, ok := field.Type.(*arrow.ListType); ok {
			kind = fmt.Sprintf("list<%s>", list.Elem())
		}
		if field.Nullable {
			kind += "?"
		}
		t.fields = append(t.fields, field.Name+": "+kind)
		for i := range int(batch.NumRows()) {
			t.rows[first+i][field.Name] = valueOf(batch.Column(c), i)
		}
	}
}

func valueOf(column arrow.Array, i int) any {
	if column.IsNull(i) {
		return nil
	}
	switch a := column.(type) {
	case *array.String:
		return strings.Clone(a.Value(i))
	case *array.Int32:
		return a.Value(i)
	case *array.Float64:
		return a.Value(i)
	case *array.List:
		from, to := a.ValueOffsets(i)
		return slices.Clone(a.ListValues().(*array.Float32).Float32Values()[from:to])
	}
	panic(fmt.Sprintf("arrow made a %T", column))
}

// rowOf is what a row must say of a take.
func rowOf(take *channels.Take, splits bool) map[string]any {
	row := map[string]any{
		"id": take.ID, "label": take.Label, "subject": take.Subject, "session": take.Session, "origin": "recorded",
		"source": nil, "draw": nil, "rank": nil, "method": nil, "parameters": nil,
		"frames": int32(take.Frames()), "rate_hz": take.Rate(), "start_s": take.Time[0],
	}
	var clock []float32
	values := make([][]float32, take.Width())
	for i, at := range take.Time {
		clock = append(clock, float32(at-take.Time[0]))
		for c, v := range take.Frame(i) {
			values[c] = append(values[c], float32(v))
		}
	}
	row["time_s"] = clock
	for c, ch := range take.Layout.Channels {
		row[ch.Name] = values[c]
	}
	if splits {
		row["split"] = string(take.Split)
	}
	return row
}

// TestColumnarReadsBack holds every row, and what the metadata say, against the
// takes.
func TestColumnarReadsBack(t *testing.T) {
	for name, read := range columnarForms() {
		t.Run(name, func(t *testing.T) {
			rapid.Check(t, func(t *rapid.T) {
				takes := drawTakes(t)
				var file bytes.Buffer
				if err := formOf(name).write(&file, takes); err != nil {
					t.Fatal(err)
				}
				got, err := read(file.Bytes())
				if err != nil {
					t.Fatal(err)
				}
				splits := slices.ContainsFunc(takes, func(t *channels.Take) bool { return t.Split != channels.None })
				var want []map[string]any
				for _, take := range takes {
					want = append(want, rowOf(take, splits))
				}
				if diff := cmp.Diff(want, got.rows, cmpopts.EquateNaNs()); diff != "" {
					t.Fatalf("rows (-want +got):\n%s", diff)
				}
				checkSkeletons(t, takes, got.metadata[export.SkeletonsKey])
			})
		})
	}
}

// checkSkeletons holds the skeletons of a file against those of the takes.
func checkSkeletons(t rapid.TB, takes []*channels.Take, text string) {
	got := map[string]string{} // root of the skeleton of each take
	if text != "" {
		var list []export.SkeletonTakes
		if err := json.Unmarshal([]byte(text), &list); err != nil {
			t.Fatal(err)
		}
		for _, entry := range list {
			for _, id := range entry.Takes {
				got[id] = entry.Skeleton.Joints[0].Name
			}
		}
	}
	want := map[string]string{}
	for _, take := range takes {
		if take.Skeleton != nil {
			want[take.ID] = take.Skeleton.Joints[0].Name
		}
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Fatalf("skeletons (-want +got):\n%s", diff)
	}
}

// TestColumnarColumns: both formats have the columns of a set's table takes.
func TestColumnarColumns(t *testing.T) {
	takes := puppets()
	takes[2].Split = channels.Train
	for name, read := range columnarForms() {
		got, err := read(formOf(name).file(t, takes))
		if err != nil {
			t.Fatal(err)
		}
		want := []string{
			"id: utf8", "label: utf8", "subject: utf8", "session: utf8", "origin: utf8", "source: utf8?", "draw: int32?", "rank: int32?",
			"method: utf8?", "parameters: utf8?", "frames: int32", "rate_hz: float64", "start_s: float64", "time_s: list<float32>",
			"Left Hand.pos.x: list<float32>", "Left Hand.pos.y: list<float32>", "strings: list<float32>", "split: utf8",
		}
		if diff := cmp.Diff(want, got.fields); diff != "" {
			t.Errorf("%s (-want +got):\n%s", name, diff)
		}
		var said export.FileLayout
		if err := json.Unmarshal([]byte(got.metadata[export.LayoutKey]), &said); err != nil {
			t.Fatal(err)
		}
		if said.Table != export.Takes || said.ProgramVersion != "0.1.0" || said.RateHz != nil || len(said.Channels) != 3 || said.Channels[1].Unit != "m" {
			t.Errorf("%s: the metadata say %+v", name, said)
		}
		if _, ok := got.metadata[export.SkeletonsKey]; ok {
			t.Errorf("%s: there is no skeleton, but metadata of some", name)
		}
	}
}

// TestManyTakes writes more than one row group or batch holds.
func TestManyTakes(t *testing.T) {
	l := layout("x", "y")
	var takes []*channels.Take
	const frames = 100_000
	for n := range 12 {
		take := &channels.Take{ID: fmt.Sprint(n), Label: "wave", Layout: l, Data: make([]float64, 2*frames)}
		for i := range frames {
			take.Time = append(take.Time, float64(i)/100)
			take.Data[2*i] = math.Sin(float64(n*i) / 1000)
		}
		takes = append(takes, take)
	}
	for name, read := range columnarForms() {
		got, err := read(formOf(name).file(t, takes))
		if err != nil {
			t.Fatal(err)
		}
		if len(got.rows) != len(takes) {
			t.Fatalf("%s: %d rows", name, len(got.rows))
		}
		for i, take := range takes {
			if !reflect.DeepEqual(rowOf(take, false), got.rows[i]) { // cmp takes ten times as long
				t.Errorf("%s: row %d is another", name, i)
			}
		}
		var said export.FileLayout
		if err := json.Unmarshal([]byte(got.metadata[export.LayoutKey]), &said); err != nil || said.RateHz == nil || *said.RateHz != 100 {
			t.Errorf("%s: the takes are of 100 Hz, the metadata say %v (%v)", name, said.RateHz, err)
		}
	}
}

// TestSameBytes: what is written depends on nothing but the takes.
func TestSameBytes(t *testing.T) {
	for _, f := range forms() {
		takes := puppets()
		takes[0].Skeleton = puppet("Hips")
		if !bytes.Equal(f.file(t, takes), f.file(t, takes)) {
			t.Errorf("%s: two runs write different bytes", f.name)
		}
	}
}

// failing is a file that fails after so many bytes.
type failing struct{ left int }

var errFull = errors.New("disk full")

func (f *failing) Write(b []byte) (int, error) {
	if len(b) > f.left {
		n := f.left
		f.left = 0
		return n, errFull
	}
	f.left -= len(b)
	return len(b), nil
}

// TestEveryFailureIsReported lets the disk be full at every byte of a file.
func TestEveryFailureIsReported(t *testing.T) {
	takes := puppets()
	for _, f := range forms() {
		size := len(f.file(t, takes))
		for n := range size {
			if err := f.write(&failing{n}, takes); !errors.Is(err, errFull) {
				t.Fatalf("%s: full after %d of %d bytes: error %v", f.name, n, size, err)
			}
		}
		if err := f.write(&failing{size}, takes); err != nil {
			t.Errorf("%s: %v", f.name, err)
		}
	}
}

// BenchmarkWrite writes takes of 128 frames of 6 channels into nothing. MB/s
// counts the 64-bit floats that the takes are held in:
//
//	go test -bench Write -run '^$' ./export/recording
func BenchmarkWrite(b *testing.B) {
	l := layout("left.accel.x", "left.accel.y", "left.accel.z", "left.gyro.x", "left.gyro.y", "left.gyro.z")
	var takes []*channels.Take
	const frames, most = 128, 500
	var contents recording.Contents
	for n := range most {
		take := &channels.Take{ID: fmt.Sprintf("take-%04d", n), Label: "wave", Subject: "ember", Layout: l}
		for i := range frames {
			take.Time = append(take.Time, float64(i)/50)
			for c := range l.Channels {
				take.Data = append(take.Data, math.Sin(float64(i+c*n)/20)*9.80665)
			}
		}
		if err := contents.Note(take); err != nil {
			b.Fatal(err)
		}
		takes = append(takes, take)
	}
	for _, f := range forms() {
		b.Run("as="+strings.ReplaceAll(f.name, " ", "-"), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				w, err := f.begin(io.Discard, &contents)
				if err != nil {
					b.Fatal(err)
				}
				for _, take := range takes {
					if err := w.Add(take); err != nil {
						b.Fatal(err)
					}
				}
				if err := w.Close(); err != nil {
					b.Fatal(err)
				}
			}
			bytes := float64(b.N) * 8 * float64(most*frames*(1+len(l.Channels)))
			b.ReportMetric(bytes/1e6/b.Elapsed().Seconds(), "MB/s")
		})
	}
}
