package puppets

// A joint is one angle of the arm, in radians; all are 0 when the arm hangs
// with the thumb to the front.
const (
	flexion   = iota // of the shoulder: raises the arm to the front
	abduction        // of the shoulder: raises the arm to its own side
	rotation         // of the upper arm about its length, inwards
	elbow            // flexion: raises the forearm to the front
	pronation        // of the forearm about its length, thumb inwards
	joints
)

// posture holds one value per joint, in radians.
type posture [joints]float64

// angle is an angle with its first two derivatives: rad, rad/s, rad/s².
type angle struct{ value, rate, acceleration float64 }

// stroke is one movement from posture to posture, along a straight line in
// joint angles.
type stroke struct {
	start, duration float64 // seconds
	turn            posture // end posture minus start posture
}

// motion is the movement of one arm: where it begins, and strokes that add to
// it. Strokes may overlap; they superpose.
type motion struct {
	home    posture
	strokes []stroke
}

// minimumJerk returns the fraction of a stroke done at the fraction x of its
// duration, 0 before and 1 after, with the derivatives by x:
//
//	s(x) = 10x³ − 15x⁴ + 6x⁵
//
// from Flash and Hogan, "The coordination of arm movements: an experimentally
// confirmed mathematical model", Journal of Neuroscience 5 (1985) 1688–1703.
// The peak speed, at x = 1/2, is 15/8 of the mean.
func minimumJerk(x float64) (s, ds, dds float64) {
	if x <= 0 {
		return 0, 0, 0
	}
	if x >= 1 {
		return 1, 0, 0
	}
	y := 1 - x
	return x * x * x * (10 + x*(6*x-15)), 30 * x * x * y * y, 60 * x * y * (1 - 2*x)
}

// at returns the joint angles at time t in seconds.
func (m motion) at(t float64) [joints]angle {
	var q [joints]angle
	for j := range q {
		q[j].value = m.home[j]
	}
	for _, k := range m.strokes {
		s, ds, dds := minimumJerk((t - k.start) / k.duration)
		for j, turn := range k.turn {
			q[j].value += turn * s
			q[j].rate += turn * ds / k.duration
			q[j].acceleration += turn * dds / (k.duration * k.duration)
		}
	}
	return q
}

// end returns the time in seconds at which the last stroke is done.
func (m motion) end() float64 {
	last := 0.0
	for _, k := range m.strokes {
		last = max(last, k.start+k.duration)
	}
	return last
}
