package bvh

import (
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
)

// placeMoves turns the moves of a motion from what the file states into places
// in the frame of the parent, and returns the names of the joints whose moves
// take the place of their offset. See the package documentation for the rule.
func placeMoves(m *Motion) []string {
	var names []string
	moving := m.Skeleton.Moving()
	for n, i := range moving {
		j := &m.Skeleton.Joints[i]
		given := mask(j.Freedoms)
		j.Absolute = nearerToOffset(m.Moves[n:], len(moving), times(j.Offset, given))
		if j.Absolute {
			names = append(names, j.Name)
		}
		for k := n; k < len(m.Moves); k += len(moving) {
			m.Moves[k] = place(*j, given, m.Moves[k])
		}
	}
	return names
}

// mask has a one on each axis on which the file states the move, else zero.
func mask(freedoms []body.Freedom) r3.Vec {
	var v r3.Vec
	for _, f := range freedoms {
		if !f.IsTurn() {
			*component(&v, f.Axis()) = 1
		}
	}
	return v
}

// times is the product of vectors part by part.
func times(a, b r3.Vec) r3.Vec { return r3.Vec{X: a.X * b.X, Y: a.Y * b.Y, Z: a.Z * b.Z} }

// nearerToOffset tells whether every stride-th of the moves, from the first,
// lies nearer to the offset o than to zero, in the mean of the squares:
//
//	Σ |v - o|² < Σ |v|²   ⇔   Σ v·o > n |o|²/2
func nearerToOffset(moves []r3.Vec, stride int, o r3.Vec) bool {
	sum, n := 0.0, 0.0
	for k := 0; k < len(moves); k += stride {
		sum += r3.Dot(moves[k], o)
		n++
	}
	return sum > n*r3.Norm2(o)/2
}

// place returns where a joint is in the frame of its parent, given its move as
// stated.
func place(j body.Joint, given, move r3.Vec) r3.Vec {
	if j.Absolute {
		return r3.Add(move, r3.Sub(j.Offset, times(j.Offset, given)))
	}
	return r3.Add(j.Offset, move)
}

// stated undoes [place] on the axes that have a channel.
func stated(offset r3.Vec, absolute bool, at r3.Vec) r3.Vec {
	if absolute {
		return at
	}
	return r3.Sub(at, offset)
}
