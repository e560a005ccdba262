package variation

import (
	"math"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
)

// steadying is the share of the movement that is taken to be unturned, so that
// a turn about an axis the movement does not show counts as none.
const steadying = 0.01

// turn returns the angle in radians of the rotation that brings the vectors of
// a nearest to those of b (Kabsch, Acta Crystallographica A32 (1976) 922);
// apply turns those of a by it.
func (m *meter) turn(list [][]int, apply bool) float64 {
	m.points[0] = m.vectorsOf(m.points[0][:0], m.a, list)
	m.points[1] = m.vectorsOf(m.points[1][:0], m.b, list)
	m.steady()
	if m.axes == 2 {
		angle := body.Kabsch2(m.points[0], m.points[1])
		if apply {
			turnPlane(m.a, m.width, list, angle)
		}
		return angle
	}
	q := body.Kabsch(m.points[0], m.points[1])
	if apply {
		turnSpace(m.a, m.width, list, q)
	}
	return body.Angle(body.Identity(), q)
}

// vectorsOf appends the vectors of all frames to dst.
func (m *meter) vectorsOf(dst, data []float64, list [][]int) []float64 {
	for i := 0; i < len(data); i += m.width {
		for _, v := range list {
			for _, c := range v {
				dst = append(dst, data[i+c])
			}
		}
	}
	return dst
}

// steady appends the same small vectors along each axis to both sides.
func (m *meter) steady() {
	size := 0.0
	for i, x := range m.points[0] {
		size += math.Abs(x * m.points[1][i])
	}
	length := math.Sqrt(steadying * size)
	for axis := range m.axes {
		for k := range m.points {
			for other := range m.axes {
				x := 0.0
				if other == axis {
					x = length
				}
				m.points[k] = append(m.points[k], x)
			}
		}
	}
}

// turnPlane turns the vectors of two axes by an angle, about the origin.
func turnPlane(data []float64, width int, list [][]int, angle float64) {
	sin, cos := math.Sincos(angle)
	for i := 0; i < len(data); i += width {
		for _, v := range list {
			x, y := data[i+v[0]], data[i+v[1]]
			data[i+v[0]], data[i+v[1]] = cos*x-sin*y, sin*x+cos*y
		}
	}
}

// turnSpace turns the vectors of three axes, about the origin.
func turnSpace(data []float64, width int, list [][]int, q quat.Number) {
	for i := 0; i < len(data); i += width {
		for _, v := range list {
			r := body.Rotate(q, r3.Vec{X: data[i+v[0]], Y: data[i+v[1]], Z: data[i+v[2]]})
			data[i+v[0]], data[i+v[1]], data[i+v[2]] = r.X, r.Y, r.Z
		}
	}
}
