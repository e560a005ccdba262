package body

import (
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/spatial/r3"
)

// Reach moves the joints of a chain in place so that the last one comes to the
// target, while the first one stays and every bone keeps its length: FABRIK,
// forward and backward reaching inverse kinematics (Aristidou and Lasenby,
// Graphical Models 73 (2011) 243). lengths has one bone for each joint but the
// first; the chain's own distances are not used, so that a chain pulled out of
// shape is restored even when it ends at the target already. It stops when the
// last joint is within the tolerance of the target, or after so many rounds at
// most, and returns how far from the target the last joint is. Bones have their
// lengths in either case.
//
// A target too far away to be reached stretches the chain straight towards it.
// One too near, where a bone is longer than all others and the way together,
// is approached as far as the rounds go. A chain that lies straight on the line
// to its target is first bent aside by a thousandth of its length, which way is
// not determined: the published method would stay on the line.
func Reach(chain []r3.Vec, lengths []float64, target r3.Vec, tolerance float64, rounds int) float64 {
	if len(chain) == 0 || len(lengths) != len(chain)-1 {
		panic("body: a chain needs joints, and a bone between each two")
	}
	root, last := chain[0], len(chain)-1
	if whole := floats.Sum(lengths); r3.Norm(r3.Sub(target, root)) >= whole {
		way := direction(r3.Sub(target, root))
		for i, l := range lengths {
			chain[i+1] = r3.Add(chain[i], r3.Scale(l, way))
		}
		return r3.Norm(r3.Sub(target, chain[last]))
	} else if straight(chain, target, 1e-9*whole) {
		aside(chain, target, 1e-3*whole)
	}
	outwards(chain, lengths)
	for range rounds {
		if r3.Norm(r3.Sub(target, chain[last])) <= tolerance {
			break
		}
		chain[last] = target
		for i := last - 1; i >= 0; i-- {
			chain[i] = along(chain[i+1], chain[i], lengths[i])
		}
		chain[0] = root
		outwards(chain, lengths)
	}
	return r3.Norm(r3.Sub(target, chain[last]))
}

// outwards gives every bone its length, from the first joint on.
func outwards(chain []r3.Vec, lengths []float64) {
	for i, l := range lengths {
		chain[i+1] = along(chain[i], chain[i+1], l)
	}
}

// along returns the point at a distance from one point in the direction of
// another.
func along(from, to r3.Vec, distance float64) r3.Vec {
	return r3.Add(from, r3.Scale(distance, direction(r3.Sub(to, from))))
}

// straight tells whether all joints lie on the line from the first one to the
// target, or on it to within so much.
func straight(chain []r3.Vec, target r3.Vec, within float64) bool {
	line := r3.Sub(target, chain[0])
	if r3.Norm(line) <= within {
		line = r3.Sub(chain[len(chain)-1], chain[0])
	}
	line = direction(line)
	off := 0.0
	for _, p := range chain {
		off = max(off, r3.Norm(r3.Cross(line, r3.Sub(p, chain[0]))))
	}
	return off <= within
}

// aside bends the chain away from the line to its target, in a half wave.
func aside(chain []r3.Vec, target r3.Vec, by float64) {
	line := r3.Sub(target, chain[0])
	if r3.Norm(line) == 0 {
		line = r3.Sub(chain[len(chain)-1], chain[0])
	}
	way := across(direction(line))
	for i := 1; i < len(chain)-1; i++ {
		bend := math.Sin(math.Pi * float64(i) / float64(len(chain)-1))
		chain[i] = r3.Add(chain[i], r3.Scale(by*bend, way))
	}
}
