package puppets

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
	"gonum.org/v1/gonum/stat"

	"strandwise/channels"
)

// At rest the readings scatter about gravity by the white noise of an inertial
// sensor, σ = noise density × √bandwidth (common practice): 300 µg/√Hz over
// 25 Hz is 1.5 mg.
func TestReadingsScatterByNoiseDensity(t *testing.T) {
	const n = 20000
	rng := rand.New(rand.NewPCG(1, 1))
	truth := r3.Scale(channels.StandardGravity, r3.Unit(r3.Vec{X: 1, Y: -2, Z: 3}))
	norms, zs := make([]float64, n), make([]float64, n)
	for i := range norms {
		v := accelerometer.read(rng, truth, r3.Vec{})
		norms[i], zs[i] = r3.Norm(v), v.Z-truth.Z
	}
	sigma := 0.0015 * channels.StandardGravity
	mean, sd := stat.MeanStdDev(norms, nil)
	if math.Abs(mean-channels.StandardGravity) > 5*sigma/math.Sqrt(n) {
		t.Errorf("mean magnitude at rest is %.6f m/s², want 9.80665", mean)
	}
	if math.Abs(sd/sigma-1) > 0.03 {
		t.Errorf("magnitude scatters by %g m/s², want %g", sd, sigma)
	}
	if sd := stat.StdDev(zs, nil); math.Abs(sd/sigma-1) > 0.03 {
		t.Errorf("an axis scatters by %g m/s², want %g", sd, sigma)
	}
}

func TestQuantise(t *testing.T) {
	step := 1000.0 / 32768 * math.Pi / 180
	for _, c := range []struct{ in, counts float64 }{
		{0, 0}, {0.49 * step, 0}, {0.51 * step, 1}, {-1.6 * step, -2}, {1e9, 32767}, {-1e9, -32768}, {gyroscope.fullScale, 32767},
	} {
		if got := gyroscope.quantise(c.in); math.Abs(got-c.counts*step) > 1e-12 {
			t.Errorf("quantise(%g) = %g steps, want %g", c.in, got/step, c.counts)
		}
	}
}

func TestDecimalsNeverGiveNegativeZero(t *testing.T) {
	for _, c := range []struct{ in, want float64 }{{-0.000004, 0}, {0.000004, 0}, {-0.000006, -0.00001}, {1.23456789, 1.23457}} {
		if got := decimals(c.in, dataSteps); got != c.want || math.Signbit(got) != math.Signbit(c.want) {
			t.Errorf("decimals(%g) = %g, want %g", c.in, got, c.want)
		}
	}
}
