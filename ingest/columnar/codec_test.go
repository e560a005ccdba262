package columnar_test

import (
	"bytes"
	"fmt"
	"runtime"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/compress"

	"strandwise/ingest/raw"
)

// encoded is a row of a table each of whose columns has an encoding of its own.
type encoded struct {
	Take    string   `parquet:"take,delta"`
	Label   string   `parquet:"label,optional,dict"`
	Subject string   `parquet:"subject,plain"`
	Time    int64    `parquet:"t_us,delta"`
	Count   int32    `parquet:"count,delta"`
	X       float32  `parquet:"ax,split"`
	Y       float64  `parquet:"ay,split"`
	Z       float64  `parquet:"az,dict"`
	W       *float32 `parquet:"aw,optional"`
}

func encodedRows() []encoded {
	var rows []encoded
	for i := range int64(300) {
		n, w := int32(i*i), float32(i)/4
		row := encoded{Take: fmt.Sprint("take ", i/100), Label: "wave", Subject: "ana", Time: 5000 * (i % 100), Count: n, X: float32(i) / 2, Y: 1 / float64(i+1), Z: float64(i % 3), W: &w}
		if i%7 == 0 {
			row.W = nil
		}
		rows = append(rows, row)
	}
	return rows
}

// TestEncodings reads the encodings and compressions of Parquet, in both
// versions of its pages, as parquet-go writes them.
func TestEncodings(t *testing.T) {
	var want []*raw.Take
	for _, codec := range []compress.Codec{&parquet.Uncompressed, &parquet.Snappy, &parquet.Gzip, &parquet.Brotli, &parquet.Zstd, &parquet.Lz4Raw} {
		for _, version := range []int{1, 2} {
			for _, page := range []int{64, 1 << 20} {
				name := fmt.Sprintf("%s, version %d, pages of %d bytes", codec, version, page)
				data := write(t, encodedRows(), parquet.Compression(codec), parquet.DataPageVersion(version), parquet.PageBufferSize(page), parquet.MaxRowsPerRowGroup(170))
				got, _, err := readAll(bytes.NewReader(data), raw.Input{})
				if err != nil {
					t.Fatalf("%s: %v", name, err)
				}
				if want == nil {
					checkEncoded(t, got)
					want = got
				}
				if diff := cmp.Diff(want, got, same...); diff != "" {
					t.Errorf("%s: %s", name, diff)
				}
			}
		}
	}
}

func checkEncoded(t *testing.T, takes []*raw.Take) {
	t.Helper()
	frame := 0
	for _, take := range takes {
		if err := sound(take); err != nil {
			t.Fatal(err)
		}
		for i, at := range take.Time {
			row := encodedRows()[frame]
			v := take.Data[5*i : 5*i+5]
			w := v[4] != v[4]
			if row.W != nil {
				w = v[4] == float64(*row.W)
			}
			if take.Take != row.Take || take.Label != "wave" || take.Subject != "ana" || at != float64(row.Time)/1e6 ||
				v[0] != float64(row.Count) || v[1] != float64(row.X) || v[2] != row.Y || v[3] != row.Z || !w {
				t.Fatalf("frame %d: take %q at %g s, %v", frame, take.Take, at, v)
			}
			frame++
		}
	}
	if frame != 300 || len(takes) != 3 {
		t.Fatalf("%d frames in %d takes", frame, len(takes))
	}
}

// TestLyingLengths reads a few bytes that claim to be very many.
func TestLyingLengths(t *testing.T) {
	lz4 := write(t, encodedRows()[:20], parquet.Compression(&parquet.Lz4Raw))
	runs := write(t, encodedRows()[:20], parquet.DataPageVersion(1))
	cases := [][]byte{
		[]byte("PAR1\xff\xff\xff\x7fPAR1"),
		[]byte("\xff\xff\xff\xff\x00\x00\x00\x0f"),
		[]byte("ARROW1\x00\x00\xff\xff\xff\xff\x00\x00\x00\x0f"),
	}
	for i := 4; i < 400; i++ { // in the pages
		for _, data := range [][]byte{lz4, runs} {
			changed := bytes.Clone(data)
			changed[i], changed[i+1], changed[i+2] = 0xff, 0xff, 0x7f
			cases = append(cases, changed)
		}
	}
	const most = 300 << 20 // of which 64 MiB is what any packed page may claim
	for _, data := range cases {
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		checkSound(t, data)
		runtime.ReadMemStats(&after)
		if took := after.TotalAlloc - before.TotalAlloc; took > most {
			t.Errorf("%q…: took %d bytes", data[:12], took)
		}
	}
}
