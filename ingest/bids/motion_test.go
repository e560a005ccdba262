package bids_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"strandwise/ingest/raw"
)

// TestInheritance puts the files that describe a recording in every folder
// above it.
func TestInheritance(t *testing.T) {
	const (
		folder = "show/sub-gretel/ses-a/motion/"
		stem   = "sub-gretel_ses-a_task-wave_tracksys-strings"
		file   = folder + stem + "_motion.tsv"
	)
	bare := set{file: "1\n2\n", "show/channels.tsv": channelTable("p\tx\tPOS\ttop\tm")}
	const slow, fast = `{"SamplingFrequency": 1}`, `{"SamplingFrequency": 10}`
	for _, where := range []string{"show/", "show/sub-gretel/", "show/sub-gretel/ses-a/", folder} {
		for _, name := range []string{"motion.json", "task-wave_motion.json", "sub-gretel_tracksys-strings_motion.json", stem + "_motion.json"} {
			take, _ := bare.with(where+name, fast).take(t, file)
			if take.Time[1] != 0.1 {
				t.Errorf("%s%s: times %v", where, name, take.Time)
			}
		}
	}
	for name, s := range map[string]set{
		"another entity":        bare.with("show/task-bow_motion.json", fast),
		"above the data set":    bare.with("motion.json", fast),
		"one entity too many":   bare.with(folder+stem+"_run-1_motion.json", fast),
		"of another session":    bare.with("show/sub-gretel/ses-b/motion.json", fast),
		"beside, other suffix":  bare.with(folder+stem+"_events.json", fast),
		"entity of another way": bare.with(folder+"sub-gretel_wave_motion.json", fast),
	} {
		if _, _, err := s.read(file); err == nil {
			t.Errorf("%s: is taken to apply", name)
		}
	}

	// Each key has its value from the nearest and most specific file.
	s := bare.with("show/motion.json", `{"SamplingFrequency": 1, "MissingValues": "1", "MotionChannelCount": 1}`).
		with(folder+"motion.json", `{"SamplingFrequency": 2}`).
		with(folder+stem+"_motion.json", `{"SamplingFrequency": 4}`)
	take, _ := s.take(t, file)
	if take.Time[1] != 0.25 || !cmp.Equal(take.Data, []float64{math.NaN(), 2}, cmpopts.EquateNaNs()) || take.LineOf(0) != 1 {
		t.Errorf("times %v, data %v, from line %d", take.Time, take.Data, take.LineOf(0))
	}

	// Of tables one holds.
	s = bare.with(folder+"motion.json", slow).with("show/sub-gretel/channels.tsv", channelTable("p\tx\tPOS\tlow\tm"))
	if take, _ = s.take(t, file); take.Layout.Columns[0].Channel.Name != "low.pos.x" {
		t.Errorf("channel %s", take.Layout.Columns[0].Channel.Name)
	}
	// Events stand beside all systems that tracked them.
	s = s.with(folder+"sub-gretel_ses-a_task-wave_events.tsv", "onset\tduration\ttrial_type\n0\t1\twave\n").
		with(folder+stem+"_acq-1_events.tsv", "onset\tduration\ttrial_type\n0\t1\tbow\n")
	if take, _ = s.take(t, file); len(take.Annotations) != 1 || take.Annotations[0].Label != "wave" {
		t.Errorf("annotations %v", take.Annotations)
	}
	if take.Subject != "gretel" || take.Session != "a" || take.Take != stem || take.Label != "" {
		t.Errorf("identity %+v", take.Identity)
	}
}

// TestChannels describes one column in many ways.
func TestChannels(t *testing.T) {
	for _, c := range []struct{ row, want string }{
		{"a\tx\tACCEL\tLeftWrist\tm/s^2", "LeftWrist.accel.x ACCEL LeftWrist x m/s^2 <m/s^2>"},
		{"a\ty\tACCEL\tleft wrist\tg", "left wrist.accel.y ACCEL left wrist y m/s^2 <g>"},
		{"a\tz\taccel\th\tn/a", "h.accel.z ACCEL h z m/s^2 <>"},
		{"a\tx\tANGACC\th\trad/s^2", "h.angacc.x ANGACC h x rad/s^2 <rad/s^2>"},
		{"a\tx\tANGACCEL\th\trad/s^2", "h.angacc.x ANGACC h x rad/s^2 <rad/s^2>"},
		{"a\tx\tGYRO\th\tdeg/s", "h.gyro.x GYRO h x rad/s <deg/s>"},
		{"a\tn/a\tJNTANG\tknee\tdeg", "knee.jntang JNTANG knee  rad <deg>"},
		{"a\tx\tMAGN\th\tuT", "h.magn.x MAGN h x T <uT>"},
		{"a\tx\tORNT\th\trad", "h.ornt.x ORNT h x rad <rad>"},
		{"a\tquat_w\tORNT\th\tn/a", "h.ornt.quat_w ORNT h quat_w 1 <>"},
		{"a\tquat_w\tORNT\th\t1", "h.ornt.quat_w ORNT h quat_w 1 <>"},
		{"a\tquat_w\tORNT\th\tarbitrary", "h.ornt.quat_w ORNT h quat_w 1 <>"},
		{"a\tx\tPOS\tn/a\tcm", "pos.x POS  x m <cm>"},
		{"a\tx\tPOS\th\tfurlong", "h.pos.x MISC h x  <>"},
		{"a\tx\tVEL\th\tm/s", "h.vel.x VEL h x m/s <m/s>"},
		{"bell\tn/a\tMISC\tstage\tn/a", "bell MISC stage   <>"},
		{"a\tx\tMISC\tstage\tmm", "stage.misc.x MISC stage x  <mm>"},
		{"a\tx\tMISC\tstage\tdB", "stage.misc.x MISC stage x  <>"},
	} {
		s := small().with(motionFile, "1\n2\n").with(channelsFile, channelTable(c.row)).with(jsonFile, `{"SamplingFrequency": 1}`)
		take, _ := s.take(t, motionFile)
		x := take.Layout.Columns[0]
		got := fmt.Sprintf("%s %s %s %s %s <%s>", x.Channel.Name, x.Channel.Quantity, x.Channel.TrackedPoint, x.Channel.Component, x.Channel.Unit, x.Unit)
		if got != c.want {
			t.Errorf("%q: %s, want %s", c.row, got, c.want)
		}
	}
}

// TestNamesApart gives each channel a name of its own.
func TestNamesApart(t *testing.T) {
	s := small().with(jsonFile, `{"SamplingFrequency": 1}`).with(motionFile, strings.Repeat("1\t", 8)+"1\n").with(channelsFile, channelTable(
		"a\tx\tPOS\thand\tm", "b\ty\tPOS\thand\tm", "c\tx\tPOS\thand\tm", "d\ty\tPOS\thand\tm", "e\tx\tPOS\thand_2\tm",
		"f\tx\tPOS\tn/a\tm", "g\tx\tPOS\tn/a\tm", "hand.pos.x\tn/a\tMISC\tn/a\tn/a", "h\tx\tPOS\thand\tm"))
	take, notices := s.take(t, motionFile)
	var got []string
	for _, c := range take.Layout.Columns {
		got = append(got, c.Channel.Name+" of "+c.Channel.TrackedPoint)
	}
	want := []string{
		"hand.pos.x of hand", "hand.pos.y of hand", "hand_2.pos.x of hand_2", "hand_2.pos.y of hand_2", "hand_2_2.pos.x of hand_2_2",
		"pos.x of ", "point_2.pos.x of point_2", "hand.pos.x_2 of ", "hand_3.pos.x of hand_3",
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
	if len(notices) == 0 || !strings.Contains(notices[0], "c is hand_2.pos.x") {
		t.Errorf("notices %q", notices)
	}
}

// TestTakes reads sound recordings that differ from the small one in one
// thing, and says what is other about the take and what the user is told.
func TestTakes(t *testing.T) {
	const frames = "  0: [1 2]\n  0.5: [3 4]\n  1: [5 6]\n"
	const head = "take sub-gretel_task-wave_tracksys-strings: label \"wave\", subject \"gretel\", session \"\", line 1\n"
	const sixty = "t\tn/a\tLATENCY\tn/a\tn/a"
	withStatus := func(px, py string) string {
		return "name\tcomponent\ttype\ttracked_point\tunits\tstatus\tstatus_description\n" +
			"t\tn/a\tLATENCY\tn/a\ts\tn/a\tn/a\npx\tx\tPOS\thand\tm\t" + px + "\npy\ty\tPOS\thand\tm\t" + py + "\n"
	}
	withRates := func(px, py string) string {
		return "sampling_frequency\tname\tcomponent\ttype\ttracked_point\tunits\nn/a\tt\tn/a\tLATENCY\tn/a\ts\n" +
			px + "\tpx\tx\tPOS\thand\tm\n" + py + "\tpy\ty\tPOS\thand\tm\n"
	}
	timeless := small()[motionFile]
	timeless = strings.NewReplacer("0\t1", "n/a\t1", "0.5\t3", "n/a\t3", "1\t5", "n/a\t5").Replace(timeless)
	const noLatency = "has a channel of latencies without values; the sampling frequency is the clock (t)"
	for _, c := range []struct {
		name, file, text string
		want             string // the take without its channels
		notices          []string
	}{
		{"as it is", "", "", frames, nil},
		{"no JSON", jsonFile, "", frames, nil},
		{"JSON with a mark", jsonFile, "\ufeff{}", frames, nil},
		{"other line ends", motionFile, "0\t1\t2\r\n\n0.5\t 3\t4.0 \r\n1\t5\t\"6\"", "  frame 1 is in line 3\n" + frames, nil},
		{"latencies that stand and run back", motionFile, "0\t1\t2\n0\t3\t4\n-1\t5\t6\n", "  0: [1 2]\n  0: [3 4]\n  -1: [5 6]\n", nil},
		{"a mark", motionFile, "\ufeff0\t1\t2\n0.5\t3\t4\n1\t5\t6\n", frames, nil},
		{"all columns counted", jsonFile, `{"MotionChannelCount": 3, "POSChannelCount": 2, "LATENCYChannelCount": 1, "TrackedPointsCount": 1}`, frames, nil},
		{"other counts", jsonFile, `{"ACCELChannelCount": 3, "POSChannelCount": 3, "VELChannelCount": "many", "TrackedPointsCount": 2}`, frames, []string{
			"states a ACCELChannelCount that is not the one of its channels (3; they have 0)",
			"states a POSChannelCount that is not the one of its channels (3; they have 2)",
			"states a TrackedPointsCount that is not the one of its channels (2; they have 1)",
		}},

		{"missing values", motionFile, "0\tn/a\t2\n0.5\t3\tNaN\n1\t\t6\n",
			"  missing: frame 0, column 0, line 1\n  missing: frame 1, column 1, line 2\n  missing: frame 2, column 0, line 3\n  0: [NaN 2]\n  0.5: [3 NaN]\n  1: [NaN 6]\n", nil},
		{"missing is a number", jsonFile, `{"MissingValues": "3"}`, "  missing: frame 1, column 0, line 2\n  0: [1 2]\n  0.5: [NaN 4]\n  1: [5 6]\n",
			[]string{"states that a number stands for missing values (3)"}},
		{"missing is a bare number", jsonFile, `{"MissingValues": 6e0}`, "  missing: frame 2, column 1, line 3\n  0: [1 2]\n  0.5: [3 4]\n  1: [5 NaN]\n",
			[]string{"states that a number stands for missing values (6e0)"}},
		{"missing is as usual", jsonFile, `{"MissingValues": "NaN"}`, frames, nil},

		{"effective frequency is no matter", jsonFile, `{"SamplingFrequency": 60, "SamplingFrequencyEffective": 61}`, frames, nil},
		{"no latencies", motionFile, timeless, frames, []string{noLatency}},
		{"instants", eventsFile, "onset\tduration\ttrial_type\n0.5\tn/a\tbow\n0.25\t0\tbell\n", "  0.25 to 0.25 s: bell (line 3)\n  0.5 to 0.5 s: bow (line 2)\n" + frames, nil},
		{"nothing to say", eventsFile, "onset\tduration\n0.5\t1\n", frames, []string{"has events without a trial_type, which are left out (the first is at " + eventsFile + ":2)"}},
		{"who knows when", eventsFile, "onset\tduration\ttrial_type\nn/a\t1\tbow\n", frames, []string{"has events without an onset, which are left out (the first is at " + eventsFile + ":2)"}},

		{"good channels", channelsFile, withStatus("good\tn/a", "n/a\tn/a"), frames, nil},
		{"a bad channel", channelsFile, withStatus("bad\tits string tore", "good\tn/a"), "  0: [2]\n  0.5: [4]\n  1: [6]\n",
			[]string{"has channels marked as bad, which are left out (px: its status is bad: its string tore)"}},
		{"two clocks", channelsFile, channelTable("t\tn/a\tLATENCY\tn/a\ts", "u\tn/a\tlatency\tn/a\tSeconds", "py\ty\tPOS\thand\tm"), "  0: [2]\n  0.5: [4]\n  1: [6]\n",
			[]string{"has more than one channel of latencies; the first is the clock and the others are left out (u)"}},
		{"a clock of no unit", channelsFile, channelTable(sixty, "px\tx\tPOS\thand\tm", "py\ty\tPOS\thand\tm"), frames, nil},
		{"frequencies of the channels", channelsFile, withRates("60", "60"), frames, nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			take, notices := small().with(c.file, c.text).take(t, motionFile)
			var got strings.Builder
			for line := range strings.Lines(described(take)) {
				if !strings.HasPrefix(line, "  channel") {
					got.WriteString(line)
				}
			}
			if d := cmp.Diff(head+c.want, got.String()); d != "" {
				t.Error(d)
			}
			if d := cmp.Diff(c.notices, notices); d != "" {
				t.Error(d)
			}
		})
	}
}

// TestClocks times a recording without latencies.
func TestClocks(t *testing.T) {
	withRates := func(px, py string) string {
		return "sampling_frequency\tname\tcomponent\ttype\ttracked_point\tunits\n" +
			px + "\tpx\tx\tPOS\thand\tm\n" + py + "\tpy\ty\tPOS\thand\tm\n"
	}
	for _, c := range []struct {
		json, px, py string
		period       float64
		notice       string
	}{
		{`{"SamplingFrequency": 50}`, "n/a", "n/a", 0.02, ""},
		{`{"SamplingFrequency": 50, "SamplingFrequencyEffective": "n/a"}`, "50", "50", 0.02, ""},
		{`{"SamplingFrequency": "n/a", "SamplingFrequencyEffective": 40}`, "n/a", "40", 0.025, ""},
		{`{"SamplingFrequency": 50, "SamplingFrequencyEffective": 50.0}`, "n/a", "n/a", 0.02, ""},
		{`{"SamplingFrequency": 50, "SamplingFrequencyEffective": 40}`, "n/a", "50", 0.025,
			"states an effective sampling frequency, which is the clock, beside the nominal one (40 Hz, not 50 Hz)"},
		{`{"SamplingFrequency": "n/a"}`, "10", "10", 0.1, ""},
		{`{"SamplingFrequency": 50}`, "50", "25", 0.02,
			"has channels with a sampling frequency of their own, which is not used: every row is one period after the one above (py has 25 Hz, the recording 50 Hz)"},
	} {
		s := small().with(motionFile, "1\t2\n3\t4\n5\t6\n").with(jsonFile, c.json).with(channelsFile, withRates(c.px, c.py))
		take, notices := s.take(t, motionFile)
		if d := cmp.Diff([]float64{0, c.period, 2 * c.period}, take.Time); d != "" {
			t.Errorf("%s: %s", c.json, d)
		}
		if got := strings.Join(notices, "; "); got != c.notice {
			t.Errorf("%s: notices %q", c.json, got)
		}
	}
}

// TestEvents annotates a recording.
func TestEvents(t *testing.T) {
	s := small().with(jsonFile, `{"StartTime": 2.5}`).
		with(eventsFile, "duration\tonset\ttrial_type\n0.125\t0.5\tbow\n0\t0.25\tbell\n0.25\t-1\t\"wave 5\"\"\"\n")
	take, notices := s.take(t, motionFile)
	want := []raw.Annotation{{Start: -1, End: -0.75, Label: `wave 5"`, Line: 4}, {Start: 0.25, End: 0.25, Label: "bell", Line: 3}, {Start: 0.5, End: 0.625, Label: "bow", Line: 2}}
	if d := cmp.Diff(want, take.Annotations); d != "" || take.Label != "" {
		t.Errorf("label %q, annotations %s", take.Label, d)
	}
	if d := cmp.Diff([]string{"states a StartTime, which is not used: its events are taken to count from its first row (2.5 s)"}, notices); d != "" {
		t.Error(d)
	}
	for _, start := range []string{`{"StartTime": 0}`, `{"StartTime": "n/a"}`, `{"StartTime": "noon"}`, "{}"} {
		if _, notices := s.with(jsonFile, start).take(t, motionFile); len(notices) > 0 {
			t.Errorf("%s: notices %q", start, notices)
		}
	}
}

// TestLeaveOut leaves columns out, by either of their names, whatever they
// hold.
func TestLeaveOut(t *testing.T) {
	s := small().with(motionFile, "0\tsoon\t2\n1\t\t4\n").
		with(channelsFile, channelTable("t\tn/a\tLATENCY\tn/a\ts", "px\tx\tPOS\thand\trad", "py\tx\tPOS\thand\tm"))
	for _, name := range []string{"px", "hand.pos.x"} {
		takes, _, err := s.read(motionFile, name)
		if err != nil {
			t.Fatal(err)
		}
		if x := takes[0]; len(x.Layout.Columns) != 1 || x.Layout.Columns[0].Channel.Name != "hand_2.pos.x" || !cmp.Equal(x.Data, []float64{2, 4}) {
			t.Errorf("without %s: %+v", name, x)
		}
	}
	_, _, err := s.read(motionFile, "px", "py")
	checkFault(t, err, motionFile+": has no channels to use")
}

// TestHeader passes over a first row that repeats the names of the channels.
func TestHeader(t *testing.T) {
	want, _ := small().take(t, motionFile)
	take, notices := small().with(motionFile, "t\tpx\t\"py\"\n"+small()[motionFile]).take(t, motionFile)
	want.Line = 2
	if d := cmp.Diff(want, take); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff([]string{"has a header, which motion in BIDS has not; it is passed over ()"}, notices); d != "" {
		t.Error(d)
	}
}
