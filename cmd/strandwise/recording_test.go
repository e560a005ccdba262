package main

import (
	"fmt"
	"math"
	"strings"
)

// longCSV is an invented recording of several takes in one file: two labels,
// three people, the given number of takes of each.
func longCSV(each int) string {
	var b strings.Builder
	b.WriteString("take,label,subject,split,frame,left.accel.x,left.accel.y,right.accel.x\n")
	n := 0
	for _, person := range []string{"ember", "pim", "wick"} {
		split := "train"
		if person == "wick" {
			split = "test"
		}
		for _, label := range []string{"bow", "wave"} {
			for range each {
				for i := range 30 {
					u := float64(i)/29 + 0.02*float64(n%5)
					f := map[string]float64{"bow": 1, "wave": 2.5}[label]
					fmt.Fprintf(&b, "t%02d,%s,%s,%s,%d,%.4f,%.4f,%.4f\n", n, label, person, split, i,
						math.Sin(2*math.Pi*f*u), math.Cos(math.Pi*f*u), math.Sin(math.Pi*f*u*u))
				}
				n++
			}
		}
	}
	return b.String()
}
