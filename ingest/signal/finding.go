package signal

import "math"

// Finding is a fault of one channel in one take.
type Finding struct {
	Channel int
	First   int     // frame it is first seen in
	Count   int     // frames concerned
	Longest int     // the most of them in a row
	Value   float64 // where the detector names one, in the unit of the channel
}

// frames returns how many frames the data hold. Data that do not fit are a
// mistake of the caller.
func frames(data []float64, width int) int {
	if width < 1 || len(data)%width != 0 {
		panic("signal: data do not fit the width")
	}
	return len(data) / width
}

// Missing finds the channels that lack values, in order.
func Missing(data []float64, width int) []Finding {
	var out []Finding
	n := frames(data, width)
	for c := range width {
		f := Finding{Channel: c, Value: math.NaN()}
		run := 0
		for i := range n {
			if !math.IsNaN(data[i*width+c]) {
				run = 0
				continue
			}
			if f.Count == 0 {
				f.First = i
			}
			f.Count++
			run++
			f.Longest = max(f.Longest, run)
		}
		if f.Count > 0 {
			out = append(out, f)
		}
	}
	return out
}
