package bvh_test

import (
	"fmt"
	"os"
	"strings"

	"strandwise/ingest/bvh"
	"strandwise/ingest/raw"
)

const lamp = `HIERARCHY
ROOT Stand
{
	OFFSET 0 0 0
	CHANNELS 4 Xposition Yposition Zposition Yrotation
	JOINT Arm
	{
		OFFSET 0 100 0
		CHANNELS 1 Zrotation
		End Site
		{
			OFFSET 50 0 0
		}
	}
}
MOTION
Frames: 2
Frame Time: 0.02
0 0 0 0 0
10 0 0 0 90
`

func ExampleFormat() {
	in := raw.Input{Name: "lamp.bvh", Notice: func(text, evidence string) { fmt.Printf("%s: %s\n", text, evidence) }}
	for take, err := range (bvh.Format{}).Read(strings.NewReader(lamp), in) {
		if err != nil {
			fmt.Println(err)
			return
		}
		width := len(take.Layout.Columns)
		for i, c := range take.Layout.Columns {
			if c.Channel.TrackedPoint == "Arm_end" {
				fmt.Printf("%s %.2f %s, then %.2f %s\n", c.Channel.Name, take.Data[i], c.Unit, take.Data[width+i], c.Unit)
			}
		}
	}
	// Output:
	// states no unit of length and is read as cm: its skeleton then spans 1.50 m along the bones, as a person's does
	// Arm_end.pos.x 0.50 m, then 0.10 m
	// Arm_end.pos.y 1.00 m, then 1.50 m
	// Arm_end.pos.z 0.00 m, then 0.00 m
}

func ExampleWrite() {
	m, err := bvh.Format{LengthUnit: "cm"}.Decode(strings.NewReader(lamp), raw.Input{Name: "lamp.bvh"})
	if err != nil {
		fmt.Println(err)
		return
	}
	m.Skeleton.Unit = "m"
	if err := bvh.Write(os.Stdout, m); err != nil {
		fmt.Println(err)
	}
	// Output:
	// HIERARCHY
	// ROOT Stand
	// {
	// 	OFFSET 0 0 0
	// 	CHANNELS 4 Xposition Yposition Zposition Yrotation
	// 	JOINT Arm
	// 	{
	// 		OFFSET 0 1 0
	// 		CHANNELS 1 Zrotation
	// 		End Site
	// 		{
	// 			OFFSET 0.5 0 0
	// 		}
	// 	}
	// }
	// MOTION
	// Frames: 2
	// Frame Time: 0.02
	// 0 0 0 0 0
	// 0.1 0 0 0 90
}
