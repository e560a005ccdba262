package columnar_test

import (
	"bytes"
	"fmt"
	"math/rand/v2"
	"testing"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/array"
	"github.com/apache/arrow/go/v15/arrow/memory"

	"strandwise/ingest/columnar"
	"strandwise/ingest/raw"
)

// The shape of the benchmark's tables: takes of 128 frames and six channels.
const (
	benchTakes    = 4096
	benchFrames   = 128
	benchChannels = 6
)

// longRecord invents the long form.
func longRecord() arrow.Record {
	fields := []arrow.Field{{Name: "take", Type: category16}, {Name: "label", Type: category16}, {Name: "time_s", Type: f64}}
	for c := range benchChannels {
		fields = append(fields, arrow.Field{Name: fmt.Sprintf("wrist.accel%d.x", c), Type: f32})
	}
	b := array.NewRecordBuilder(memory.DefaultAllocator, arrow.NewSchema(fields, nil))
	rng := rand.New(rand.NewPCG(1, 1))
	for k := range benchTakes {
		for i := range benchFrames {
			b.Field(0).(*array.BinaryDictionaryBuilder).AppendString(fmt.Sprint("t", k))
			b.Field(1).(*array.BinaryDictionaryBuilder).AppendString("wave")
			b.Field(2).(*array.Float64Builder).Append(float64(i) * 0.02)
			for c := range benchChannels {
				b.Field(3 + c).(*array.Float32Builder).Append(float32(rng.NormFloat64()))
			}
		}
	}
	return b.NewRecord()
}

var category16 = &arrow.DictionaryType{IndexType: arrow.PrimitiveTypes.Int16, ValueType: arrow.BinaryTypes.String}

// takeRecord invents the form of one row per take.
func takeRecord() arrow.Record {
	fields := []arrow.Field{{Name: "take", Type: str}, {Name: "label", Type: category16}, {Name: "time_s", Type: arrow.ListOf(f32)}}
	for c := range benchChannels {
		fields = append(fields, arrow.Field{Name: fmt.Sprintf("wrist.accel%d.x", c), Type: arrow.ListOf(f32)})
	}
	b := array.NewRecordBuilder(memory.DefaultAllocator, arrow.NewSchema(fields, nil))
	rng := rand.New(rand.NewPCG(1, 1))
	for k := range benchTakes {
		b.Field(0).(*array.StringBuilder).Append(fmt.Sprint("t", k))
		b.Field(1).(*array.BinaryDictionaryBuilder).AppendString("wave")
		for c := range 1 + benchChannels {
			list := b.Field(2 + c).(*array.ListBuilder)
			list.Append(true)
			for i := range benchFrames {
				v := rng.NormFloat64()
				if c == 0 {
					v = float64(i) * 0.02
				}
				list.ValueBuilder().(*array.Float32Builder).Append(float32(v))
			}
		}
	}
	return b.NewRecord()
}

// BenchmarkRead measures the reader alone, on one core, in MB of file per
// second and nanoseconds per take of 128 frames and six channels:
//
//	go test -run '^$' -bench Read -count 5 ./ingest/columnar
func BenchmarkRead(b *testing.B) {
	forms := map[string]arrow.Record{"long": longRecord(), "take": takeRecord()}
	for _, form := range []string{"long", "take"} {
		for _, w := range containers()[:5] {
			b.Run(fmt.Sprintf("form=%s/file=%s", form, w.name), func(b *testing.B) {
				data := w.write(b, forms[form])
				b.SetBytes(int64(len(data)))
				b.ReportAllocs()
				n := 0
				for b.Loop() {
					for _, err := range (columnar.Format{}).Read(bytes.NewReader(data), raw.Input{Name: "b"}) {
						if err != nil {
							b.Fatal(err)
						}
						n++
					}
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(n), "ns/take")
			})
		}
	}
}
