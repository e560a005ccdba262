package method

import (
	"math"
	"math/rand/v2"
)

// gradients is the number of gradients a [Noise] repeats over, a power of two.
const gradients = 256

// maxDimensions bounds the space a [Noise] fills.
const maxDimensions = 3

// Noise is smooth gradient noise over a line, a plane or space (Perlin 1985):
// a random gradient at every whole-numbered point of a lattice, the value
// between them a blend of the planes through the corners' zeros. The blend is
// that of 2002, 6t⁵ − 15t⁴ + 10t³, whose first two slopes vanish at the lattice,
// so that the noise has no kinks. It is 0 at every lattice point, its mean is
// 0, and it is scaled to a root mean square of 1 over all places and draws.
// It repeats after 256 cells.
type Noise struct {
	dimensions int
	order      [gradients]int
	gradient   [gradients][maxDimensions]float64
}

// Mean squares of the blend (6t⁵ − 15t⁴ + 10t³ =: f) over a cell, by exact
// integration: of (1−f)t + … along an axis, 2∫(1−f)²t² dt, and of the weights
// across, 2∫(1−f)² dt.
const (
	alongAxis  = 535.0 / 9009
	acrossAxis = 181.0 / 231
)

// NewNoise draws a noise over 1, 2 or 3 dimensions.
func NewNoise(dimensions int, rng *rand.Rand) *Noise {
	if dimensions < 1 || dimensions > maxDimensions {
		panic("method: gradient noise fills one, two or three dimensions")
	}
	n := &Noise{dimensions: dimensions}
	for i, p := range rng.Perm(gradients) {
		n.order[i] = p
	}
	// Gradients are directions. Along each axis they have mean square
	// 1/dimensions; on a line, where there are but two directions, they have a
	// length as well, uniform and of mean square 1.
	rms := math.Sqrt(alongAxis * math.Pow(acrossAxis, float64(dimensions-1)))
	for i := range n.gradient {
		g := n.gradient[i][:dimensions]
		for norm(g) == 0 {
			for d := range g {
				g[d] = rng.NormFloat64()
			}
		}
		length := norm(g) * rms
		if dimensions == 1 {
			length /= math.Sqrt(3) * rng.Float64()
		}
		for d := range g {
			g[d] /= length
		}
	}
	return n
}

// At returns the noise at a place, in cells of the lattice; the place has as
// many coordinates as the noise has dimensions, and they are finite.
func (n *Noise) At(place ...float64) float64 {
	if len(place) != n.dimensions {
		panic("method: a place has as many coordinates as its noise has dimensions")
	}
	var cell [maxDimensions]int
	var within, blend [maxDimensions]float64
	for d, x := range place {
		floor := math.Floor(x)
		cell[d] = int(math.Mod(floor, gradients))
		t := x - floor
		within[d], blend[d] = t, t*t*t*(t*(6*t-15)+10)
	}
	sum := 0.0
	for corner := range 1 << n.dimensions {
		sum += n.corner(corner, cell, within, blend)
	}
	return sum
}

// corner returns the share of one corner of a cell, whose bits say on which
// side it lies.
func (n *Noise) corner(corner int, cell [maxDimensions]int, within, blend [maxDimensions]float64) float64 {
	index, weight := 0, 1.0
	for d := range n.dimensions {
		side := corner >> d & 1
		index = n.order[(index+cell[d]+side)&(gradients-1)]
		if side == 1 {
			weight *= blend[d]
		} else {
			weight *= 1 - blend[d]
		}
	}
	rise := 0.0
	for d := range n.dimensions {
		rise += n.gradient[index][d] * (within[d] - float64(corner>>d&1))
	}
	return weight * rise
}
