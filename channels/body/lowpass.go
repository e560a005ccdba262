package body

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// LowPass returns series smoothed by a zero-phase low-pass filter: frames ×
// width values, frame-major, at times in seconds that rise strictly, which need
// not be even. corner is the frequency in Hz at which half the amplitude
// passes. Values must be finite.
//
// The smoothed series z of x is the one for which
//
//	Σ h(i) (z(i) - x(i))² + (2π·corner)⁻⁴ ∫ z″(t)² dt
//
// is least, h(i) being the time around a frame (Whittaker, Proceedings of the
// Edinburgh Mathematical Society 41 (1923) 63). Its gain is 1/(1 + (f/corner)⁴),
// that of a Butterworth filter of second order run forwards and backwards,
// fourth order in all (Gómez, Journal of Business & Economic Statistics 19
// (2001) 365). Solved as a whole it has no start to settle from: a straight line
// passes unchanged, and a take that is short against the corner becomes its
// line of best fit. Steps of less than 1e-4/corner seconds count as that long,
// for what is computed to stay exact to ten digits or so.
func LowPass(time, values []float64, width int, corner float64) []float64 {
	n := len(time)
	if width < 1 || len(values) != n*width {
		panic("body: values and times differ in number")
	}
	if n < 3 {
		return append([]float64(nil), values...)
	}
	step := steps(time, 1e-4/corner)
	system, right := mat.NewSymBandDense(n, 2, nil), mat.NewDense(n, width, nil)
	for i := range n {
		w := (step[i] + step[i+1]) / 2
		system.SetSymBand(i, i, w)
		for c := range width {
			right.Set(i, c, w*values[i*width+c])
		}
	}
	stiffen(system, step, math.Pow(2*math.Pi*corner, -4))
	var solver mat.BandCholesky
	out := mat.NewDense(n, width, nil)
	if !solver.Factorize(system) {
		panic("body: times do not rise")
	}
	// What it may report is a bad condition, of a corner far below one turn in
	// the whole take: the line of best fit is what such a filter gives.
	_ = solver.SolveTo(out, right)
	return out.RawMatrix().Data
}

// steps returns the time from the frame before to each frame, at least so long,
// with 0 before the first frame and after the last.
func steps(time []float64, least float64) []float64 {
	out := make([]float64, len(time)+1)
	for i := 1; i < len(time); i++ {
		out[i] = max(time[i]-time[i-1], least)
	}
	return out
}

// stiffen adds λ ∫ z″² to a system of equations, with z″ the second divided
// difference at every frame but the first and last.
func stiffen(system *mat.SymBandDense, step []float64, lambda float64) {
	for i := 1; i < len(step)-2; i++ {
		a, b := step[i], step[i+1]
		span := (a + b) / 2
		d := [3]float64{1 / (a * span), -1/(a*span) - 1/(b*span), 1 / (b * span)}
		for r := range d {
			for c := r; c < 3; c++ {
				k, l := i-1+r, i-1+c
				system.SetSymBand(k, l, system.At(k, l)+lambda*span*d[r]*d[c])
			}
		}
	}
}
