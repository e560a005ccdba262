package bids_test

import (
	"errors"
	"io/fs"
	"strings"
	"testing"

	"strandwise/ingest/bids"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// TestFaults breaks one file of a sound recording at a time.
func TestFaults(t *testing.T) {
	const channelsHead = "name\tcomponent\ttype\ttracked_point\tunits\n"
	one := func(row string) string { return channelsHead + row + "\n" }
	for _, c := range []struct {
		name, file, text string
		want             string // how the error begins: place and problem
	}{
		{"no channels", channelsFile, "", channelsFile + ": is needed to say what its columns are, and no file above applies to " + motionFile},
		{"empty channels", channelsFile, "\n", channelsFile + ": is empty"},
		{"header only", channelsFile, channelsHead, channelsFile + ":1: has a header but describes no channels"},
		{"no units column", channelsFile, "name\tcomponent\ttype\ttracked_point\na\tx\tPOS\th\n", channelsFile + ":1: has no column units"},
		{"column twice", channelsFile, "name\tname\n", channelsFile + `:1: has two columns "name"`},
		{"too few cells", channelsFile, one("a\tx\tPOS"), channelsFile + ":2: has 3 fields where there are 5 columns"},
		{"open quote", channelsFile, one("\"a\tx\tPOS\th\tm"), channelsFile + ":2: a quote is opened and not closed"},
		{"open quote in the header", channelsFile, "\"a", channelsFile + ":1: a quote is opened and not closed"},
		{"UTF-16 cut short", channelsFile, "\xff\xfea", channelsFile + ":1: cannot be read"},
		{"no name", channelsFile, one("n/a\tx\tPOS\th\tm"), channelsFile + ":2: describes a channel without a name"},
		{"not UTF-8", channelsFile, one("a\xff\tx\tPOS\th\tm"), channelsFile + `:2: its name "a\xff" is not valid UTF-8`},
		{"control", channelsFile, one("a\tx\tPOS\th\x07\tm"), channelsFile + `:2: its tracked_point "h\a" holds control characters`},
		{"same name", channelsFile, channelTable("a\tx\tPOS\th\tm", "b\ty\tPOS\th\tm", "a\tz\tPOS\th\tm"), channelsFile + ":4: channel a: is described again, after line 2"},
		{"unknown type", channelsFile, one("a\tx\tSMELL\th\tm"), channelsFile + `:2: channel a: has the unknown type "SMELL"; legal types are ACCEL, ANGACCEL,`},
		{"unknown component", channelsFile, one("a\troll\tORNT\th\tdeg"), channelsFile + `:2: channel a: has the unknown component "roll"; legal components are x,`},
		{"quaternion of a position", channelsFile, one("a\tquat_w\tPOS\th\tm"), channelsFile + ":2: channel a: is of type POS but has the component quat_w of a quaternion"},
		{"impossible unit", channelsFile, one("a\tx\tGYRO\th\tm/s"), channelsFile + ":2: channel a: is of type GYRO, which has no unit m/s"},
		{"unit of a quaternion", channelsFile, one("a\tquat_x\tORNT\th\tdeg"), channelsFile + ":2: channel a: is a component of a quaternion, a pure number, which has no unit deg"},
		{"latency in ms", channelsFile, one("a\tn/a\tLATENCY\tn/a\tms"), channelsFile + ":2: channel a: has a LATENCY in ms, which BIDS states in seconds"},
		{"only latency", channelsFile, one("a\tn/a\tLATENCY\tn/a\ts"), motionFile + ": has no channels to use"},
		{"channel frequency in words", channelsFile, "name\tcomponent\ttype\ttracked_point\tunits\tsampling_frequency\na\tx\tPOS\th\tm\tfast\n", channelsFile + `:2: its sampling_frequency "fast" is not a number`},
		{"channel frequency below zero", channelsFile, "name\tcomponent\ttype\ttracked_point\tunits\tsampling_frequency\na\tx\tPOS\th\tm\t-50\n", channelsFile + ":2: channel a: has the sampling frequency -50 Hz"},

		{"too few columns", motionFile, "0\t1\t2\n0.5\t3\n", motionFile + ":2: has 2 fields where " + channelsFile + " describes 3 channels"},
		{"too many columns", motionFile, "0\t1\t2\t3\n", motionFile + ":1: has 4 fields where " + channelsFile + " describes 3 channels"},
		{"commas", motionFile, "0,1,2\n", motionFile + ":1: is words, where motion in BIDS has numbers"},
		{"header of other names", motionFile, "time\tx\ty\n0\t1\t2\n", motionFile + ":1: is words, where motion in BIDS has numbers from the first row on; remove the header"},
		{"header again", motionFile, "0\t1\t2\nt\tpx\tpy\n", motionFile + `:2: channel t: "t" is not a number`},
		{"text", motionFile, "0\t1\t2\n1\tbow\t2\n", motionFile + `:2: channel px: "bow" is not a number`},
		{"decimal comma", motionFile, "0\t1\t2,5\n", motionFile + `:1: channel py: "2,5" is not a number`},
		{"infinite", motionFile, "0\t1\tinf\n", motionFile + `:1: channel py: "inf" is no finite number`},
		{"out of range", motionFile, "0\t1\t1e999\n", motionFile + `:1: channel py: "1e999" is no finite number`},
		{"open quote in a row", motionFile, "0\t1\t\"2\n", motionFile + ":1: a quote is opened and not closed"},
		{"empty", motionFile, " ", motionFile + ": has no rows"},
		{"cut UTF-16", motionFile, "\xff\xfe1", motionFile + ":1: cannot be read"},
		{"a latency missing", motionFile, "0\t1\t2\nn/a\t3\t4\nn/a\t3\t4\n5\t1\t1\n", motionFile + ":2: channel t: has no latency, unlike other rows"},

		{"broken JSON", jsonFile, "{\n \"TaskName\": \"x\",\n}", jsonFile + ":3: is not a JSON object: invalid character '}'"},
		{"JSON cut short", jsonFile, "{\n\"a\": 1", jsonFile + ":2: is not a JSON object: unexpected end"},
		{"JSON array", jsonFile, "[1]", jsonFile + ": is not a JSON object"},
		{"JSON null", jsonFile, "null", jsonFile + ": is not a JSON object: it is null"},
		{"count in words", jsonFile, "{\n\n\"MotionChannelCount\": \"three\"}", jsonFile + `:3: states the MotionChannelCount "three", which is no number`},
		{"count of too many", jsonFile, `{"MotionChannelCount": 4}`, jsonFile + ":1: states the MotionChannelCount 4, but " + channelsFile + " has 3 channels"},
		{"count of too few", jsonFile, `{"MotionChannelCount": 1}`, jsonFile + ":1: states the MotionChannelCount 1, but"},
		{"count of many words", jsonFile, `{"MotionChannelCount": {"äääääääääääääääääääääääääääääää": "no"}}`, jsonFile + `:1: states the MotionChannelCount {"äääääääääääääääääää…, which is no number`},

		{"event without onset column", eventsFile, "duration\n1\n", eventsFile + ":1: has no column onset"},
		{"event of words", eventsFile, "onset\tduration\n1\tlong\n", eventsFile + `:2: its duration "long" is not a number`},
		{"event from words", eventsFile, "onset\tduration\nnow\t1\n", eventsFile + `:2: its onset "now" is not a number`},
		{"event runs back", eventsFile, "onset\tduration\n1\t-1\n", eventsFile + ":2: has an event of -1 s"},
		{"event without end", eventsFile, "onset\tduration\n1e308\t1e308\n", eventsFile + ":2: has an event of 1e+308 s"},
		{"event of control", eventsFile, "onset\tduration\ttrial_type\n1\t1\t\"wave\ton\"\n", eventsFile + `:2: its trial_type "wave\ton" holds control characters`},
		{"event cut short", eventsFile, "onset\tduration\n1\n", eventsFile + ":2: has 1 fields where there are 2 columns"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, _, err := small().with(c.file, c.text).read(motionFile)
			checkFault(t, err, c.want)
		})
	}
}

func checkFault(t *testing.T, err error, want string) {
	t.Helper()
	var f *fault.Error
	if !errors.As(err, &f) || f.Problem == "" || f.Remedy == "" {
		t.Fatalf("error %v (%T), want a fault with place, problem and remedy", err, err)
	}
	if !strings.HasPrefix(err.Error(), want) {
		t.Errorf("error %q, want %q", err, want)
	}
}

// TestFaultsOfTheClock breaks a recording that has no latencies.
func TestFaultsOfTheClock(t *testing.T) {
	s := small().with(motionFile, "1\t2\n3\t4\n").with(channelsFile, channelTable("px\tx\tPOS\thand\tm", "py\ty\tPOS\thand\tm"))
	const none = jsonFile + ": states no SamplingFrequency, and its channels do not share one"
	for text, want := range map[string]string{
		"":                             jsonFile + ": is needed to say at which SamplingFrequency it was recorded, and no file above applies to",
		"{}":                           none,
		`{"SamplingFrequency": "n/a"}`: none,
		`{"SamplingFrequency": null}`:  none,
		`{"SamplingFrequency": "50"}`:  jsonFile + `:1: states the SamplingFrequency "50", which is no number`,
		`{"SamplingFrequency": 0}`:     jsonFile + `:1: states the SamplingFrequency 0, which is no frequency`,
		`{"SamplingFrequency": 1e999}`: jsonFile + `:1: states the SamplingFrequency 1e999, which is no number`,
		`{"SamplingFrequency": 50, "SamplingFrequencyEffective": -1}`: jsonFile + `:1: states the SamplingFrequencyEffective -1, which is no frequency`,
	} {
		_, _, err := s.with(jsonFile, text).read(motionFile)
		checkFault(t, err, want)
		if missing := errors.Is(err, fs.ErrNotExist); missing != (text == "") {
			t.Errorf("%s: missing %v", text, missing)
		}
	}
	mixed := "name\tcomponent\ttype\ttracked_point\tunits\tsampling_frequency\npx\tx\tPOS\thand\tm\t50\npy\ty\tPOS\thand\tm\t60\n"
	_, _, err := s.with(jsonFile, "{}").with(channelsFile, mixed).read(motionFile)
	checkFault(t, err, none)

	_, _, err = small().with(jsonFile, "{}").with(motionFile, "n/a\t1\t2\nn/a\t3\t4\n").read(motionFile)
	checkFault(t, err, none)
}

// TestErrorsPassThrough reads files that cannot be read.
func TestErrorsPassThrough(t *testing.T) {
	broken := &fault.Error{File: "x", Problem: "its disk is gone"}
	for _, file := range []string{channelsFile, jsonFile, eventsFile, motionFile} {
		s := small()
		in := raw.Input{Name: motionFile, Notice: func(string, string) {}, Beside: func(name string) ([]byte, error) {
			text, ok := s[name]
			switch {
			case name == file:
				return nil, broken
			case !ok:
				return nil, fs.ErrNotExist
			}
			return []byte(text), nil
		}}
		r := failing{s[motionFile], nil}
		if file == motionFile {
			r.err = broken
		}
		for x, err := range (bids.Format{}).Read(&r, in) {
			if !errors.Is(err, broken) || x != nil {
				t.Errorf("%s: take %v, error %v", file, x, err)
			}
		}
	}
}

// failing is a text that ends in an error, or else as texts do.
type failing struct {
	text string
	err  error
}

// Read reads the text.
func (f *failing) Read(p []byte) (int, error) {
	n, _ := strings.NewReader(f.text).Read(p)
	if f.text = f.text[n:]; n > 0 || f.err != nil {
		return n, f.err
	}
	return strings.NewReader("").Read(p)
}
