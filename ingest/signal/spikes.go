package signal

import (
	"math"
	"slices"
)

// Spikes finds the channels with single wild values. Such a value is
//
//   - an outlier of the Hampel identifier over the seven frames around it: it
//     is further from their median than 3 · 1.4826 times the median distance
//     from it (Davies and Gather, "The identification of multiple outliers",
//     JASA 88 (1993) 782; Pearson, "Outliers in process modeling and
//     identification", IEEE Trans. Control Systems Technology 10 (2002) 55);
//   - wild: the steps into it and out of it, opposite ways, are both at least
//     ten times the mean step of the channel in this take;
//   - alone: no other step among the seven frames, nor the one past it from
//     the frame before to the frame after, is above 15 % of those. A knock
//     that a sensor really felt rings on, and a fast movement has a way up and
//     a way down.
//
// The last two are common practice. Values are never changed. The finding
// names the first of them; Longest is 1.
func Spikes(data []float64, width int) []Finding {
	var out []Finding
	series := make([]float64, frames(data, width))
	for c := range width {
		for i := range series {
			series[i] = data[i*width+c]
		}
		if f := spikes(series); f.Count > 0 {
			f.Channel = c
			out = append(out, f)
		}
	}
	return out
}

const (
	hampelHalf   = 3      // frames on each side
	hampelFactor = 3      // scale estimates
	madScale     = 1.4826 // makes the median distance estimate the standard deviation of a normal distribution
	wild         = 10     // mean steps
	around       = 0.15   // of the step into a spike
)

func spikes(series []float64) Finding {
	f := Finding{Longest: 1}
	least := wild * meanStep(series)
	for i := 1; i+1 < len(series); i++ {
		in, out := series[i]-series[i-1], series[i]-series[i+1]
		height := min(math.Abs(in), math.Abs(out))
		if !(in*out > 0 && height >= least) || !alone(series, i, around*height) || !outlier(series, i) {
			continue
		}
		if f.Count == 0 {
			f.First, f.Value = i, series[i]
		}
		f.Count++
	}
	return f
}

// alone tells whether all is quiet around value i, and goes on after it where
// it was before.
func alone(series []float64, i int, quiet float64) bool {
	if !(math.Abs(series[i+1]-series[i-1]) <= quiet) {
		return false
	}
	for k := max(1, i-hampelHalf+1); k < min(len(series), i+hampelHalf+1); k++ {
		if k != i && k != i+1 && math.Abs(series[k]-series[k-1]) > quiet {
			return false
		}
	}
	return true
}

// meanStep is the mean size of the steps between values that are present.
func meanStep(series []float64) float64 {
	sum, n := 0.0, 0.0
	for i := 1; i < len(series); i++ {
		if d := math.Abs(series[i] - series[i-1]); !math.IsNaN(d) {
			sum, n = sum+d, n+1
		}
	}
	return sum / max(n, 1)
}

// outlier is the Hampel identifier for one value.
func outlier(series []float64, i int) bool {
	var room [2*hampelHalf + 1]float64
	near := room[:0]
	for _, v := range series[max(0, i-hampelHalf):min(len(series), i+hampelHalf+1)] {
		if !math.IsNaN(v) {
			near = append(near, v)
		}
	}
	slices.Sort(near)
	middle := near[len(near)/2]
	for k, v := range near {
		near[k] = math.Abs(v - middle)
	}
	slices.Sort(near)
	return math.Abs(series[i]-middle) > hampelFactor*madScale*near[len(near)/2]
}
