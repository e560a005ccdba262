package delimited_test

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"strings"
	"testing"
	"unicode/utf16"

	"github.com/google/go-cmp/cmp"

	"strandwise/ingest/delimited"
	"strandwise/ingest/raw"
)

// read reads a text and returns its takes and notices.
func read(text string, in raw.Input) (takes []*raw.Take, notices []string, err error) {
	in.Name = "f"
	in.Notice = func(text, evidence string) { notices = append(notices, text+" ("+evidence+")") }
	for t, err := range (delimited.Format{}).Read(strings.NewReader(text), in) {
		if err != nil {
			return takes, notices, err
		}
		takes = append(takes, t)
	}
	return takes, notices, nil
}

// utf16Text encodes a text with its mark.
func utf16Text(text string, order binary.AppendByteOrder) string {
	var b []byte
	for _, c := range utf16.Encode([]rune("\ufeff" + text)) {
		b = order.AppendUint16(b, c)
	}
	return string(b)
}

// TestOneTableManyWays writes one table in all the ways that mean the same.
func TestOneTableManyWays(t *testing.T) {
	const plain = "take,label,time_s,x,y\na,wé😀,0,1.5,-2\na,wé😀,0.02,2.5,3\nb,bow,0,1,2\nb,bow,0.5,2,2\n"
	want := []raw.Take{
		{Identity: raw.Identity{Take: "a", Label: "wé😀"}, Time: []float64{0, 0.02}, Data: []float64{1.5, -2, 2.5, 3}},
		{Identity: raw.Identity{Take: "b", Label: "bow"}, Time: []float64{0, 0.5}, Data: []float64{1, 2, 2, 2}},
	}
	replace := func(pairs ...string) string { return strings.NewReplacer(pairs...).Replace(plain) }
	for name, text := range map[string]string{
		"plain":              plain,
		"no last line end":   strings.TrimSuffix(plain, "\n"),
		"CRLF":               replace("\n", "\r\n"),
		"mark":               "\ufeff" + plain,
		"semicolons":         replace(",", ";"),
		"decimal comma":      replace(",", ";", ".", ","),
		"tabs":               replace(",", "\t"),
		"tabs, comma":        replace(",", "\t", ".", ","),
		"spaces":             replace(",", "  ", "\n", " \n "),
		"spaces, comma":      replace(",", " ", ".", ","),
		"padded":             replace(",", ", "),
		"quoted":             `"` + strings.TrimSuffix(replace(",", `","`, "\n", "\"\n\""), `"`),
		"quoted names":       replace("wé😀", `"wé😀"`),
		"comments":           "# made by hand\n" + replace("b,bow,0,", "% one\n// two\n\n   \n#\nb,bow,0,"),
		"upper case":         replace("take", "TAKE", "label", "Label", "time_s", "Time [s]"),
		"milliseconds":       replace("time_s", "time_ms", "0.02", "20", "0.5", "500"),
		"microseconds":       replace("time_s", "t (us)", "0.02", "20000", "0.5", "500000"),
		"nanoseconds":        replace("time_s", "timestamp_ns", "0.02", "2e7", "0.5", "5e8"),
		"exponents":          replace("0.02", "2E-2", "-2\n", "-0.2e+1\n"),
		"UTF-16 LE":          utf16Text(plain, binary.LittleEndian),
		"UTF-16 BE":          utf16Text(plain, binary.BigEndian),
		"separator at ends":  replace("\n", ",\n"),
		"other column order": "y,label,x,time_s,take\n-2,wé😀,1.5,0,a\n3,wé😀,2.5,0.02,a\n2,bow,1,0,b\n2,bow,2,.5,b\n",
	} {
		t.Run(name, func(t *testing.T) {
			takes, _, err := read(text, raw.Input{})
			if err != nil {
				t.Fatal(err)
			}
			var got []raw.Take
			for _, x := range takes {
				v := *x
				if v.Layout.Columns[0].Channel.Name == "y" {
					for i := 0; i < len(v.Data); i += 2 {
						v.Data[i], v.Data[i+1] = v.Data[i+1], v.Data[i]
					}
				}
				v.Layout, v.Line = nil, 0
				got = append(got, v)
			}
			if d := cmp.Diff(want, got); d != "" {
				t.Error(d)
			}
		})
	}
}

func TestLinesOfTakes(t *testing.T) {
	takes, _, err := read("# c\n\ntake,note,x\na,\"1\n2\n3\",1\na,n,2\n% d\nb,n,1\n", raw.Input{})
	if err != nil {
		t.Fatal(err)
	}
	if len(takes) != 2 || takes[0].Line != 4 || takes[1].Line != 9 {
		t.Errorf("takes begin at lines %d and %d, want 4 and 9", takes[0].Line, takes[1].Line)
	}
}

func TestColumnsNamedFromOutside(t *testing.T) {
	for _, text := range []string{"0,00;1,5;w\n", "0.00,1.5,w\n", "0.00 1.5 w", "0.00\t1.5\tw\n"} {
		takes, _, err := read(text, raw.Input{Columns: []string{"time_s", "x", "label"}})
		if err != nil {
			t.Fatalf("%q: %v", text, err)
		}
		if d := cmp.Diff([]float64{1.5}, takes[0].Data); d != "" || takes[0].Label != "w" || takes[0].Line != 1 {
			t.Errorf("%q: %+v", text, takes[0])
		}
	}
}

func TestClockColumns(t *testing.T) {
	for _, c := range []struct {
		text  string
		unit  string // of the options
		clock raw.Clock
		want  []float64
	}{
		{"x\n1\n2\n", "", raw.Frames, []float64{0, 1}},
		{"frame,x\n5,1\n7,2\n", "", raw.Frames, []float64{5, 7}},
		{"Frame_Index,x\n5,1\n7,2\n", "", raw.Frames, []float64{5, 7}},
		{"index,x\n0,1\n1e3,2\n", "", raw.Frames, []float64{0, 1000}},
		{"frame,time_s,x\n5,1,1\n6,2,2\n", "", raw.Seconds, []float64{1, 2}},
		{"time,x\n0,1\n20,2\n", "us", raw.Seconds, []float64{0, 2e-5}},
		{"time,x\n0,1\n1,2\n2,1\n", "s", raw.Seconds, []float64{0, 1, 2}},
		{"time_ms,x\n0,1\n20,2\n", "us", raw.Seconds, []float64{0, 0.02}}, // the header has the word
		{"t,x\n0,1\n0.02,2\n0.04,1\n", "", raw.Seconds, []float64{0, 0.02, 0.04}},
		{"t,x\n-0.02,1\n0,2\n0.02,1\n", "", raw.Seconds, []float64{-0.02, 0, 0.02}},
		{"t,x\n0,1\n20,2\n40,1\n", "", raw.Seconds, []float64{0, 0.02, 0.04}},
		{"t,x\n0,1\n20000,2\n40000,1\n", "", raw.Seconds, []float64{0, 0.02, 0.04}},
		{"t,x\n0,1\n20000000,2\n40000000,1\n", "", raw.Seconds, []float64{0, 0.02, 0.04}},
		{"t,x\n0,1\n1,2\n2.5,1\n", "", raw.Seconds, []float64{0, 0.001, 0.0025}},
		{"t,x\n5000000000,1\n5020000000,2\n5040000000,2\n", "", raw.Seconds, []float64{5, 5.02, 5.04}}, // nanoseconds since power-on
		{"t,x\n1700000000,1\n1700000000.02,2\n1700000000.04,2\n", "", raw.Seconds, []float64{0, 0.02, 0.04}},
		{"t,x\n1700000000000,1\n1700000000020,2\n", "", raw.Seconds, []float64{0, 0.02}},
		{"t,x\n1700000000000001,1\n1700000000020002,2\n", "", raw.Seconds, []float64{0, 0.020001}},
		{"t,x\n1700000000000000001,1\n1700000000020000003,2\n", "", raw.Seconds, []float64{0, 0.020000002}},
		{"t_ms,x\n1.7e12,1\n1700000000020.5,2\n", "", raw.Seconds, []float64{0, 0.0205}},
		{"t,x\n1700000000300,1\n1700000000600,2\n1700000000900,2\n", "", raw.Seconds, []float64{0, 0.3, 0.6}}, // 3.3 Hz, known by its date
		{"time,x\n2024-02-29T23:59:59.99Z,1\n2024-03-01T00:00:00.01Z,2\n", "", raw.Seconds, []float64{0, 0.02}},
		{"time,x\n2024-02-29T23:59:59+01:00,1\n2024-02-29T22:59:59.5Z,2\n", "", raw.Seconds, []float64{0, 0.5}},
		{"time,x\n2024-02-29 23:59:59,1\n2024-02-29 23:59:59.25,2\n", "", raw.Seconds, []float64{0, 0.25}},
	} {
		takes, _, err := read(c.text, raw.Input{TimeUnit: c.unit})
		if err != nil {
			t.Errorf("%q: %v", c.text, err)
			continue
		}
		got := takes[0]
		const tolerance = 1e-12 // of seconds: far below the resolution of any logger
		near := len(got.Time) == len(c.want)
		for i := range min(len(got.Time), len(c.want)) {
			near = near && math.Abs(got.Time[i]-c.want[i]) <= tolerance
		}
		if !near || got.Clock != c.clock {
			t.Errorf("%q: clock %d, %v; want %d, %v", c.text, got.Clock, got.Time, c.clock, c.want)
		}
	}
}

func TestNotices(t *testing.T) {
	for _, c := range []struct {
		text string
		want []string
	}{
		{"label,x\nw,1\nw,2\n", nil},
		{"note,x\nhello,1\nbye,2\n", []string{`column "note" is no channel and is left out (it begins with "hello")`}},
		{"frame,t_s,x\n0,0,1\n1,2,2\n", []string{`column "frame" is no channel and is left out (it begins with "0")`}},
		{"x\n1\n# c\n2\n% d\n", []string{"comment lines are left out (the first is line 3)"}},
		{"t,x\n0,1\n20,2\n40,3\n", []string{`time column "t" states no unit and is read as ms (its median step of 20 makes that 50 frames per second)`}},
		{"t_s,x\n1700000000,1\n1700000001,2\n", []string{`time column "t_s" counts from a distant epoch, so each take's clock is set to begin at 0 ()`}},
		{"t,x\n1700000000300,1\n1700000000600,2\n", []string{
			`time column "t" states no unit and is read as ms (as such its first value lies in November 2023)`,
			`time column "t" counts from a distant epoch, so each take's clock is set to begin at 0 ()`,
		}},
	} {
		_, got, err := read(c.text, raw.Input{})
		if err != nil {
			t.Errorf("%q: %v", c.text, err)
		}
		if d := cmp.Diff(c.want, got); d != "" {
			t.Errorf("%q: %s", c.text, d)
		}
	}
}

func TestChannelsOfTheHeader(t *testing.T) {
	takes, _, err := read("left_wrist.accel.x [g],gyro_y (deg/s),height\n1,2,3\n", raw.Input{})
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, c := range takes[0].Layout.Columns {
		got = append(got, fmt.Sprintf("%s %s %s", c.Channel.Name, c.Channel.Quantity, c.Unit))
	}
	if d := cmp.Diff([]string{"left_wrist.accel.x ACCEL g", "gyro_y GYRO deg/s", "height MISC "}, got); d != "" {
		t.Error(d)
	}
}

// TestLongRows reads rows longer than the block, and refuses those beyond the
// limit.
func TestLongRows(t *testing.T) {
	const n = 100_000 // columns; the rows are longer than a block
	var b bytes.Buffer
	for i := range n {
		fmt.Fprintf(&b, "c%d,", i)
	}
	b.WriteString("time_s\n")
	for row := range 2 {
		for i := range n {
			fmt.Fprintf(&b, "%d,", i+row)
		}
		fmt.Fprintf(&b, "%d\n", row)
	}
	takes, _, err := read(b.String(), raw.Input{})
	if err != nil {
		t.Fatal(err)
	}
	if d := takes[0].Data; len(d) != 2*n || d[n-1] != n-1 || d[2*n-1] != n {
		t.Errorf("%d values", len(d))
	}
	for _, text := range []string{"x\n1\n" + strings.Repeat("1", 17<<20), "x,note\n1,\"" + strings.Repeat("a\n", 9<<20)} {
		if _, _, err := read(text, raw.Input{}); err == nil || !strings.Contains(err.Error(), "longer than 16 MiB") {
			t.Errorf("error %v", err)
		}
	}
}

func TestReceiverMayStop(t *testing.T) {
	n := 0
	for _, err := range (delimited.Format{}).Read(strings.NewReader("take,x\na,1\nb,1\nc,1\n"), raw.Input{Name: "f"}) {
		if err != nil {
			t.Fatal(err)
		}
		if n++; n == 2 {
			break
		}
	}
	if n != 2 {
		t.Errorf("%d takes", n)
	}
}

func ExampleFormat_Read() {
	text := "take,label,time_ms,left.accel.x [g]\nt1,wave,0,0.5\nt1,wave,20,0.75\n"
	in := raw.Input{Name: "wave.csv"}
	for t, err := range (delimited.Format{}).Read(strings.NewReader(text), in) {
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Println(t.Take, t.Label, t.Time, "s", t.Data, t.Layout.Columns[0].Unit)
	}
	// Output: t1 wave [0 0.02] s [0.5 0.75] g
}
