package augment

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/dsp/fourier"

	"strandwise/augment/variation"
	"strandwise/channels"
)

// noise is the trembling of sensors at rest, as measured: how large it is in
// each channel, and how it spreads over frequency.
type noise struct {
	list []channelNoise
	rate float64 // frames per second of the take it is added to
}

type channelNoise struct {
	channel   int
	deviation float64 // in the channel's unit
	spectrum  variation.Spectrum
}

// noise returns the noise that is added to what is made of a take. Rotations
// and the joints of skeletons get none: their parts would no longer fit
// together.
func (m *Maker) noise(t *channels.Take) noise {
	out := noise{rate: t.Rate()}
	factor := m.variation.Reach * m.variation.Sizes[variation.Noise]
	if factor == 0 || m.training.Measured == nil || t.Skeleton != nil {
		return out
	}
	for _, spectrum := range m.training.Measured.Spectra {
		c := t.Layout.Index(spectrum.Channel)
		if c < 0 || t.Layout.Channels[c].Quantity == channels.Orientation {
			continue
		}
		f, _ := m.training.Measured.Find(variation.Noise, "", spectrum.Channel)
		out.list = append(out.list, channelNoise{c, factor * f.Used, spectrum})
	}
	return out
}

// add adds fresh noise to data, frames × w channels.
func (o noise) add(data []float64, w int, rng *rand.Rand) {
	n := len(data) / w
	for _, c := range o.list {
		for i, x := range c.draw(n, o.rate, rng) {
			data[i*w+c.channel] += c.deviation * x
		}
	}
}

// draw returns n values of variance 1 in expectation whose power is spread as
// the spectrum says, over those of its bands that a clock of this rate can
// hold: random phases and normal amplitudes at every frequency (Shinozuka and
// Deodatis, Applied Mechanics Reviews 44 (1991) 191).
func (c channelNoise) draw(n int, rate float64, rng *rand.Rand) []float64 {
	fft := fourier.NewFFT(n)
	coefficients := make([]complex128, n/2+1)
	power := 0.0
	bands := float64(len(c.spectrum.Shares))
	for k := 1; k < len(coefficients); k++ {
		band := int(bands * float64(k) / float64(n) * rate / (c.spectrum.Rate / 2))
		if band >= len(c.spectrum.Shares) {
			continue
		}
		share := c.spectrum.Shares[band]
		size := math.Sqrt(share)
		coefficients[k] = complex(size*rng.NormFloat64(), size*rng.NormFloat64())
		power += 4 * share // of both parts, at this frequency and its mirror image
		if 2*k == n {
			coefficients[k] = complex(math.Sqrt2*real(coefficients[k]), 0)
			power -= 2 * share
		}
	}
	out := fft.Sequence(nil, coefficients)
	if power > 0 {
		scale := 1 / math.Sqrt(power)
		for i := range out {
			out[i] *= scale
		}
	}
	return out
}
