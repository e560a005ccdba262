package gate

import (
	"math"

	"strandwise/channels"
)

// order returns how many times a channel is differentiated to give jerk, the
// third derivative of place or angle, or what comes nearest to it.
func order(q channels.Quantity) int {
	switch q {
	case channels.Position, channels.Orientation, channels.JointAngle:
		return 3
	case channels.Velocity, channels.AngularRate:
		return 2
	}
	return 1
}

// jerks appends the rms jerk of every group, in its channels' unit per second
// to the power of their order: differences of frames on a clock taken to be
// even. A take too short to differentiate has none.
func jerks(dst []float64, t *channels.Take) []float64 {
	rate := t.Rate()
	for _, g := range t.Layout.Groups {
		sum, count := 0.0, 0
		for _, c := range g.Channels {
			n := order(t.Layout.Channels[c].Quantity)
			if frames := t.Frames() - n; frames > 0 {
				sum += differences(t, c, n) * math.Pow(rate, float64(2*n))
				count += frames
			}
		}
		dst = append(dst, math.Sqrt(sum/float64(max(count, 1))))
	}
	return dst
}

// differences returns the sum of squares of the n-th differences of a channel.
func differences(t *channels.Take, c, n int) float64 {
	w, x, sum := t.Width(), t.Data, 0.0
	switch n {
	case 1:
		for i := c + w; i < len(x); i += w {
			d := x[i] - x[i-w]
			sum += d * d
		}
	case 2:
		for i := c + 2*w; i < len(x); i += w {
			d := x[i] - 2*x[i-w] + x[i-2*w]
			sum += d * d
		}
	default:
		for i := c + 3*w; i < len(x); i += w {
			d := x[i] - 3*x[i-w] + 3*x[i-2*w] - x[i-3*w]
			sum += d * d
		}
	}
	return sum
}
