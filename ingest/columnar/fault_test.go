package columnar_test

import (
	"bytes"
	"errors"
	"strings"
	"testing"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/apache/arrow/go/v15/arrow/ipc"
	"github.com/google/go-cmp/cmp"

	"strandwise/ingest/columnar"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// TestFaults gives tables that are well written and unsound. Each error is a
// fault that names the file and says what to do.
func TestFaults(t *testing.T) {
	times := col("time_s", f64, `[0,1,2]`)
	ax := col("ax", f32, `[1,2,3]`)
	lists := arrow.ListOf(f64)
	layout := func(text string) map[string]string { return map[string]string{"strandwise.layout": text} }
	cases := []struct {
		name     string
		metadata map[string]string
		columns  []column
		want     string
	}{
		{"no channels", nil, []column{times, col("label", str, `["a","a","a"]`)}, "f: has no channels"},
		{"no rows", nil, []column{col("ax", f32, `[]`)}, "f: has columns but no rows"},
		{"channel without a name", nil, []column{times, col("", f32, `[1,2,3]`)}, "f: column 2 holds numbers but has no name"},
		{"control character in a name", nil, []column{times, col("a\x01", f32, `[1,2,3]`)}, "f: the name of column 2 holds control characters"},
		{"two channels of one name", nil, []column{ax, col("ax [g]", f32, `[1,2,3]`)}, "f: two columns are named ax"},
		{"two take columns", nil, []column{ax, col("take", str, `["a","a","a"]`), col("Take", str, `["a","a","a"]`)}, "f: two columns are named take"},
		{"two units", nil, []column{times, col("ax [g]", f32, `[1,2,3]`).in("m/s^2")}, "f: channel ax: is in g by its name and in m/s^2 by its metadata"},
		{"two units of time", nil, []column{col("time_s", f32, `[1,2,3]`).in("ms"), ax}, "f: channel time_s: is in s by its name and in ms by its metadata"},
		{"no unit of time", nil, []column{col("time", f32, `[1,2,3]`).in("m"), ax}, `f: channel time: is in the unit "m", which is no unit of time`},
		{"steps of 1", nil, []column{col("time", f32, `[1,2,3]`), ax}, "f: channel time: counts 1, 2, 3: that may be milliseconds or frames"},
		{"steps of no unit", nil, []column{col("time", f32, `[1,1e5,3e9]`), ax}, "f: channel time: has a median step of 2.9999e+09, which fits no unit"},
		{"time missing", nil, []column{col("time_s", f64, `[0,null,2]`), ax}, "f: channel time_s: row 2: holds no time"},
		{"stamp missing", nil, []column{col("t", arrow.FixedWidthTypes.Timestamp_ns, `["2024-01-02",null,"2024-01-03"]`), ax}, "f: channel t: row 2: holds no time"},
		{"time in words", nil, []column{col("time", str, `["now","later","done"]`), ax}, "f: channel time: row 1: holds no time"},
		{"fraction of a frame", nil, []column{col("frame", f64, `[0,0.5,1]`), ax}, "f: channel frame: row 2: 0.5 is no whole number"},
		{"infinity", nil, []column{times, col("ax", f32, `[1,2,"+Inf"]`)}, "f: channel ax: row 3: +Inf is no finite number"},
		{"take of no name", nil, []column{times, ax, col("take", str, `["a","a",null]`)}, "row 3: the take column is empty"},
		{"two labels", nil, []column{times, ax, col("take", str, `["a","a","a"]`), col("label", str, `["x","x","y"]`)}, `f: take a: row 3: has the label "y", but row 1, where the take begins, has "x"; give every row of a take the same identity`},
		{"two labels and no take", nil, []column{times, ax, col("label", str, `["x","x","y"]`)}, "add a take column"},
		{"control character in a label", nil, []column{times, ax, col("label", str, `["a\u0007","a\u0007","a\u0007"]`)}, "f: row 1: label \"a\\a\" holds control characters"},
		{"lists of two lengths", nil, []column{col("time_s", lists, `[[0,1]]`), col("ax", lists, `[[1,2,3]]`)}, "f: take 1: row 1: ax holds 3 values, but time_s holds 2"},
		{"no list of times", nil, []column{col("time_s", lists, `[null]`), col("ax", lists, `[[1,2,3]]`)}, "f: take 1: channel time_s: row 1: holds no times"},
		{"time missing in a list", nil, []column{col("time_s", lists, `[[0,null,2]]`), col("ax", lists, `[[1,2,3]]`)}, "f: take 1: channel time_s: row 1, value 2: holds no time"},
		{"infinity in a list", nil, []column{col("time_s", lists, `[[0,1]]`), col("ax", lists, `[[1,"-Inf"]]`)}, "f: take 1: channel ax: row 1, value 2: -Inf is no finite number"},
		{"vectors in frames", nil, []column{times, col("accel", arrow.FixedSizeListOf(3, f32), `[[1,2,3],[1,2,3],[1,2,3]]`)}, "f: channel time_s: is one time for each row, but the channels hold lists"},
		{"layout that is no JSON", layout("{"), []column{ax}, "f: its metadata strandwise.layout cannot be read"},
		{"layout of the future", layout(`{"format":"strandwise.layout/9"}`), []column{ax}, `its metadata are in the form "strandwise.layout/9"`},
		{"layout of another table", layout(`{"format":"strandwise.layout/1","table":"windows"}`), []column{ax}, `is table "windows" of a set, which holds no takes`},
		{"layout of nothing", layout(`{"format":"strandwise.layout/1","table":"frames"}`), []column{ax}, "name no channels"},
		{"column that is not there", layout(`{"format":"strandwise.layout/1","table":"frames","channels":[{"name":"ay","column":"ay","quantity":"MISC"}]}`), []column{times, ax}, "f: has no column of numbers for ay"},
		{"clock that is not there", layout(`{"format":"strandwise.layout/1","table":"frames","channels":[{"name":"ax","column":"ax","quantity":"MISC"}]}`), []column{ax}, "f: has no column of numbers for time_s"},
		{"quantity of no kind", layout(`{"format":"strandwise.layout/1","table":"frames","channels":[{"name":"ax","column":"ax","quantity":"JOY"}]}`), []column{times, ax}, "f: channel ax: its metadata name the channel twice, or give it no known quantity"},
	}
	for _, c := range cases {
		for _, w := range containers() {
			t.Run(c.name+"/"+w.name, func(t *testing.T) {
				checkFault(t, w.write(t, record(t, c.metadata, c.columns...)), c.want)
			})
		}
	}
}

// checkFault reads data and expects a fault whose text holds want.
func checkFault(t *testing.T, data []byte, want string) {
	t.Helper()
	_, _, err := readAll(bytes.NewReader(data), raw.Input{})
	var f *fault.Error
	if !errors.As(err, &f) || f.File != "f" || f.Remedy == "" || !strings.Contains(err.Error(), want) {
		t.Errorf("error %v, want a fault that holds %q", err, want)
	}
}

// TestForeign gives what is no table at all.
func TestForeign(t *testing.T) {
	cases := []struct{ name, data, want string }{
		{"nothing", "", "f: is neither Parquet nor Arrow"},
		{"text", "t,ax\n0,1\n", "f: is neither Parquet nor Arrow"},
		{"encrypted", "PARE....PARE", "f: is an encrypted Parquet file"},
		{"feather", "FEA1....FEA1", "f: is a Feather file of version 1"},
		{"magic alone", "PAR1", "f: is a Parquet or Arrow file that is damaged or cut short"},
		{"magic twice", "PAR1\x00\x00\x00\x00PAR1", "f: is a Parquet or Arrow file that is damaged or cut short"},
		{"footer of gigabytes", "PAR1\xff\xff\xff\x7fPAR1", "f: is a Parquet or Arrow file that is damaged or cut short"},
		{"arrow magic alone", "ARROW1\x00\x00", "f: is a Parquet or Arrow file that is damaged or cut short"},
		{"message of gigabytes", "\xff\xff\xff\xff\x00\x00\x00\x0f", "f: is a Parquet or Arrow file that is damaged or cut short"},
		{"message of zeros", "\xff\xff\xff\xff\x40\x00\x00\x00" + strings.Repeat("\x00", 64), "f: is a Parquet or Arrow file that is damaged or cut short"},
		{"end at the start", "\xff\xff\xff\xff\x00\x00\x00\x00", "f: is a Parquet or Arrow file that is damaged or cut short"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) { checkFault(t, []byte(c.data), c.want) })
	}
}

// TestSniff tells the formats from others by their first bytes.
func TestSniff(t *testing.T) {
	rec := record(t, nil, col("ax", f32, `[1,2]`))
	for _, w := range containers() {
		if !(columnar.Format{}).Sniff(w.write(t, rec)[:16], "x") {
			t.Errorf("%s is not known", w.name)
		}
	}
	for _, other := range []string{"", "PAR", "\xff\xff\xff\xff", "\xff\xfea\x00b\x00c\x00", "\xff\xff\xff\xff\xff\xff\xff\xff", "ARRO", "{}"} {
		if (columnar.Format{}).Sniff([]byte(other), "x.parquet") {
			t.Errorf("%q is taken for one of the formats", other)
		}
	}
}

// TestCut cuts files short at every byte. What is left is a fault; an Arrow
// stream cut between two messages may be whole, and the user is told so.
func TestCut(t *testing.T) {
	rec := record(t, nil, col("take", category, `["a","a","b","b"]`), col("t_ms", f64, `[0,10,0,10]`), col("ax", f32, `[1,2,3,null]`))
	for _, w := range containers() {
		data := w.write(t, rec)
		for n := range len(data) {
			_, told, err := readAll(bytes.NewReader(data[:n]), raw.Input{})
			var f *fault.Error
			whole := err == nil && len(told) > 0 && strings.Contains(told[0], "no mark at its end")
			if !errors.As(err, &f) && !whole {
				t.Fatalf("%s, %d of %d bytes: error %v", w.name, n, len(data), err)
			}
		}
	}
}

// TestEndMarks reads streams with and without what marks their end.
func TestEndMarks(t *testing.T) {
	rec := record(t, nil, col("t_ms", f64, `[0,10,25]`), col("ax", f32, `[1,2,4]`))
	stream := arrowStream(t, nil, rec)
	open := stream[:len(stream)-8]
	got, told, err := readAll(bytes.NewReader(open), raw.Input{})
	if err != nil || len(got) != 1 || len(told) != 1 || !strings.Contains(told[0], "has no mark at its end") {
		t.Errorf("no mark: %d takes, told %q, error %v", len(got), told, err)
	}
	checkFault(t, append(append([]byte{}, stream...), stream...), "more follows after the end of the stream")

	// Most programs mark the end within a file too, arrow/go does not.
	file := arrowFile(t, rec)
	at := len(file) - 10 - int(file[len(file)-10]) - int(file[len(file)-9])<<8
	marked := append(append(append([]byte{}, file[:at]...), stream[len(stream)-8:]...), file[at:]...)
	for _, data := range [][]byte{file, marked} {
		if got, told, err := readAll(bytes.NewReader(data), raw.Input{}); err != nil || len(got) != 1 || len(told) != 0 {
			t.Errorf("file: %d takes, told %q, error %v", len(got), told, err)
		}
	}
}

// TestReplacedDictionaries reads a stream whose dictionaries change, by
// replacement and by delta.
func TestReplacedDictionaries(t *testing.T) {
	batch := func(takes string) arrow.Record {
		return record(t, nil, col("take", category, takes), col("t_ms", f64, `[0,10]`), col("ax", f32, `[1,2]`))
	}
	batches := []arrow.Record{batch(`["a","a"]`), batch(`["b","b"]`), batch(`["b","c"]`)}
	for name, options := range map[string][]ipc.Option{"replaced": nil, "deltas": {ipc.WithDictionaryDeltas(true)}} {
		got, _, err := readAll(bytes.NewReader(arrowStream(t, options, batches[:2]...)), raw.Input{})
		if err != nil || len(got) != 2 || got[0].Take != "a" || got[1].Take != "b" {
			t.Errorf("%s: %d takes, error %v", name, len(got), err)
		}
	}
	got, _, err := readAll(bytes.NewReader(arrowStream(t, nil, batches...)), raw.Input{})
	if err != nil || len(got) != 3 {
		t.Fatalf("%d takes, error %v", len(got), err)
	}
	if diff := cmp.Diff([]float64{0, 0.01, 0}, got[1].Time); diff != "" {
		t.Errorf("times that begin again are not left to the stages behind: %s", diff)
	}
}

// TestStop stops after the first take.
func TestStop(t *testing.T) {
	rec := record(t, nil, col("take", str, `["a","a","b","b"]`), col("t_ms", f64, `[0,10,0,10]`), col("ax", f32, `[1,2,3,4]`))
	for _, w := range containers() {
		n := 0
		for _, err := range (columnar.Format{}).Read(bytes.NewReader(w.write(t, rec)), raw.Input{Name: "f"}) {
			if n++; err != nil {
				t.Fatal(err)
			}
			break
		}
		if n != 1 {
			t.Errorf("%s: %d takes", w.name, n)
		}
	}
}

// TestOwnership changes a take as soon as it comes, which must not change the
// next.
func TestOwnership(t *testing.T) {
	rec := record(t, nil, col("take", str, `["a","a","b","b"]`), col("t_ms", f64, `[0,10,0,10]`), col("ax", f64, `[1,2,3,4]`))
	for _, w := range containers() {
		var last []float64
		for take, err := range (columnar.Format{}).Read(bytes.NewReader(w.write(t, rec)), raw.Input{Name: "f"}) {
			if err != nil {
				t.Fatal(err)
			}
			last = append([]float64{}, take.Data...)
			clear(take.Data[:cap(take.Data)])
			clear(take.Time[:cap(take.Time)])
		}
		if last[0] != 3 || last[1] != 4 {
			t.Errorf("%s: %v", w.name, last)
		}
	}
}
