package chart_test

import (
	"fmt"
	"math"
	"slices"

	"strandwise/channels"
	"strandwise/channels/chart"
	"strandwise/channels/group"
)

// A wristband that tips by 0.4 rad and back: with its rate halved, gravity
// swings half as far.
func Example() {
	layout := &channels.Layout{}
	for _, header := range []string{"wrist.accel.x", "wrist.accel.y", "wrist.accel.z", "wrist.gyro.x", "wrist.gyro.y", "wrist.gyro.z"} {
		c, _ := channels.ParseHeader(header)
		layout.Channels = append(layout.Channels, c)
	}
	layout, err := layout.WithGroups(group.FromNames(layout.Channels))
	if err != nil {
		fmt.Println(err)
		return
	}
	take := &channels.Take{ID: "tip", Layout: layout}
	for f := range 101 {
		x := 2 * math.Pi * float64(f) / 100
		angle := 0.2 * (1 - math.Cos(x)) // about x, in 2 s
		take.Time = append(take.Time, 0.02*float64(f))
		take.Data = append(take.Data,
			0, channels.StandardGravity*math.Sin(angle), channels.StandardGravity*math.Cos(angle),
			0.2*math.Pi*math.Sin(x), 0, 0)
	}

	c, err := chart.New(layout, take.Skeleton, chart.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	p := c.Plot(take)
	values := slices.Clone(p.Values)
	for _, part := range p.Parts() {
		fmt.Printf("%s: %s\n", part.Name, part.Kind)
		if part.Kind == chart.Rate {
			for f := range take.Time {
				for _, k := range part.Coordinates {
					values[f*c.Width()+k] *= 0.5
				}
			}
		}
	}
	data := c.Take(p, take.Time, values)
	swing := func(row []float64) float64 { return math.Atan2(row[1], row[2]) }
	fmt.Printf("swings by %.2f rad, %.2f rad before\n", swing(data[50*6:]), swing(take.Frame(50)))
	// Output:
	// wrist.accel linear: linear
	// wrist.gyro: rate
	// wrist.gyro of gravity: rate
	// wrist.accel gravity: fixed
	// swings by 0.20 rad, 0.40 rad before
}
