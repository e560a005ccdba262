package body_test

import (
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/channels/body"
)

// TestMirror checks what defines the images: a polar vector turned and then
// mirrored is the mirrored one turned by the mirrored rotation, and a cross
// product of polar vectors is axial.
func TestMirror(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q, v, w := drawRotation(t, "q"), drawVec(t, "v"), drawVec(t, "w")
		for _, a := range []body.Axis{body.X, body.Y, body.Z} {
			polar := func(v r3.Vec) r3.Vec { return body.MirrorPolar(v, a) }
			checkVec(t, polar(body.Rotate(q, v)), body.Rotate(body.MirrorRotation(q, a), polar(v)))
			checkVec(t, body.MirrorAxial(r3.Cross(v, w), a), r3.Cross(polar(v), polar(w)))
			checkSame(t, body.MirrorRotation(body.Exp(v), a), body.Exp(body.MirrorAxial(v, a)))
			checkVec(t, polar(polar(v)), v)
			checkVec(t, body.MirrorAxial(body.MirrorAxial(v, a), a), v)
			checkSame(t, body.MirrorRotation(body.MirrorRotation(q, a), a), q)
		}
	})
	if got := body.MirrorPolar(r3.Vec{X: 1, Y: 2, Z: 3}, body.X); got != (r3.Vec{X: -1, Y: 2, Z: 3}) {
		t.Error(got)
	}
}
