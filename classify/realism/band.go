package realism

import (
	"math"

	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/dsp/window"

	"strandwise/channels"
)

// Band compares the share of power in the upper half of the recorded band:
// from 15 Hz on where takes have 40 frames a second or more.
type Band struct {
	Recorded  float64 `json:"recorded"`  // mean share of the recorded takes
	Synthetic float64 `json:"synthetic"` // mean share of the synthetic ones
	Change
	Growth float64 `json:"growth"` // of the mean, as a share of the recorded: 0.1 is a tenth more
}

const (
	bandCut  = 15.0 // Hz
	bandRate = 40.0 // Hz, from which on there is room above the cut
)

// upper returns the share of a take's power in the upper half of the band, the
// mean over groups, from the periodogram of the whole take, its mean removed
// and its ends tapered by Hann's window. A group without power counts as 0.
func upper(t *channels.Take) float64 {
	n := t.Frames()
	fft, taper := fourier.NewFFT(n), make([]float64, n)
	for i := range taper {
		taper[i] = 1
	}
	window.Hann(taper)
	from := 0.25
	if r := t.Rate(); r >= bandRate {
		from = bandCut / r
	}
	sum := 0.0
	for _, g := range t.Layout.Groups {
		high, all := 0.0, 0.0
		for _, c := range g.Channels {
			x := series(t, c)
			m := mean(x)
			for i := range x {
				x[i] = (x[i] - m) * taper[i]
			}
			for k, line := range fft.Coefficients(nil, x)[1:] {
				p := math.Pow(real(line), 2) + math.Pow(imag(line), 2)
				all += p
				if fft.Freq(k+1) >= from {
					high += p
				}
			}
		}
		if all > 0 {
			sum += high / all
		}
	}
	return sum / float64(len(t.Layout.Groups))
}
