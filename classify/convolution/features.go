package convolution

import (
	"math/rand/v2"

	"strandwise/channels"
)

// Kernels is a set of random kernels. It is read-only and may be shared by
// goroutines.
type Kernels struct {
	options Options
	width   int // channels
	kernels []kernel
}

// New draws kernels for takes of the given number of channels, at least 1. The
// first n of a larger set are those of a set of n.
func New(o Options, width int, g *rand.Rand) (*Kernels, error) {
	if width < 1 {
		panic("convolution: takes have at least one channel")
	}
	if err := o.Validate(); err != nil {
		return nil, err
	}
	o = o.withDefaults()
	k := &Kernels{options: o, width: width, kernels: make([]kernel, o.Kernels)}
	for i := range k.kernels {
		k.kernels[i] = draw(g, o.Length, width)
	}
	return k, nil
}

// Width returns the number of features of a take, two per kernel.
func (k *Kernels) Width() int { return 2 * len(k.kernels) }

// Worker computes features. It holds the scratch of one goroutine.
type Worker struct {
	*Kernels
	rows     [][]float64 // per channel the frames, between two margins of zeros
	response []float64
}

// Worker returns a new worker for the kernels.
func (k *Kernels) Worker() *Worker {
	n, m := k.options.Length, margin(k.options.Length)
	w := &Worker{Kernels: k, rows: make([][]float64, k.width), response: make([]float64, n)}
	for c := range w.rows {
		w.rows[c] = make([]float64, m+n+m)
	}
	return w
}

// Features computes the features of t into dst and returns it: of each kernel
// the largest response and the share of responses above zero. They depend on
// the take and the kernels alone, so what was computed once serves every
// split. A nil dst is allocated; one of another length than Width panics. The
// error names the take that cannot be described.
func (w *Worker) Features(dst []float64, t *channels.Take) ([]float64, error) {
	if dst == nil {
		dst = make([]float64, w.Width())
	}
	if len(dst) != w.Width() {
		panic("convolution: destination length mismatch")
	}
	if err := w.lay(t); err != nil {
		return nil, err
	}
	for i := range w.kernels {
		dst[2*i], dst[2*i+1] = w.apply(&w.kernels[i])
	}
	return dst, nil
}

// apply returns the features of one kernel for the take laid.
func (w *Worker) apply(k *kernel) (largest, positive float64) {
	z := w.response[:k.outputs]
	for i := range z {
		z[i] = k.bias
	}
	for n, c := range k.channels {
		x, weights := w.rows[c][k.start:], k.weights[n*k.taps:]
		switch k.taps {
		case 7:
			add7(z, x, k.dilation, (*[7]float64)(weights))
		case 9:
			add9(z, x, k.dilation, (*[9]float64)(weights))
		default:
			add11(z, x, k.dilation, (*[11]float64)(weights))
		}
	}
	return summarise(z)
}
