package jsonlines_test

import (
	"io"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"strandwise/channels"
	"strandwise/ingest/jsonlines"
	"strandwise/ingest/raw"
)

var same = []cmp.Option{cmpopts.EquateNaNs(), cmpopts.EquateEmpty()}

// header returns the column that a name stands for.
func header(text string) raw.Column {
	c, unit := channels.ParseHeader(text)
	return raw.Column{Channel: c, Unit: unit}
}

func layout(names ...string) *raw.Layout {
	l := &raw.Layout{}
	for _, n := range names {
		l.Columns = append(l.Columns, header(n))
	}
	return l
}

// readAll reads takes until the end or an error, and the notices.
func readAll(r io.Reader, in raw.Input) (takes []*raw.Take, notices []string, err error) {
	if in.Name == "" {
		in.Name = "f"
	}
	in.Notice = func(text, evidence string) {
		if evidence != "" {
			text += " (" + evidence + ")"
		}
		notices = append(notices, text)
	}
	for t, err := range (jsonlines.Format{}).Read(r, in) {
		if err != nil {
			return takes, notices, err
		}
		takes = append(takes, t)
	}
	return takes, notices, nil
}

var nan = math.NaN()

// cases are files and the takes in them.
var cases = []struct {
	name, file string
	in         raw.Input
	want       []*raw.Take
	lacking    []int // lines of the frames that lack values, one take after another
	told       []string
}{{
	name: "frames of nested objects",
	file: `{"take":"a","label":"wave","t_ms":0,"accel":{"x":0.5,"y":-1},"note":"ok","on":true}
{"take":"a","label":"wave","t_ms":20,"accel":{"x":1.5,"y":-1e2},"note":"still","on":false}

{"take":"b","label":"nod","subject":7,"t_ms":0,"accel":{"x":3,"y":4},"note":null,"on":true}
{"take":"b","label":"nod","subject":7,"t_ms":20,"accel":{"y":5}}
`,
	want: []*raw.Take{{
		Identity: raw.Identity{Take: "a", Label: "wave"}, Line: 1, Layout: layout("accel.x", "accel.y"),
		Time: []float64{0, 0.02}, Data: []float64{0.5, -1, 1.5, -100},
	}, {
		Identity: raw.Identity{Take: "b", Label: "nod", Subject: "7"}, Line: 4, Layout: layout("accel.x", "accel.y"),
		Time: []float64{0, 0.02}, Data: []float64{3, 4, nan, 5},
	}},
	lacking: []int{5},
	told:    []string{`field "note" is no channel and is left out (it begins with "\"ok\"")`, `field "on" is no channel and is left out (it begins with "true")`},
}, {
	name: "one sensor per line",
	file: `{"label":"wave","subject":"ana"}
{"sensor":"accelerometer","time":0.00,"x":1,"y":2}
{"sensor":"gyroscope","time":0.00,"values":[0.1,0.2,0.3]}
{"sensor":"gyroscope","time":0.01,"values":[0.4,0.5,0.6]}
{"sensor":"gyroscope","time":0.03,"values":[0.7,0.8,0.9]}
{"sensor":"accelerometer","time":0.02,"x":3,"y":null}
{"sensor":"accelerometer","time":0.04,"x":5,"y":6}
`,
	in: raw.Input{TimeUnit: "s"},
	want: []*raw.Take{{
		Identity: raw.Identity{Label: "wave", Subject: "ana"}, Line: 2,
		Layout: layout("accelerometer.x", "accelerometer.y", "gyroscope.x", "gyroscope.y", "gyroscope.z"),
		Time:   []float64{0, 0.01, 0.02, 0.03, 0.04},
		Data: []float64{
			1, 2, 0.1, 0.2, 0.3,
			nan, nan, 0.4, 0.5, 0.6,
			3, nan, nan, nan, nan,
			nan, nan, 0.7, 0.8, 0.9,
			5, 6, nan, nan, nan,
		},
		Jumps: []raw.Jump{{Frame: 1, Line: 4}, {Frame: 2, Line: 6}, {Frame: 3, Line: 5}, {Frame: 4, Line: 7}},
	}},
	lacking: []int{4, 6, 5, 7},
}, {
	name: "sensors that take turns, without a name",
	file: `{"t":0,"accel":{"x":1}}
{"t":0,"gyro":{"x":2}}
{"t":50,"accel":{"x":3}}
{"t":51,"gyro":{"x":4}}
`,
	want: []*raw.Take{{
		Line: 1, Layout: layout("accel.x", "gyro.x"), Time: []float64{0, 0.05, 0.051}, Data: []float64{1, 2, 3, nan, nan, 4},
		Jumps: []raw.Jump{{Frame: 1, Line: 3}},
	}},
	lacking: []int{3, 4},
	told:    []string{`time column "t" states no unit and is read as ms (its median step of 50 makes that 20 frames per second)`},
}, {
	name: "a sensor whose frames are out of order is left to the stages behind",
	file: `{"sensor":"a","t_ms":0,"x":1}
{"sensor":"b","t_ms":5,"x":2}
{"sensor":"a","t_ms":20,"x":3}
{"sensor":"a","t_ms":10,"x":4}
{"sensor":"b","t_ms":10,"x":5}
`,
	want: []*raw.Take{{
		Line: 1, Layout: layout("a.x", "b.x"), Time: []float64{0, 0.005, 0.02, 0.01, 0.01}, Data: []float64{1, nan, nan, 2, 3, nan, 4, nan, nan, 5},
	}},
	lacking: []int{1, 2, 3, 4, 5},
}, {
	name: "takes of lists, on one line and over several",
	file: `{"label":"wave","time_s":[0,0.01,0.03],"accel":{"x":[1,null,NaN],"y":["4","5",""]},"device":"left","rate":100,"names":["p","q","r"]}
{
  "label": "nod",
  "time_s": [
    0,
    0.5
  ],
  "accel": {
    "x": [7, 8],
    "y": null
  }
}
{"label":"rest","time_s":[],"accel":{"x":[]}}
`,
	want: []*raw.Take{{
		Identity: raw.Identity{Take: "1", Label: "wave"}, Line: 1, Layout: layout("accel.x", "accel.y"),
		Time: []float64{0, 0.01, 0.03}, Data: []float64{1, 4, nan, 5, nan, nan},
		Jumps: []raw.Jump{{Frame: 1, Line: 1}, {Frame: 2, Line: 1}},
	}, {
		Identity: raw.Identity{Take: "2", Label: "nod"}, Line: 5, Layout: layout("accel.x", "accel.y"),
		Time: []float64{0, 0.5}, Data: []float64{7, nan, 8, nan},
	}, {
		Identity: raw.Identity{Take: "3", Label: "rest"}, Line: 13, Layout: layout("accel.x", "accel.y"),
	}},
	lacking: []int{1, 1, 5, 6},
	told: []string{
		`names no takes, so they are numbered`,
		`numbers in quotes are read as numbers (accel.y)`,
		`field "device" is no channel and is left out (it begins with "\"left\"")`,
		`field "rate" is no channel and is left out (it begins with "100")`,
		`field "names" is no channel and is left out (it begins with "\"p\"")`,
	},
}, {
	name: "a list of objects",
	file: " [ {\"t_ms\":0,\"ax [g]\":1} , {\"t_ms\":10,\"ax [g]\":2},\n{\"t_ms\":20,\"ax [g]\":3}\n]\n",
	want: []*raw.Take{{Line: 1, Layout: layout("ax [g]"), Time: []float64{0, 0.01, 0.02}, Data: []float64{1, 2, 3}, Jumps: []raw.Jump{{Frame: 1, Line: 1}}}},
}, {
	name: "a mark at the start, and objects on one line",
	file: "\ufeff{\"t_ms\":0,\"ax\":1}{\"t_ms\":10,\"ax\":2} {\"t_ms\":20,\"ax\":3}",
	want: []*raw.Take{{Line: 1, Layout: layout("ax"), Time: []float64{0, 0.01, 0.02}, Data: []float64{1, 2, 3}, Jumps: []raw.Jump{{Frame: 1, Line: 1}, {Frame: 2, Line: 1}}}},
}, {
	name: "nanoseconds of an epoch, in quotes",
	file: `{"timestamp":"1700000000000000001","ax":"1.5"}
{"timestamp":"1700000000020000001","ax":"NaN"}
{"timestamp":"1700000000040000003","ax":"2.5"}
`,
	want: []*raw.Take{{
		Line: 1, Layout: layout("ax"), Origin: 1700000000, Time: []float64{0, 0.02, 0.040000002}, Data: []float64{1.5, nan, 2.5},
	}},
	lacking: []int{2},
	told: []string{
		`numbers in quotes are read as numbers (ax)`,
		`time column "timestamp" states no unit and is read as ns (its median step of 2e+07 makes that 50 frames per second)`,
		`time column "timestamp" counts from a distant epoch, so each take's clock is set to begin at 0`,
	},
}, {
	name: "seconds of an epoch with nine decimals",
	file: `{"t":1700000000.000000001,"ax":1}
{"t":1700000000.020000002,"ax":2}
`,
	in:   raw.Input{TimeUnit: "s"},
	want: []*raw.Take{{Line: 1, Layout: layout("ax"), Origin: 1700000000, Time: []float64{0, 0.020000001}, Data: []float64{1, 2}}},
	told: []string{`time column "t" counts from a distant epoch, so each take's clock is set to begin at 0`},
}, {
	name: "dates",
	file: `{"ax":1,"time":"2024-01-02T03:04:05.5Z"}
{"ax":2,"time":"2024-01-02T03:04:05.75Z"}
`,
	want: []*raw.Take{{Line: 1, Layout: layout("ax"), Origin: 1704164645.5, Time: []float64{0, 0.25}, Data: []float64{1, 2}}},
	told: []string{`time column "time" counts from a distant epoch, so each take's clock is set to begin at 0`},
}, {
	name: "no clock, after an object that is none",
	file: `{"rate":50,"label":"wave"}
{"t_ms":0,"ax":1}
{"t_ms":5,"ax":2}
`,
	want: []*raw.Take{{Identity: raw.Identity{Label: "wave"}, Line: 2, Layout: layout("ax"), Time: []float64{0, 0.005}, Data: []float64{1, 2}}},
	told: []string{`field "rate" stands in an object without frames and is left out (it begins with "50")`},
}, {
	name: "frames counted",
	file: `{"ax":1,"frame":3}
{"ax":2,"frame":4}
{"ax":3,"frame":6}
`,
	want: []*raw.Take{{Line: 1, Layout: layout("ax"), Clock: raw.Frames, Time: []float64{3, 4, 6}, Data: []float64{1, 2, 3}}},
}, {
	name: "frames that nothing counts",
	file: `{"ax":1}
{"ax":2}
`,
	want: []*raw.Take{{Line: 1, Layout: layout("ax"), Clock: raw.Frames, Time: []float64{0, 1}, Data: []float64{1, 2}}},
}, {
	name: "takes named by objects between their frames",
	file: `{"subject":"bo"}
{"take":"a","label":"wave"}
{"t_ms":0,"ax":1}
{"t_ms":10,"ax":2}
{"take":"b","label":"nod"}
{"t_ms":0,"ax":3}
`,
	want: []*raw.Take{
		{Identity: raw.Identity{Take: "a", Label: "wave", Subject: "bo"}, Line: 3, Layout: layout("ax"), Time: []float64{0, 0.01}, Data: []float64{1, 2}},
		{Identity: raw.Identity{Take: "b", Label: "nod", Subject: "bo"}, Line: 6, Layout: layout("ax"), Time: []float64{0}, Data: []float64{3}},
	},
}, {
	name: "escapes and keys in any order",
	file: `{"a\u0078":1,"t_ms":0,"la\u0062el":"w\u00e1ve"}
{"t_ms":10,"label":"wáve","ax":2}
`,
	want: []*raw.Take{{Identity: raw.Identity{Label: "wáve"}, Line: 1, Layout: layout("ax"), Time: []float64{0, 0.01}, Data: []float64{1, 2}}},
}, {
	name: "a channel that is missing at first",
	file: `{"t_ms":0,"ax":1,"ay":null}
{"t_ms":10,"ax":2}
{"t_ms":20,"ax":3,"ay":4}
`,
	want: []*raw.Take{{
		Line: 1, Layout: layout("ax", "ay"), Time: []float64{0, 0.01, 0.02}, Data: []float64{1, nan, 2, nan, 3, 4},
	}},
	lacking: []int{1, 2},
}, {
	name: "columns left out",
	file: `{"t_ms":0,"ax":1,"ay":"x","az":[1,2,{}],"aw":9}
{"t_ms":10,"ax":2,"ay":3,"az":7}
`,
	in:   raw.Input{LeaveOut: func(c string) bool { return c != "ax" }},
	want: []*raw.Take{{Line: 1, Layout: layout("ax"), Time: []float64{0, 0.01}, Data: []float64{1, 2}}},
}}

// TestRead reads each file by the fast path and by the slow one, and a few
// bytes at a time.
func TestRead(t *testing.T) {
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			for _, r := range []io.Reader{strings.NewReader(c.file), &dribble{c.file}} {
				got, told, err := readAll(r, c.in)
				if err != nil {
					t.Fatal(err)
				}
				if diff := cmp.Diff(c.want, got, append(same, cmpopts.EquateApprox(0, 1e-12))...); diff != "" {
					t.Error(diff)
				}
				if diff := cmp.Diff(c.lacking, lacking(got)); diff != "" {
					t.Errorf("lines of frames that lack values: %s", diff)
				}
				if diff := cmp.Diff(c.told, told); diff != "" {
					t.Error(diff)
				}
			}
		})
	}
}

// lacking returns the lines of the frames that lack values.
func lacking(takes []*raw.Take) (lines []int) {
	for _, t := range takes {
		width := len(t.Layout.Columns)
		for i := range t.Time {
			if slices.ContainsFunc(t.Data[i*width:(i+1)*width], math.IsNaN) {
				lines = append(lines, t.LineOf(i))
			}
		}
	}
	return lines
}

// dribble reads one byte at a time.
type dribble struct{ text string }

func (d *dribble) Read(p []byte) (int, error) {
	if d.text == "" {
		return 0, io.EOF
	}
	n := copy(p[:1], d.text)
	d.text = d.text[n:]
	return n, nil
}
