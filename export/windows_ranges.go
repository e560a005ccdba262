package export

import (
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"

	"strandwise/channels"
)

// ParseSpan reads a length in frames ("50") or in seconds ("0.5s") and returns
// one of the two, the other being 0.
func ParseSpan(text string) (frames int, seconds float64, err error) {
	wrong := fmt.Errorf("%q is no length of a window; legal are frames, such as 50, and seconds, such as 0.5s", text)
	if number, ok := strings.CutSuffix(strings.TrimSpace(text), "s"); ok {
		seconds, err = strconv.ParseFloat(strings.TrimSpace(number), 64)
		if err != nil || !(seconds > 0) || math.IsInf(seconds, 0) {
			return 0, 0, wrong
		}
		return 0, seconds, nil
	}
	frames, err = strconv.Atoi(strings.TrimSpace(text))
	if err != nil || frames < 1 {
		return 0, 0, wrong
	}
	return frames, 0, nil
}

// Ranges finds out of recorded takes what the table windows needs to know
// beforehand: their frame rates, and how large the values of each channel are.
// The zero value knows of none. Takes must share their channels and groups.
type Ranges struct {
	takes    int       // that have a rate
	sum      float64   // of their rates
	low, top float64   // the lowest and the highest of them
	largest  []float64 // absolute value per channel
}

// Note takes up a take.
func (r *Ranges) Note(t *channels.Take) {
	if r.largest == nil {
		r.largest = make([]float64, t.Width())
	}
	if hz := t.Rate(); hz > 0 {
		if r.takes == 0 {
			r.low = hz
		}
		r.low, r.top = min(r.low, hz), max(r.top, hz)
		r.sum += hz
		r.takes++
	}
	w := t.Width()
	for i, v := range t.Data {
		if c := i % w; math.Abs(v) > r.largest[c] {
			r.largest[c] = math.Abs(v)
		}
	}
}

// rateTolerance is how far frame rates may lie apart for a length in seconds to
// be one number of frames.
const rateTolerance = 0.05

// Frames returns the frames in a length as [ParseSpan] reads it: those it states,
// or its seconds at the mean of the rates noted. Rates that differ by more than a
// twentieth are an error, because all windows of a set have one length.
func (r *Ranges) Frames(text string) (int, error) {
	frames, seconds, err := ParseSpan(text)
	if err != nil || frames > 0 {
		return frames, err
	}
	if r.takes == 0 {
		return 0, errors.New("the takes state no frame rate, so a length in seconds is no number of frames; give frames")
	}
	if r.top > r.low*(1+rateTolerance) {
		return 0, fmt.Errorf("takes are recorded at %g to %g frames a second, and windows have one number of frames; bring them to one rate, or give the length in frames", r.low, r.top)
	}
	return max(1, int(math.Round(seconds*r.sum/float64(r.takes)))), nil
}

// headroom is how far synthetic takes may exceed the recorded ones before 16-bit
// numbers saturate.
const headroom = 1.25

// Scale returns the scales of [Windowing] for takes like those noted: one for all
// channels of a group, so that the directions of a sensor can be compared, which
// puts a value a quarter above the group's largest at 32767. Zero stays zero. A
// group that is always 0 has the scale 1/32767.
func (r *Ranges) Scale(l *channels.Layout) []float64 {
	out := make([]float64, len(l.Channels))
	full := func(members []int) {
		top := 0.0
		for _, c := range members {
			if c < len(r.largest) {
				top = max(top, r.largest[c])
			}
		}
		if top == 0 {
			top = 1 / headroom
		}
		for _, c := range members {
			out[c] = top * headroom / math.MaxInt16
		}
	}
	for _, g := range l.Groups {
		full(g.Channels)
	}
	for c := range out {
		if out[c] == 0 {
			full([]int{c})
		}
	}
	return out
}
