package channels_test

import (
	"math"
	"strings"
	"testing"

	"strandwise/channels"
)

// take is a take of two channels, ax and ay, with these frames.
func take(seconds []float64, data ...float64) *channels.Take {
	return &channels.Take{ID: "t1", Layout: layout("ax", "ay"), Time: seconds, Data: data}
}

func TestTakeValidate(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, c := range []struct {
		name string
		take *channels.Take
		says string // part of the message, empty for a valid take
	}{
		{"valid", take([]float64{0, 1}, 0, 0, 0, 1), ""},
		{"one channel stands", take([]float64{-2, 0, 0.5}, 5, 1, 5, 1, 5, 2), ""},
		{"moves and comes back", take([]float64{0, 1, 2}, 0, 0, 1, 0, 0, 0), ""},
		{"no frame", take(nil), "take t1 has 0 frame"},
		{"one frame", take([]float64{0}, 1, 2), "at least 2"},
		{"values missing", take([]float64{0, 1}, 0, 0, 0), "3 values for 2 frames of 2 channels"},
		{"values too many", take([]float64{0, 1}, 0, 0, 0, 1, 1), "5 values for 2 frames of 2 channels"},
		{"time stands", take([]float64{0, 1, 1}, 0, 0, 0, 1, 1, 1), "frame 2: time 1 s does not come after 1 s"},
		{"time runs back", take([]float64{0, 1, 0.5}, 0, 0, 0, 1, 1, 1), "frame 2: time 0.5 s does not come after 1 s"},
		{"time is NaN", take([]float64{0, nan}, 0, 0, 0, 1), "frame 1: time NaN"},
		{"first time is NaN", take([]float64{nan, 1}, 0, 0, 0, 1), "time"},
		{"last time is infinite", take([]float64{0, inf}, 0, 0, 0, 1), "frame 1: time +Inf"},
		{"first time is infinite", take([]float64{-inf, 0}, 0, 0, 0, 1), "frame 0: time -Inf"},
		{"NaN", take([]float64{0, 1}, 0, 0, 0, nan), "frame 1: channel ay is NaN, not a finite number"},
		{"NaN at the first frame", take([]float64{0, 1}, nan, 0, 0, 0), "frame 0: channel ax is NaN"},
		{"infinite", take([]float64{0, 1}, 0, 0, -inf, 0), "frame 1: channel ax is -Inf"},
		{"constant", take([]float64{0, 1, 2}, 3, 4, 3, 4, 3, 4), "take t1 is constant: no channel changes over its 3 frames"},
	} {
		err := c.take.Validate()
		if (err == nil) != (c.says == "") || err != nil && !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: error %v, want it to say %q", c.name, err, c.says)
		}
	}
}

func TestTakeMeasures(t *testing.T) {
	for _, c := range []struct {
		take           *channels.Take
		frames         int
		duration, rate float64
	}{
		{take(nil), 0, 0, 0},
		{take([]float64{7}, 1, 2), 1, 0, 0},
		{take([]float64{10, 10.02, 10.04}, 1, 2, 3, 4, 5, 6), 3, 0.04, 50},
		{take([]float64{-1, 0, 3}, 1, 2, 3, 4, 5, 6), 3, 4, 0.5}, // mean rate of an uneven clock
	} {
		if c.take.Frames() != c.frames || c.take.Width() != 2 {
			t.Errorf("%d frames of %d channels", c.take.Frames(), c.take.Width())
		}
		if math.Abs(c.take.Duration()-c.duration) > 1e-12 || math.Abs(c.take.Rate()-c.rate) > 1e-9 {
			t.Errorf("%v s at %v Hz, want %v s at %v Hz", c.take.Duration(), c.take.Rate(), c.duration, c.rate)
		}
	}
}

func TestTakeFrameIsAView(t *testing.T) {
	x := take([]float64{0, 1, 2}, 1, 2, 3, 4, 5, 6)
	f := x.Frame(1)
	f[0] = 30
	if x.Data[2] != 30 || len(f) != 2 {
		t.Errorf("frame %v of %v", f, x.Data)
	}
	if _ = append(f, 50); x.Data[4] != 5 {
		t.Error("a longer frame runs into the next")
	}
}

func TestTakeClone(t *testing.T) {
	x := take([]float64{0, 1}, 1, 2, 3, 4)
	x.Label, x.Made = "wave", &channels.Making{Source: "t0"}
	c := x.Clone()
	c.Time[0], c.Data[0] = -1, -1
	if x.Time[0] != 0 || x.Data[0] != 1 {
		t.Error("the copy shares its samples")
	}
	if c.ID != x.ID || c.Label != x.Label || c.Layout != x.Layout || c.Made != x.Made {
		t.Errorf("the copy differs: %+v", c)
	}
}

func TestTakeOrigin(t *testing.T) {
	x := take(nil)
	if got := x.Origin(); got != channels.Recorded {
		t.Errorf("origin %q", got)
	}
	x.Made = new(channels.Making)
	if got := x.Origin(); got != channels.Synthetic {
		t.Errorf("origin %q", got)
	}
}

func TestParseSplit(t *testing.T) {
	for text, want := range map[string]channels.Split{"": channels.None, "train": channels.Train, "test": channels.Test} {
		if got, err := channels.ParseSplit(text); got != want || err != nil {
			t.Errorf("%q: %q, %v", text, got, err)
		}
	}
	for _, text := range []string{"Test", "validation", " train"} {
		if _, err := channels.ParseSplit(text); err == nil || !strings.Contains(err.Error(), "legal splits are train and test") {
			t.Errorf("%q: error %v", text, err)
		}
	}
}
