package delimited_test

import (
	"bytes"
	"fmt"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"
	"time"

	"strandwise/ingest/delimited"
	"strandwise/ingest/raw"
)

// shape is how a table is written.
type shape struct {
	name     string
	decimals int  // -1 for as many as a float64 needs
	long     bool // identity columns, in takes of 128 frames
	quoted   bool // quotes around every field
	stamps   bool // RFC 3339 in place of seconds
}

// table invents a file of time and six channels.
func table(bytesWanted int, s shape) []byte {
	rng := rand.New(rand.NewPCG(1, 1))
	var b bytes.Buffer
	if s.long {
		b.WriteString("take,label,subject,")
	}
	begin := time.Date(2024, 1, 2, 3, 4, 5, 0, time.UTC)
	b.WriteString("time,left.acc.x,left.acc.y,left.acc.z,left.gyro.x,left.gyro.y,left.gyro.z\n")
	for i := 0; b.Len() < bytesWanted; i++ {
		if s.long {
			fmt.Fprintf(&b, "t%05d,wave,ana,", i/128)
		}
		if s.stamps {
			b.WriteString(begin.Add(time.Duration(i) * 20 * time.Millisecond).Format(time.RFC3339Nano))
		} else {
			b.WriteString(strconv.FormatFloat(float64(i)*0.02, 'f', 2, 64))
		}
		for range 6 {
			b.WriteByte(',')
			b.WriteString(strconv.FormatFloat(rng.NormFloat64(), 'f', s.decimals, 64))
		}
		b.WriteByte('\n')
	}
	if s.quoted {
		text := strings.NewReplacer(",", `","`, "\n", "\"\n\"").Replace(b.String())
		return []byte(`"` + strings.TrimSuffix(text, `"`))
	}
	return b.Bytes()
}

// BenchmarkRead measures the reader alone, on one core, in MB of file per
// second:
//
//	go test -run '^$' -bench Read -count 5 ./ingest/delimited
func BenchmarkRead(b *testing.B) {
	for _, c := range []shape{
		{name: "rows=plain", decimals: 6},
		{name: "rows=shortest", decimals: -1},
		{name: "rows=long", decimals: 6, long: true},
		{name: "rows=stamps", decimals: 6, stamps: true},
		{name: "rows=quoted", decimals: 6, quoted: true},
	} {
		b.Run(c.name, func(b *testing.B) {
			text := table(32<<20, c)
			b.SetBytes(int64(len(text)))
			b.ReportAllocs()
			for b.Loop() {
				for _, err := range (delimited.Format{}).Read(bytes.NewReader(text), raw.Input{Name: "b.csv", Notice: func(string, string) {}}) {
					if err != nil {
						b.Fatal(err)
					}
				}
			}
		})
	}
}
