package pages_test

import (
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/parquet-go/parquet-go"

	"strandwise/export/pages"
)

// BenchmarkLists writes takes of lists into nothing, by this package and by
// the two ways in which parquet-go writes columns that are known only at run
// time. MB/s counts the raw 32-bit floats. It is why this package exists:
//
//	go test -bench Lists -run '^$' ./export/pages
func BenchmarkLists(b *testing.B) {
	const frames = 128
	for _, width := range []int{6, 75} {
		signals := invented(frames, width)
		for _, way := range []struct {
			name  string
			write func(testing.TB, [][][]float32)
		}{
			{"pages", writePages},
			{"parquet-go-rows", writeRows},
			{"parquet-go-columns", writeColumns},
		} {
			b.Run(fmt.Sprintf("frames=%d/channels=%d/by=%s", frames, width, way.name), func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					way.write(b, signals)
				}
				floats := float64(b.N) * float64(len(signals)*frames*width)
				b.ReportMetric(4*floats/1e6/b.Elapsed().Seconds(), "MB/s")
			})
		}
	}
}

// invented returns 16 MB of noisy waves: takes of channels of frames.
func invented(frames, width int) [][][]float32 {
	r := rand.New(rand.NewPCG(1, 2))
	takes := make([][][]float32, 4<<20/(frames*width))
	for t := range takes {
		takes[t] = make([][]float32, width)
		for c := range takes[t] {
			for i := range frames {
				takes[t][c] = append(takes[t][c], float32(math.Sin(float64(i)/20)+0.1*r.NormFloat64()))
			}
		}
	}
	return takes
}

// groupBytes is the size of a row group for every way.
const groupBytes = 8 << 20

func writePages(t testing.TB, takes [][][]float32) {
	var columns []pages.Column
	for c := range takes[0] {
		columns = append(columns, pages.Column{Name: fmt.Sprint("channel ", c), Kind: pages.Float32List})
	}
	w, err := pages.NewWriter(io.Discard, columns)
	if err != nil {
		t.Fatal(err)
	}
	size := 0
	for _, take := range takes {
		for c, list := range take {
			dst := w.List(c, len(list))
			for i, v := range list {
				binary.LittleEndian.PutUint32(dst[4*i:], math.Float32bits(v))
			}
			size += 4 * len(list)
		}
		err := w.EndRows(1)
		if err == nil && size >= groupBytes {
			_, err = w.Flush()
			size = 0
		}
		if err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(nil, ""); err != nil {
		t.Fatal(err)
	}
}

// libraryWriter returns parquet-go's writer of the same columns, without
// statistics of floats.
func libraryWriter(width int) *parquet.GenericWriter[any] {
	group := parquet.Group{}
	options := []parquet.WriterOption{parquet.Compression(&parquet.Snappy), parquet.DataPageStatistics(false)}
	for c := range width {
		name := fmt.Sprintf("channel %03d", c)
		group[name] = parquet.List(parquet.Leaf(parquet.FloatType))
		options = append(options, parquet.SkipPageBounds(name, "list", "element"))
	}
	return parquet.NewGenericWriter[any](io.Discard, append(options, parquet.NewSchema("schema", group))...)
}

// values appends one list with its levels.
func values(dst []parquet.Value, column int, list []float32) []parquet.Value {
	for i, v := range list {
		dst = append(dst, parquet.FloatValue(v).Level(min(i, 1), 1, column))
	}
	return dst
}

func writeRows(t testing.TB, takes [][][]float32) {
	w := libraryWriter(len(takes[0]))
	var row parquet.Row
	size := 0
	for _, take := range takes {
		row = row[:0]
		for c, list := range take {
			row = values(row, c, list)
		}
		_, err := w.WriteRows([]parquet.Row{row})
		if size += 4 * len(row); err == nil && size >= groupBytes {
			err = w.Flush()
			size = 0
		}
		if err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
}

func writeColumns(t testing.TB, takes [][][]float32) {
	w := libraryWriter(len(takes[0]))
	var list []parquet.Value
	size := 0
	for _, take := range takes {
		for c, column := range w.ColumnWriters() {
			list = values(list[:0], c, take[c])
			if _, err := column.WriteRowValues(list); err != nil {
				t.Fatal(err)
			}
			size += 4 * len(list)
		}
		if size >= groupBytes {
			if err := w.Flush(); err != nil {
				t.Fatal(err)
			}
			size = 0
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
}
