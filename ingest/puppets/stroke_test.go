package puppets

import (
	"math"
	"testing"
)

// Peak over mean speed of a minimum-jerk stroke is 15/8, at mid-time: Flash &
// Hogan, J. Neuroscience 5 (1985) 1688.
func TestMinimumJerkPeaksAtMidTime(t *testing.T) {
	m := motion{strokes: []stroke{{start: 0.3, duration: 0.7, turn: posture{elbow: 1.2}}}}
	const n = 7000
	peak, at := 0.0, 0.0
	for i := range n + 1 {
		x := 0.3 + 0.7*float64(i)/n
		if v := m.at(x)[elbow].rate; v > peak {
			peak, at = v, x
		}
	}
	mean := (m.at(2)[elbow].value - m.at(0)[elbow].value) / 0.7
	if got := peak / mean; math.Abs(got-15.0/8) > 1e-9 {
		t.Errorf("peak over mean speed = %.10f, want 1.875", got)
	}
	if math.Abs(at-0.65) > 1e-4 {
		t.Errorf("peak speed at %g s, want mid-time 0.65 s", at)
	}
}

func TestMinimumJerkEndsAtRest(t *testing.T) {
	for _, c := range []struct{ x, s float64 }{{-1, 0}, {0, 0}, {1e-12, 0}, {0.5, 0.5}, {1 - 1e-12, 1}, {1, 1}, {3, 1}} {
		s, ds, dds := minimumJerk(c.x)
		if math.Abs(s-c.s) > 1e-9 {
			t.Errorf("s(%g) = %g, want %g", c.x, s, c.s)
		}
		if c.x != 0.5 && (math.Abs(ds) > 1e-9 || math.Abs(dds) > 1e-9) {
			t.Errorf("s(%g) moves: speed %g, acceleration %g", c.x, ds, dds)
		}
	}
}

func TestStrokesReachTheirPostures(t *testing.T) {
	m := motion{home: posture{elbow: 0.1}, strokes: []stroke{
		{start: 1, duration: 1, turn: posture{elbow: 0.5}},
		{start: 1.5, duration: 1, turn: posture{elbow: -0.2, flexion: 1}}, // overlaps the first
	}}
	if got := m.at(0.5)[elbow].value; got != 0.1 {
		t.Errorf("elbow before the strokes at %g, want home 0.1", got)
	}
	q := m.at(m.end())
	if math.Abs(q[elbow].value-0.4) > 1e-12 || q[flexion].value != 1 {
		t.Errorf("after the strokes elbow %g and flexion %g, want 0.4 and 1", q[elbow].value, q[flexion].value)
	}
}
