package augment

import (
	"cmp"
	"math/rand/v2"
	"slices"
)

// texture puts another stretch of an ongoing motion together from the take's
// own: it starts at some frame, plays on, and before the take ends jumps to a
// place that looks alike, until enough frames are out. Jumps are sought on a
// grid of 64 steps or so, so that takes of any length are searched alike.
type texture struct {
	width, frames int
	stride        int    // frames in a step
	jumps         []jump // the most alike first
	last          int    // the last step to start at
}

// jump leaves after the window that begins at step exit, and goes on after the
// one that begins at step entry.
type jump struct {
	exit, entry int
	distance    float64
}

// Sizes of a texture, in steps, found on takes of 64 frames: how much must look
// alike, how far a jump must lead at least, and which share of the jumps, the
// most alike, is drawn from.
const (
	textureSteps  = 64
	textureWindow = 4
	textureLeap   = 8
	textureShare  = 0.02
	textureFewest = 3
)

// newTexture finds where a take's scaled coordinates, frames × width, look
// alike. It returns nil for a take too short to jump in.
func newTexture(scaled []float64, width int) *texture {
	x := &texture{width: width, frames: len(scaled) / width}
	x.stride = max(1, (x.frames+textureSteps/2)/textureSteps)
	steps := x.frames / x.stride
	x.last = steps - 2*textureWindow - 1
	for i := steps / 2; i+textureWindow < steps; i++ {
		for j := 0; j < 3*steps/4-textureWindow; j++ {
			if i-j >= textureLeap || j-i >= textureLeap {
				x.jumps = append(x.jumps, jump{i, j, x.distance(scaled, i, j)})
			}
		}
	}
	if len(x.jumps) < textureFewest || x.last < 1 {
		return nil
	}
	slices.SortFunc(x.jumps, func(a, b jump) int {
		return cmp.Or(cmp.Compare(a.distance, b.distance), cmp.Compare(a.exit, b.exit), cmp.Compare(a.entry, b.entry))
	})
	return x
}

// distance returns the squared distance of the windows at two steps.
func (x *texture) distance(scaled []float64, i, j int) float64 {
	sum := 0.0
	for k := range textureWindow {
		a := scaled[(i+k)*x.stride*x.width:][:x.width]
		b := scaled[(j+k)*x.stride*x.width:][:x.width]
		for c, v := range a {
			sum += (v - b[c]) * (v - b[c])
		}
	}
	return sum
}

// draw returns a new stretch of values, as many frames as there are.
func (x *texture) draw(values []float64, rng *rand.Rand) []float64 {
	w := x.width
	out := make([]float64, 0, len(values))
	play := func(from, to int, step []float64) { // frames from up to before to, from a jump of this step
		fade := textureWindow * x.stride
		for i := from; i < to && len(out) < len(values); i++ {
			out = append(out, values[i*w:(i+1)*w]...)
			if r := i - from; r < fade && step != nil {
				for c, d := range step {
					out[len(out)-w+c] += d * (1 - (float64(r)+0.5)/float64(fade))
				}
			}
		}
	}
	var step []float64
	at := rng.IntN(x.last) * x.stride
	for len(out) < len(values) {
		j, ok := x.jump(at/x.stride+textureWindow, rng)
		if !ok {
			play(at, x.frames, step)
			at, step = 0, nil // only a start close to the end leads here
			continue
		}
		leave, enter := (j.exit+textureWindow)*x.stride, (j.entry+textureWindow)*x.stride
		play(at, leave, step)
		step = make([]float64, w)
		for c := range step {
			step[c] = values[(leave-1)*w+c] - values[(enter-1)*w+c]
		}
		at = enter
	}
	return out
}

// jump draws one of the most alike jumps whose exit is not before the step.
func (x *texture) jump(from int, rng *rand.Rand) (jump, bool) {
	var legal []int
	for k, j := range x.jumps {
		if j.exit >= from {
			legal = append(legal, k)
		}
	}
	if len(legal) == 0 {
		return jump{}, false
	}
	best := min(max(int(textureShare*float64(len(legal))), textureFewest), len(legal))
	return x.jumps[legal[rng.IntN(best)]], true
}
