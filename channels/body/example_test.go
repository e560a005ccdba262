package body_test

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/num/quat"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
)

// An arm of two bones, upper arm and forearm, bent by a right angle at the
// elbow.
func Example() {
	arm := &body.Skeleton{Joints: []body.Joint{
		{Name: "Shoulder", Parent: -1, Offset: r3.Vec{Y: 1.4}},
		{Name: "Elbow", Parent: 0, Offset: r3.Vec{X: 0.3}},
		{Name: "Elbow_end", Parent: 1, Offset: r3.Vec{X: 0.25}, End: true},
	}}
	turns := []quat.Number{body.Identity(), body.About(body.Z, math.Pi/2), body.Identity()}
	at := body.NewKinematics(arm).Forward(nil, turns, []r3.Vec{arm.Joints[0].Offset})
	for i, j := range arm.Joints {
		fmt.Printf("%s (%.2f, %.2f, %.2f) m\n", j.Name, at[i].X, at[i].Y, at[i].Z)
	}
	// Output:
	// Shoulder (0.00, 1.40, 0.00) m
	// Elbow (0.30, 1.40, 0.00) m
	// Elbow_end (0.30, 1.65, 0.00) m
}

func ExampleSlerp() {
	p := body.About(body.Z, 0)
	q := body.About(body.Z, math.Pi/2)
	fmt.Printf("%.0f degrees\n", body.Angle(p, body.Slerp(p, q, 0.5))*180/math.Pi)
	// Output: 45 degrees
}
