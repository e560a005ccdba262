package columnar_test

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"testing"

	"strandwise/ingest/columnar"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// samples are small files of every container and form.
func samples(t testing.TB) [][]byte {
	long := record(t, nil, col("take", category, `["a","a","b","b"]`), col("label", str, `["x","x",null,null]`),
		col("t_ms", f64, `[0,10,0,10]`), col("ax", f32, `[1,2,3,null]`).in("g"))
	lists := record(t, nil, col("time_s", arrowLists, `[[0,0.01],[],[0,1]]`), col("ax", arrowLists, `[[1,null],null,[4,5]]`))
	var out [][]byte
	for _, w := range containers() {
		out = append(out, w.write(t, long), w.write(t, lists))
	}
	return append(out, setTakes(t), setFrames(t))
}

// checkSound reads data that may hold anything, and checks that what comes of
// it keeps the contract of package raw: takes that are consistent, and then
// perhaps one fault.
func checkSound(t *testing.T, data []byte) {
	ended := false
	for take, err := range (columnar.Format{}).Read(bytes.NewReader(data), raw.Input{Name: "f"}) {
		if ended {
			t.Fatal("something follows an error")
		}
		if err != nil {
			var f *fault.Error
			if !errors.As(err, &f) || take != nil {
				t.Fatalf("take %v, error %v", take, err)
			}
			ended = true
			continue
		}
		if err := sound(take); err != nil {
			t.Fatal(err)
		}
	}
}

func sound(t *raw.Take) error {
	width := len(t.Layout.Columns)
	if width == 0 || len(t.Data) != width*len(t.Time) {
		return fmt.Errorf("%d values for %d frames of %d channels", len(t.Data), len(t.Time), width)
	}
	for i, at := range t.Time {
		if at-at != 0 {
			return fmt.Errorf("frame %d: time %g", i, at)
		}
	}
	for i, v := range t.Data {
		if math.IsInf(v, 0) {
			return fmt.Errorf("value %d is %g", i, v)
		}
	}
	return nil
}

// TestDamage changes one bit of every byte of small files.
func TestDamage(t *testing.T) {
	for _, data := range samples(t) {
		changed := bytes.Clone(data)
		for i := range data {
			changed[i] ^= 1 << (i % 8)
			checkSound(t, changed)
			changed[i] = data[i]
		}
	}
}

// FuzzRead holds for any bytes: reading them does not panic, and yields takes
// that are consistent and then perhaps one fault.
func FuzzRead(f *testing.F) {
	for _, data := range samples(f) {
		f.Add(data)
	}
	f.Fuzz(checkSound)
}
