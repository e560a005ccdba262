package pages_test

import (
	"bytes"
	"strings"
	"testing"

	arrowfile "github.com/apache/arrow/go/v15/parquet/file"

	"strandwise/export/pages"
)

// TestCompressionIsStated: the footer names the compression, and each makes the
// file smaller than none.
func TestCompressionIsStated(t *testing.T) {
	text := strings.Repeat("the same again and again ", 1000)
	tb := &table{columns: []pages.Column{{Name: "said", Kind: pages.Text}}, values: [][]any{{text, text + "!"}}}
	sizes := map[pages.Compression]int{}
	for by, name := range map[pages.Compression]string{pages.Snappy: "SNAPPY", pages.Zstd: "ZSTD", pages.Uncompressed: "UNCOMPRESSED", "": "SNAPPY"} {
		tb.by = by
		data := tb.encode(t, nil)
		sizes[by] = len(data)
		f, err := arrowfile.NewParquetReader(bytes.NewReader(data))
		if err != nil {
			t.Fatal(err)
		}
		chunk, err := f.MetaData().RowGroup(0).ColumnChunk(0)
		if err != nil {
			t.Fatal(err)
		}
		if got := chunk.Compression().String(); got != name {
			t.Errorf("%q: the footer says %s, want %s", by, got, name)
		}
	}
	if sizes[pages.Zstd] >= sizes[pages.Snappy] || sizes[pages.Snappy] >= sizes[pages.Uncompressed] {
		t.Errorf("sizes %v", sizes)
	}
}

func TestParseCompression(t *testing.T) {
	for _, by := range pages.Compressions() {
		if got, err := pages.ParseCompression(string(by)); got != by || err != nil {
			t.Errorf("%s: %v, %v", by, got, err)
		}
	}
	for _, text := range []string{"gzip", "Snappy"} {
		if _, err := pages.ParseCompression(text); err == nil || !strings.Contains(err.Error(), "legal ones are snappy, zstd, none") {
			t.Errorf("%q: error %v", text, err)
		}
	}
	if _, err := pages.NewCompressedWriter(&bytes.Buffer{}, nil, "gzip"); err == nil {
		t.Error("a writer of an unknown compression was made")
	}
}
