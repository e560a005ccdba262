package gate

import (
	"math"

	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/dsp/window"

	"strandwise/channels"
)

// segment is the number of frames of which a spectrum is taken; longer takes
// are read in segments that overlap by half.
const segment = 64

// spectrum measures shares of power. It holds scratch for one goroutine.
type spectrum struct {
	fft    *fourier.FFT
	frames []float64
	lines  []complex128
	taper  []float64 // of the length of the last segment
}

func newSpectrum() *spectrum {
	return &spectrum{
		fft: fourier.NewFFT(segment), frames: make([]float64, segment), lines: make([]complex128, segment/2+1),
	}
}

// bandCut is the frequency in Hz from which power counts as high, where the
// rate is at least bandRate: recorded movement of a limb has next to none above it.
const (
	bandCut  = 15.0
	bandRate = 40.0
)

// cut returns the first line of the spectrum that counts as high: 15 Hz where
// the rate leaves room above it, else half of the band.
func cut(rate float64) int {
	if rate >= bandRate {
		return int(math.Ceil(bandCut / rate * segment))
	}
	return segment / 4
}

// upper returns the share of power that lies in the upper half of the band, the
// mean over groups, by averaged periodograms of tapered segments, their means
// removed: P. D. Welch, "The use of fast Fourier transform for the estimation of
// power spectra", IEEE Transactions on Audio and Electroacoustics 15 (1967)
// 70–73. A group without power has a share of 0.
func (s *spectrum) upper(t *channels.Take) float64 {
	from, sum := cut(t.Rate()), 0.0
	for _, g := range t.Layout.Groups {
		high, all := 0.0, 0.0
		for _, c := range g.Channels {
			h, a := s.power(t, c, from)
			high, all = high+h, all+a
		}
		if all > 0 {
			sum += high / all
		}
	}
	return sum / float64(len(t.Layout.Groups))
}

// power returns the power of a channel from a line of the spectrum on, and of
// the whole.
func (s *spectrum) power(t *channels.Take, c, from int) (high, all float64) {
	frames, w := t.Frames(), t.Width()
	length := min(frames, segment)
	for begin := 0; begin == 0 || begin+length <= frames; begin += max(1, segment/2) {
		for i := range length {
			s.frames[i] = t.Data[(begin+i)*w+c]
		}
		h, a := s.segment(length, from)
		high, all = high+h, all+a
	}
	return high, all
}

// segment returns the power of the frames held.
func (s *spectrum) segment(length, from int) (high, all float64) {
	x := s.frames[:length]
	mean := 0.0
	for _, v := range x {
		mean += v
	}
	mean /= float64(length)
	for i, h := range s.hann(length) {
		x[i] = (x[i] - mean) * h
	}
	clear(s.frames[length:])
	for k, line := range s.fft.Coefficients(s.lines, s.frames)[1:] {
		p := real(line)*real(line) + imag(line)*imag(line)
		all += p
		if k+1 >= from {
			high += p
		}
	}
	return high, all
}

// hann returns the taper of a length.
func (s *spectrum) hann(length int) []float64 {
	if len(s.taper) != length {
		s.taper = make([]float64, length)
		for i := range s.taper {
			s.taper[i] = 1
		}
		window.Hann(s.taper)
	}
	return s.taper
}
