package puppets

import (
	"fmt"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
	"gonum.org/v1/gonum/stat"

	"strandwise/channels"
)

// The onsets of a cue's strokes, over many takes of one person: one draw for
// both hands correlates them fully, a draw each not at all.
func TestHandsShareTimingOnlyWhereSaid(t *testing.T) {
	const takes = 500
	p := company(1)[0]
	for _, c := range cues() {
		for k := range c.beats[rightHand] {
			if k >= len(c.beats[leftHand]) {
				break
			}
			var l, r []float64
			for i := range takes {
				x := p.perform(generator(1, fmt.Sprint(c.label, i)), c, [hands]r3.Rotation{}, 1)
				l = append(l, x.motions[leftHand].strokes[k].start)
				r = append(r, x.motions[rightHand].strokes[k].start)
			}
			// Both onsets follow the moment the logger was started, which spreads
			// by 0.006 s against 0.09 s of the hands' own delay.
			rho := stat.Correlation(l, r, nil)
			if c.together && rho < 0.999 || !c.together && (rho < -0.15 || rho > 0.15) {
				t.Errorf("%s, stroke %d: the onsets correlate by %.3f", c.label, k+1, rho)
			}
		}
	}
}

// The same as seen in the recordings: the moment a wrist first turns, less the
// mean of that person and cue.
func TestRecordedOnsetsShareTimingOnlyWhereSaid(t *testing.T) {
	shared := map[string]bool{"raise-curtain": true, "drop-curtain": true, "thunder-roll": true}
	var left, right = map[string][]float64{}, map[string][]float64{}
	for seed := range uint64(8) {
		groups := map[string][2][]float64{}
		for take := range Takes(seed) {
			g := groups[take.Subject+" "+take.Label]
			for hand, first := range []int{3, 9} { // left_wrist.gyro.x, right_wrist.gyro.x
				g[hand] = append(g[hand], onset(take, first))
			}
			groups[take.Subject+" "+take.Label] = g
			if len(g[0]) == takesPerCue {
				left[take.Label] = append(left[take.Label], centred(g[0])...)
				right[take.Label] = append(right[take.Label], centred(g[1])...)
			}
		}
	}
	for label := range left {
		rho := stat.Correlation(left[label], right[label], nil)
		if shared[label] && rho < 0.8 || !shared[label] && (rho < -0.35 || rho > 0.35) {
			t.Errorf("%s: recorded onsets correlate by %.3f", label, rho)
		}
		t.Logf("%s: recorded onsets correlate by %.3f", label, rho)
	}
}

// onset returns the time at which a gyroscope first reads over 0.5 rad/s.
func onset(take *channels.Take, first int) float64 {
	for i, s := range take.Time {
		f := take.Frame(i)[first:]
		if r3.Norm(r3.Vec{X: f[0], Y: f[1], Z: f[2]}) > 0.5 {
			return s
		}
	}
	return take.Duration()
}

func centred(x []float64) []float64 {
	mean := stat.Mean(x, nil)
	out := make([]float64, len(x))
	for i := range x {
		out[i] = x[i] - mean
	}
	return out
}

// People must differ more than one person's takes do, in tempo and in reach.
func TestPeopleDifferMoreThanTakes(t *testing.T) {
	for _, feature := range []struct {
		name string
		of   func(*channels.Take) float64
	}{
		{"duration", (*channels.Take).Duration},
		{"gravity on the left x axis", func(t *channels.Take) float64 { return t.Data[0] }},
	} {
		var within, between float64
		for seed := range uint64(5) {
			means := map[string][]float64{}
			groups := map[string][]float64{}
			for take := range Takes(seed) {
				key := take.Subject + " " + take.Label
				groups[key] = append(groups[key], feature.of(take))
				if len(groups[key]) == takesPerCue {
					within += stat.Variance(groups[key], nil)
					means[take.Label] = append(means[take.Label], stat.Mean(groups[key], nil))
				}
			}
			for _, m := range means {
				between += stat.Variance(m, nil) * float64(len(m))
			}
		}
		if between < 3*within {
			t.Errorf("%s: variance between people %g, within a person %g", feature.name, between, within)
		}
		t.Logf("%s: variance between people is %.1f times that within", feature.name, between/within)
	}
}
