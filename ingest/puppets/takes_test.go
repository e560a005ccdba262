package puppets_test

import (
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/stat"
	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/ingest/puppets"
)

func collect(t testing.TB, seed uint64) []*channels.Take {
	t.Helper()
	var out []*channels.Take
	for take, err := range puppets.Takes(seed) {
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, take)
	}
	return out
}

func TestTakesAreSoundForAnySeed(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		seen := map[string]bool{}
		for take, err := range puppets.Takes(rapid.Uint64().Draw(r, "seed")) {
			if err != nil {
				r.Fatal(err)
			}
			if err := take.Validate(); err != nil {
				r.Fatal(err)
			}
			if seen[take.ID] {
				r.Fatalf("two takes are called %s", take.ID)
			}
			seen[take.ID] = true
			// The factors on strokes and rests are log-normal: among 360,000 takes
			// the shortest lasted 0.80 s and the longest 4.14 s.
			if d := take.Duration(); d < 0.5 || d > 6 {
				r.Fatalf("take %s lasts %g s", take.ID, d)
			}
		}
		if len(seen) != 120 {
			r.Fatalf("%d takes, want 120", len(seen))
		}
	})
}

func TestTakesAreBalanced(t *testing.T) {
	takes := collect(t, 1)
	count := func(key func(*channels.Take) string) map[string]int {
		n := map[string]int{}
		for _, take := range takes {
			n[key(take)]++
		}
		return n
	}
	for _, c := range []struct {
		name string
		key  func(*channels.Take) string
		want map[string]int
	}{
		{"subjects", func(t *channels.Take) string { return t.Subject },
			map[string]int{"bobbin": 30, "fidget": 30, "tassel": 30, "thimble": 30}},
		{"labels", func(t *channels.Take) string { return t.Label },
			map[string]int{"drop-curtain": 20, "light-lantern": 20, "rain-patter": 20, "raise-curtain": 20, "snuff-lantern": 20, "thunder-roll": 20}},
		{"sessions", func(t *channels.Take) string { return t.Session }, map[string]int{"evening": 48, "matinee": 72}},
		{"origins", func(t *channels.Take) string { return string(t.Origin()) }, map[string]int{"recorded": 120}},
	} {
		if d := cmp.Diff(c.want, count(c.key)); d != "" {
			t.Errorf("%s (-want +got):\n%s", c.name, d)
		}
	}
}

func TestTakesAreRepeatable(t *testing.T) {
	a, b, c := collect(t, 7), collect(t, 7), collect(t, 8)
	if d := cmp.Diff(a, b); d != "" {
		t.Errorf("two runs of one seed differ:\n%s", d)
	}
	if cmp.Equal(a[0].Data, c[0].Data) {
		t.Error("two seeds give the same take")
	}
}

func TestStreamStopsEarly(t *testing.T) {
	n := 0
	for range puppets.Takes(1) {
		if n++; n == 3 {
			break
		}
	}
	if n != 3 {
		t.Errorf("got %d takes, want 3", n)
	}
}

func TestLayoutHasAGroupPerSensorAndALimbPerArm(t *testing.T) {
	l := collect(t, 1)[0].Layout
	var groups []string
	for _, g := range l.Groups {
		groups = append(groups, g.Limb+"/"+g.Name)
		if len(g.Channels) != 3 {
			t.Errorf("group %s has %d channels, want 3", g.Name, len(g.Channels))
		}
	}
	want := []string{"left_arm/left_wrist.accel", "left_arm/left_wrist.gyro", "right_arm/right_wrist.accel", "right_arm/right_wrist.gyro"}
	if d := cmp.Diff(want, groups); d != "" {
		t.Errorf("groups (-want +got):\n%s", d)
	}
	for _, c := range l.Channels {
		want := channels.Channel{Name: c.Name, TrackedPoint: c.TrackedPoint, Quantity: channels.Acceleration, Component: c.Component, Unit: "m/s^2"}
		if strings.Contains(c.Name, ".gyro.") {
			want.Quantity, want.Unit = channels.AngularRate, "rad/s"
		}
		if d := cmp.Diff(want, c); d != "" {
			t.Errorf("channel %s (-want +got):\n%s", c.Name, d)
		}
	}
}

// Before a cue the wrist rests: the accelerometer reads gravity, 9.80665 m/s²
// (3rd CGPM 1901; ISO 80000-3), but for bias, sway and noise.
func TestRecordingsBeginAtRest(t *testing.T) {
	const tolerance = 0.5 // m/s²
	for _, take := range collect(t, 2) {
		if take.Subject == "fidget" {
			continue // leaves no rest to speak of
		}
		for i := range 8 {
			f := take.Frame(i)
			for _, a := range [][]float64{f[0:3], f[6:9]} {
				if got := math.Hypot(math.Hypot(a[0], a[1]), a[2]); math.Abs(got-9.80665) > tolerance {
					t.Errorf("%s: frame %d: gravity reads %g m/s²", take.ID, i, got)
				}
			}
		}
	}
}

func TestClockHasTheFaultsSaid(t *testing.T) {
	gapped := 0
	var regular []float64
	for seed := range uint64(5) {
		for _, take := range collect(t, seed) {
			gap := false
			for i := 1; i < take.Frames(); i++ {
				d := take.Time[i] - take.Time[i-1]
				switch {
				case d < 0.013 || d > 0.067: // 20 to 60 ms, and twice 3 ms of jitter
					t.Fatalf("%s: frame %d comes %g s after the last", take.ID, i, d)
				case d > 0.030:
					gap = true
				default:
					regular = append(regular, d)
				}
			}
			if gap {
				gapped++
			}
		}
	}
	if share := float64(gapped) / 600; share < 0.13 || share > 0.27 {
		t.Errorf("%.2f of the takes have a gap, want about 0.2", share)
	}
	// An interval has the jitter of two frames: 1 ms × √2.
	if mean, sd := stat.MeanStdDev(regular, nil); math.Abs(mean-0.02) > 1e-4 || math.Abs(sd-0.00141) > 1e-4 {
		t.Errorf("intervals are %g ± %g s, want 0.02 ± 0.0014", mean, sd)
	}
}

func TestStrongestTakeClips(t *testing.T) {
	for seed := range uint64(20) {
		var clipped []string
		for _, take := range collect(t, seed) {
			if clips(take) {
				clipped = append(clipped, take.ID)
			}
		}
		finale := func(id string) bool { return strings.HasSuffix(id, "thunder-roll_evening_5") }
		if !slices.ContainsFunc(clipped, finale) {
			t.Errorf("seed %d: no finale clips, only %v", seed, clipped)
		}
		if len(clipped) > 10 {
			t.Errorf("seed %d: clipping should be rare, but %d takes clip: %v", seed, len(clipped), clipped)
		}
	}
}

// clips tells whether a reading stands at ±8 g or ±1000 deg/s.
func clips(take *channels.Take) bool {
	for i := range take.Time {
		for c, v := range take.Frame(i) {
			full := 8 * channels.StandardGravity
			if c%6 > 2 {
				full = 1000 * math.Pi / 180
			}
			if math.Abs(v) > full*(1-2.0/32768) {
				return true
			}
		}
	}
	return false
}

func TestFidgetLeavesLittleRest(t *testing.T) {
	sum := map[string]float64{}
	for seed := range uint64(5) {
		for _, take := range collect(t, seed) {
			sum[take.Subject] += take.Duration() - active(take)
		}
	}
	for _, other := range []string{"bobbin", "tassel", "thimble"} {
		if sum["fidget"] > 0.8*sum[other] {
			t.Errorf("fidget rests %g s, %s %g s", sum["fidget"]/150, other, sum[other]/150)
		}
	}
}

// active returns the time from the first to the last movement in seconds.
func active(take *channels.Take) float64 {
	first, last := -1.0, 0.0
	for i, s := range take.Time {
		f := take.Frame(i)
		if math.Hypot(math.Hypot(f[3], f[4]), f[5]) > 0.3 || math.Hypot(math.Hypot(f[9], f[10]), f[11]) > 0.3 {
			if first < 0 {
				first = s
			}
			last = s
		}
	}
	return last - first
}

func BenchmarkTakes(b *testing.B) {
	frames := 0
	for b.Loop() {
		for take := range puppets.Takes(1) {
			frames += take.Frames()
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(frames), "ns/frame")
}
