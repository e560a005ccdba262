package variation

import (
	"context"
	"math"
)

// calibration tells how the numbers of pairs answer to the sizes of the model,
// in one scope: a column is floor + slope·size².
type calibration struct {
	floor, slope []float64 // slope is NaN where the column does not show its size
	at           sizes     // the sizes about which this holds
}

// modelled lists the parts of the model whose sizes are found by changing them.
var modelled = [...]Part{Timing, Trim, Orientation, Amplitude, Gain, Offset, Shape}

// shows is the least share of a column that must come from its own part.
const shows = 0.1

// rounds of moving the sizes until the model gives what the recordings gave.
const rounds = 5

// trial is what the model gives by some sizes.
type trial struct {
	sizes sizes
	sheet *sheet
}

// calibrate finds how columns answer to sizes near those of the recordings,
// for each scope, given the columns of all labels together.
func (e *engine) calibrate(ctx context.Context, all evidence, noise []float64) ([]calibration, error) {
	first := e.start(all.squares, noise)
	s := first
	n := e.perLabel()
	for range rounds {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		s = e.moved(e.answer(e.scopes()[0], e.trials(s, first, max(4, n/2))), all)
	}
	trials := e.trials(s, first, n)
	var out []calibration
	for i, sc := range e.scopes() {
		if i > 0 && n < fewest {
			out = append(out, out[0])
		} else {
			out = append(out, e.answer(sc, trials))
		}
	}
	return out, nil
}

// trials draws takes by the sizes, and by them with each part changed; the
// former come first.
func (e *engine) trials(s, first sizes, n int) []trial {
	out := []trial{{s, e.drawn(s, n, true)}}
	for _, p := range modelled {
		changed := s.apart(p, e.columns.list, first)
		out = append(out, trial{changed, e.drawn(changed, n, p == Timing)})
	}
	return out
}

// answer compares what was drawn by the sizes and with each part changed.
func (e *engine) answer(sc scope, trials []trial) calibration {
	n := len(e.columns.list)
	cal := calibration{floor: make([]float64, n), slope: make([]float64, n), at: trials[0].sizes}
	base := e.sum(trials[0].sheet, sc, nil)
	changed := make(map[Part][]float64)
	sizesOf := make(map[Part]sizes)
	for k, p := range modelled {
		changed[p], sizesOf[p] = e.sum(trials[k+1].sheet, sc, nil), trials[k+1].sizes
	}
	for i, c := range e.columns.list {
		p := c.source()
		if changed[p] == nil { // nothing else shows in it: pairs differ by twice the square
			cal.slope[i] = 2
			continue
		}
		other := sizesOf[p]
		x, y := cal.at.square(c), other.square(c)
		slope := (base[i] - changed[p][i]) / (x - y)
		cal.slope[i], cal.floor[i] = slope, max(0, base[i]-slope*x)
		if !(slope*max(x, y) > shows*max(base[i], changed[p][i])) {
			cal.slope[i] = math.NaN()
		}
	}
	return cal
}

// moved returns sizes halfway to those that give what the recordings gave.
func (e *engine) moved(cal calibration, all evidence) sizes {
	next := cal.at.clone()
	for i, c := range e.columns.list {
		at := next.at(c)
		if at == nil {
			continue
		}
		if size := cal.size(i, all.squares[i]); !math.IsNaN(size) {
			*at = math.Sqrt((square(*at) + square(min(size, c.most()))) / 2)
		}
	}
	if l, _, _ := e.timingLengths(e.columns.timing, cal).find(all, TimingLength.Default()); !math.IsNaN(l) {
		next.timingLength = l
	}
	if l, _, _ := e.shapeLengths(cal).find(all, ShapeLength.Default()); !math.IsNaN(l) {
		next.shapeLength = l
	}
	return next
}

// size returns the size behind the square of a column, NaN where it does not
// show.
func (cal calibration) size(column int, squared float64) float64 {
	return positive((squared-cal.floor[column])/cal.slope[column]) + 0*cal.slope[column]
}
