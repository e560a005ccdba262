package bids_test

import (
	"fmt"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"
)

// table invents a table of latencies and so many channels, of which one value
// in so many is missing, 0 for none.
func table(bytesWanted, width, missing int) set {
	rng := rand.New(rand.NewPCG(1, 1))
	var b strings.Builder
	rows := []string{"t\tn/a\tLATENCY\tn/a\ts"}
	for i := range width {
		rows = append(rows, fmt.Sprintf("c%d\tx\tPOS\tmarker%d\tmm", i, i))
	}
	for i := 0; b.Len() < bytesWanted; i++ {
		b.WriteString(strconv.FormatFloat(float64(i)*0.01, 'f', 2, 64))
		for range width {
			b.WriteByte('\t')
			if missing > 0 && rng.IntN(missing) == 0 {
				b.WriteString("n/a")
			} else {
				b.WriteString(strconv.FormatFloat(rng.NormFloat64()*500, 'f', 4, 64))
			}
		}
		b.WriteByte('\n')
	}
	return small().with(motionFile, b.String()).with(channelsFile, channelTable(rows...)).with(jsonFile, `{"SamplingFrequency": 100}`)
}

// BenchmarkRead measures the reader alone, on one core, in MB of file per
// second:
//
//	go test -run '^$' -bench Read -count 5 ./ingest/bids
func BenchmarkRead(b *testing.B) {
	for _, c := range []struct{ width, missing int }{{6, 0}, {40, 0}, {40, 1000}, {40, 20}} {
		b.Run(fmt.Sprintf("channels=%d/missing=%d", c.width, c.missing), func(b *testing.B) {
			s := table(16<<20, c.width, c.missing)
			b.SetBytes(int64(len(s[motionFile])))
			b.ReportAllocs()
			for b.Loop() {
				if _, _, err := s.read(motionFile); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkShort measures a recording of three rows: what it takes to find and
// read the files that describe it.
func BenchmarkShort(b *testing.B) {
	s := small()
	for b.Loop() {
		if _, _, err := s.read(motionFile); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/take")
}
