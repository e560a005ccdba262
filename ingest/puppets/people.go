package puppets

import (
	"fmt"
	"hash/fnv"
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/spatial/r3"
)

// people lists the company, in alphabetical order: the favoured hand, and the
// rest left in a recording before and after a cue, in seconds.
var people = [...]struct {
	name     string
	favoured int
	margin   float64
}{
	{"bobbin", rightHand, 0.20},
	{"fidget", rightHand, 0.05},
	{"tassel", leftHand, 0.30},
	{"thimble", rightHand, 0.25},
}

// person holds the habits of one puppeteer, the same in every take.
type person struct {
	name     string
	favoured int // the hand that leads and reaches further
	margin   float64

	size      float64 // factor on all lengths
	forearm   float64 // further factor on the forearm
	pace      float64 // factor on stroke times
	pause     float64 // factor on rests
	amplitude float64 // factor on strokes
	emphasis  float64 // part of the amplitude that the other hand lacks
	lead      float64 // seconds by which the favoured hand is ahead

	home  posture            // added to the home posture
	style [placesLen]posture // added to each other posture
	seat  [hands]r3.Vec      // how the bands sit, as rotation vectors in radians
}

// generator returns the generator for one purpose, keyed by seed and key.
func generator(seed uint64, key string) *rand.Rand {
	h := fnv.New64a()
	fmt.Fprint(h, key)
	return rand.New(rand.NewPCG(seed, h.Sum64()))
}

// company draws the habits of the puppeteers.
func company(seed uint64) []person {
	rng := generator(seed, "company")
	out := make([]person, len(people))
	for i, p := range people {
		out[i] = person{name: p.name, favoured: p.favoured, margin: p.margin}
	}
	for _, h := range []struct {
		set    func(p *person) *float64
		sd     float64
		centre float64
	}{
		{func(p *person) *float64 { return &p.size }, 0.07, 1},
		{func(p *person) *float64 { return &p.forearm }, 0.04, 1},
		{func(p *person) *float64 { return &p.pace }, 0.20, 1},
		{func(p *person) *float64 { return &p.pause }, 0.40, 1},
		{func(p *person) *float64 { return &p.amplitude }, 0.14, 1},
		{func(p *person) *float64 { return &p.emphasis }, 0.4, 0.15},
		{func(p *person) *float64 { return &p.lead }, 0.4, 0.025},
	} {
		for i, z := range spread(rng) {
			*h.set(&out[i]) = h.centre * math.Exp(h.sd*z)
		}
	}
	for i := range out {
		p := &out[i]
		p.home = scatter(rng, 7*degree)
		for k := range p.style {
			p.style[k] = scatter(rng, 12*degree)
		}
		for k := range p.seat {
			p.seat[k] = vector(rng, 13*degree)
		}
	}
	return out
}

// spread deals the mid-points of four equal parts of the normal distribution
// to the four people in random order, so that the company is never alike in
// any habit.
func spread(rng *rand.Rand) [len(people)]float64 {
	z := [len(people)]float64{-1.150, -0.319, 0.319, 1.150}
	rng.Shuffle(len(z), func(i, j int) { z[i], z[j] = z[j], z[i] })
	return z
}

const degree = math.Pi / 180 // radians

// scatter draws a normal deviation for each joint, in radians.
func scatter(rng *rand.Rand, sd float64) posture {
	var p posture
	for j := range p {
		p[j] = sd * rng.NormFloat64()
	}
	return p
}

// vector draws three independent normal components.
func vector(rng *rand.Rand, sd float64) r3.Vec {
	return r3.Vec{X: sd * rng.NormFloat64(), Y: sd * rng.NormFloat64(), Z: sd * rng.NormFloat64()}
}

// arm returns an arm of the person. The lengths for size 1 are those of a
// person of about 1.72 m: upper arm and forearm 0.186 and 0.146 of the height,
// half the shoulder width 0.129 of it (Winter, Biomechanics and Motor Control
// of Human Movement, after Drillis and Contini 1966; from memory); the shoulder
// sits 0.5 m above the trunk's pivot.
func (p person) arm(hand int, seat r3.Rotation) arm {
	side := 1.0
	if hand == rightHand {
		side = -1
	}
	return arm{
		side:          side,
		shoulder:      r3.Vec{Y: side * 0.22 * p.size, Z: 0.5 * p.size},
		upper:         0.32 * p.size,
		fore:          0.25 * p.size * p.forearm,
		bandToForearm: seat,
	}
}
