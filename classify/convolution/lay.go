package convolution

import (
	"fmt"
	"math"

	"strandwise/channels"
)

// lay reads a take at the common number of frames into the worker's rows and
// normalises it.
func (w *Worker) lay(t *channels.Take) error {
	if err := w.check(t); err != nil {
		if t.Where != "" {
			return fmt.Errorf("%s: %w", t.Where, err)
		}
		return err
	}
	n, m := w.options.Length, margin(w.options.Length)
	first, last := t.Time[0], t.Time[len(t.Time)-1]
	for k, i := 0, 0; k < n; k++ {
		at := first + (last-first)*float64(k)/float64(n-1)
		for i < len(t.Time)-2 && t.Time[i+1] < at {
			i++
		}
		u := min(1, (at-t.Time[i])/(t.Time[i+1]-t.Time[i]))
		a, b := t.Frame(i), t.Frame(i+1)
		for c, v := range a {
			w.rows[c][m+k] = v + u*(b[c]-v) // exact where a channel does not change
		}
	}
	if w.options.Normalise == ZScore {
		for _, row := range w.rows {
			zScore(row[m : m+n])
		}
	}
	return nil
}

// largest is the largest value described: products of features still add up
// to finite sums, and nothing measured comes near it.
const largest = 1e100

// check reports a take that cannot be described.
func (w *Worker) check(t *channels.Take) error {
	if t.Layout == nil {
		return fmt.Errorf("take %s has no layout", t.ID)
	}
	if got := t.Width(); got != w.width {
		return fmt.Errorf("take %s has %d channels where the kernels read %d; every take of a score needs the same channels", t.ID, got, w.width)
	}
	if err := t.Validate(); err != nil {
		return err
	}
	for i, v := range t.Data {
		if math.Abs(v) > largest {
			return fmt.Errorf("take %s: frame %d: channel %s is %g, too large to be compared; check the unit", t.ID, i/t.Width(), t.Layout.Channels[i%t.Width()].Name, v)
		}
	}
	return nil
}

// zScore normalises x in place to mean 0 and population standard deviation 1.
// Values that are all alike become zeros.
func zScore(x []float64) {
	// Against the first value, alike ones are exactly zero.
	origin, sum := x[0], 0.0
	for i := range x {
		x[i] -= origin
		sum += x[i]
	}
	mean, squares := sum/float64(len(x)), 0.0
	for i := range x {
		x[i] -= mean
		squares += x[i] * x[i]
	}
	if squares == 0 {
		return
	}
	scale := 1 / math.Sqrt(squares/float64(len(x)))
	for i := range x {
		x[i] *= scale
	}
}
