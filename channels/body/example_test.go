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

// A sensor at rest, seen before and after a quarter turn about its x axis: up is
// where the accelerometer points, and the gyroscope tells how it got there.
func ExampleSeparateGravity() {
	var time, accel, gyro []float64
	for i := range 151 {
		at := float64(i) / 50
		angle := math.Pi / 2 * min(max(at-1, 0), 1) // turned from 1 s to 2 s
		rate := 0.0
		if at > 1 && at <= 2 {
			rate = math.Pi / 2
		}
		time = append(time, at)
		accel = append(accel, 0, 9.81*math.Sin(angle), 9.81*math.Cos(angle))
		gyro = append(gyro, rate, 0, 0)
	}
	g := body.SeparateGravity(time, accel, gyro)
	fmt.Printf("%.2f m/s², up is (%.1f, %.1f, %.1f), then (%.1f, %.1f, %.1f)\n", g.Magnitude,
		math.Abs(g.Direction[0]), g.Direction[1], g.Direction[2], math.Abs(g.Direction[450]), g.Direction[451], math.Abs(g.Direction[452]))
	// Output: 9.81 m/s², up is (0.0, 0.0, 1.0), then (0.0, 1.0, 0.0)
}

// The knee gives way so that the foot stays on its place while the hip sinks.
func ExampleReach() {
	hip := r3.Vec{Y: 0.8} // 8 cm lower than when the leg is straight
	leg := []r3.Vec{hip, {Y: 0.43, Z: 0.01}, {}}
	off := body.Reach(leg, []float64{0.45, 0.43}, r3.Vec{}, 1e-4, 100)
	fmt.Printf("foot within 0.1 mm: %v; knee %.2f m forward\n", off <= 1e-4, leg[1].Z)
	// Output: foot within 0.1 mm: true; knee 0.18 m forward
}

func ExampleSpace() {
	s := body.Rotation()
	p, q, way := []float64{0, 0, 0, 1}, make([]float64, 4), make([]float64, 3)
	body.Store(q, body.About(body.Z, 1))
	s.Displacement(way, p, q)
	s.Chain(q, q, way) // as far again
	fmt.Printf("%.1f rad\n", s.Distance(p, q))
	// Output: 2.0 rad
}
