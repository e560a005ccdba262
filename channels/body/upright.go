package body

import (
	"gonum.org/v1/gonum/spatial/r3"
)

// joinedDirections are the directions of the upright found by the filter
// running forwards and by the one running backwards, joined by their variances.
// The backward one stands where it is before it sees the frame, so that no
// frame counts twice.
func joinedDirections(time, accel, gyro, doubt []float64) []float64 {
	n := len(time)
	out, variance := make([]float64, 3*n), make([]float64, n)
	f := newUpright(time, accel, gyro, doubt, 0)
	for i := range n {
		f.move(i)
		f.see(i)
		put(out[3*i:], f.up)
		variance[i] = f.variance
	}
	f = newUpright(time, accel, gyro, doubt, n-1)
	for i := n - 1; i >= 0; i-- {
		f.move(i)
		share := variance[i] / (variance[i] + f.variance)
		put(out[3*i:], toward(vec(out[3*i:]), f.up, share))
		f.see(i)
	}
	return out
}

// upright is a filter that follows the direction of up through a take, in
// either direction of time.
type upright struct {
	time, accel, gyro, doubt []float64

	frame    int     // where it stands
	up       r3.Vec  // unit
	variance float64 // of the direction, rad²
}

func newUpright(time, accel, gyro, doubt []float64, frame int) *upright {
	return &upright{time, accel, gyro, doubt, frame, direction(vec(accel[3*frame:])), freshWeight}
}

// move goes to a neighbouring frame by the gyroscope, or stays.
func (f *upright) move(i int) {
	if i == f.frame {
		return
	}
	rate, step := meanRate(f.gyro, max(i, f.frame)), f.time[i]-f.time[f.frame]
	f.up = direction(turned(r3.Scale(-step, rate), f.up))
	f.variance += (rateSpread*rateSpread + rateShare*rateShare*r3.Norm2(rate)) * max(step, -step)
	f.frame = i
}

// see draws the direction towards that of the accelerometer at frame i. Errors
// of neighbouring frames are not independent: together, the frames of one
// correlation time count as one sight.
func (f *upright) see(i int) {
	v := vec(f.accel[3*i:])
	if v == (r3.Vec{}) {
		return
	}
	sight := f.doubt[i] * max(1, correlation/f.spacing(i))
	gain := f.variance / (f.variance + sight)
	f.up = toward(f.up, direction(v), gain)
	f.variance *= 1 - gain
}

// spacing returns the time from one frame to the next around frame i.
func (f *upright) spacing(i int) float64 {
	a, b := max(i-1, 0), min(i+1, len(f.time)-1)
	if a == b {
		return correlation
	}
	return (f.time[b] - f.time[a]) / float64(b-a)
}

// followingRate returns the rate of the gyroscope with a slow correction under
// which a direction integrates through the given ones (frames × 3). A frame's
// correction is what the two steps beside it want, over the time they take: it
// is smooth, and over the take nothing of it is lost.
func followingRate(time, gyro, directions []float64) []float64 {
	rate := append([]float64(nil), gyro...)
	const rounds = 3 // later rounds take up what turns about several axes do to each other
	for range rounds {
		wanted := make([]r3.Vec, len(time)+1) // by the step that ends at a frame, rad
		for i := 1; i < len(time); i++ {
			seen := turned(r3.Scale(time[i-1]-time[i], meanRate(rate, i)), vec(directions[3*i-3:]))
			wanted[i] = shortestTurn(seen, vec(directions[3*i:]))
		}
		for i := range time {
			a, b := max(i-1, 0), min(i+1, len(time)-1)
			if a < b {
				correction := r3.Scale(1/(time[b]-time[a]), r3.Add(wanted[i], wanted[i+1]))
				put(rate[3*i:], r3.Sub(vec(rate[3*i:]), correction))
			}
		}
	}
	return rate
}
