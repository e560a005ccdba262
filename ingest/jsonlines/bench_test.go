package jsonlines_test

import (
	"bytes"
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"strandwise/ingest/jsonlines"
	"strandwise/ingest/raw"
)

// logs invents files of about so many bytes.
var logs = []struct {
	name string
	line func(i int, rng *rand.Rand) string
}{
	{"frames", func(i int, rng *rand.Rand) string {
		return fmt.Sprintf(`{"take":"t%05d","label":"wave","t":%.2f,"accel":{"x":%.6f,"y":%.6f,"z":%.6f},"gyro":{"x":%.6f,"y":%.6f,"z":%.6f}}`,
			i/128, float64(i)*0.02, rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64())
	}},
	{"sensors", func(i int, rng *rand.Rand) string {
		name := []string{"accelerometer", "gyroscope"}[i%2]
		return fmt.Sprintf(`{"sensor":%q,"time":%d,"x":%.6f,"y":%.6f,"z":%.6f}`, name, 1700000000000000000+int64(i)*10000000, rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64())
	}},
	{"irregular", func(i int, rng *rand.Rand) string { // in any order, so that few go the fast path
		fields := []string{fmt.Sprintf(`"t":%.2f`, float64(i)*0.02)}
		for _, axis := range "xyzuvw" {
			fields = append(fields, fmt.Sprintf(`"a%c":%.6f`, axis, rng.NormFloat64()))
		}
		rng.Shuffle(len(fields), func(i, j int) { fields[i], fields[j] = fields[j], fields[i] })
		return "{" + strings.Join(fields, ",") + "}"
	}},
	{"takes", func(i int, rng *rand.Rand) string {
		list := func(scale float64) string {
			var b strings.Builder
			for k := range 128 {
				v := rng.NormFloat64()
				if scale > 0 {
					v = float64(k) * scale
				}
				fmt.Fprintf(&b, ",%.6f", v)
			}
			return b.String()[1:]
		}
		return fmt.Sprintf(`{"take":"t%d","label":"wave","t":[%s],"ax":[%s],"ay":[%s],"az":[%s]}`, i, list(0.02), list(0), list(0), list(0))
	}},
}

// BenchmarkRead measures the reader alone, on one core, in MB of file per
// second:
//
//	go test -run '^$' -bench Read -count 5 ./ingest/jsonlines
func BenchmarkRead(b *testing.B) {
	for _, log := range logs {
		b.Run("file="+log.name, func(b *testing.B) {
			rng := rand.New(rand.NewPCG(1, 1))
			var file bytes.Buffer
			for i := 0; file.Len() < 16<<20; i++ {
				file.WriteString(log.line(i, rng))
				file.WriteByte('\n')
			}
			b.SetBytes(int64(file.Len()))
			b.ReportAllocs()
			for b.Loop() {
				for _, err := range (jsonlines.Format{}).Read(bytes.NewReader(file.Bytes()), raw.Input{Name: "b"}) {
					if err != nil {
						b.Fatal(err)
					}
				}
			}
		})
	}
}
