package puppets

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/spatial/r3"
)

// How takes of one person differ. Factors are log-normal with these standard
// deviations of their logarithm.
const (
	delaySpan       = 0.30 // seconds; the delay before the first stroke is uniform from 0 to this
	tempoSpread     = 0.05 // all stroke times and rests of a hand
	strokeSpread    = 0.06 // one stroke's time
	restSpread      = 0.20 // one rest
	amplitudeSpread = 0.06 // all strokes of a hand
	postureSpread   = 2.5 * degree
	marginSpread    = 0.02 // seconds; the rest before and after is longer by 0 to this
)

// timing is when a hand strokes.
type timing struct {
	delay          float64   // seconds before the first stroke
	strokes, rests []float64 // seconds, one per beat
}

// drawTiming draws when the person strokes the beats of one hand.
func (p person) drawTiming(rng *rand.Rand, beats []beat, vigour float64) timing {
	t := timing{delay: delaySpan * rng.Float64()}
	tempo := factor(rng, tempoSpread)
	for _, b := range beats {
		t.strokes = append(t.strokes, b.time*p.pace/vigour*tempo*factor(rng, strokeSpread))
		t.rests = append(t.rests, b.rest*p.pause*tempo*factor(rng, restSpread))
	}
	return t
}

// factor draws a log-normal factor.
func factor(rng *rand.Rand, spread float64) float64 { return math.Exp(spread * rng.NormFloat64()) }

// move draws the postures of one hand's beats and lays them on the timing,
// the first from begin seconds.
func (p person) move(rng *rand.Rand, hand int, beats []beat, t timing, begin, vigour float64) motion {
	reach := p.amplitude * vigour * factor(rng, amplitudeSpread)
	if hand != p.favoured {
		reach *= 1 - p.emphasis
		begin += p.lead
	}
	at := p.posture(rng, home, reach)
	m := motion{home: at}
	clock := begin + t.delay
	for i, b := range beats {
		to := p.posture(rng, b.to, reach)
		k := stroke{start: clock, duration: t.strokes[i]}
		for j := range k.turn {
			k.turn[j] = to[j] - at[j]
		}
		m.strokes = append(m.strokes, k)
		clock += t.strokes[i] + t.rests[i]
		at = to
	}
	return m
}

// posture draws the person's posture at a place: the nominal home posture,
// the reach times the way to the place, the person's habits, and this take's
// deviation.
func (p person) posture(rng *rand.Rand, at place, reach float64) posture {
	nominal := places[home]
	out := scatter(rng, postureSpread)
	for j := range out {
		out[j] += p.home[j] + degree*(nominal[j]+reach*(places[at][j]-nominal[j]))
		if at != home {
			out[j] += p.style[at][j]
		}
	}
	return out
}

// performance is one cue as performed: what the sensors are moved by.
type performance struct {
	arms        [hands]arm
	motions     [hands]motion
	pitch, roll sway
	duration    float64 // seconds, rests before and after included
}

// perform draws one performance. The vigour, 1 as a rule, multiplies the
// amplitude and divides the stroke times.
func (p person) perform(rng *rand.Rand, c cue, seat [hands]r3.Rotation, vigour float64) performance {
	out := performance{pitch: drawSway(rng, 1.0*degree), roll: drawSway(rng, 0.7*degree)}
	before := p.margin + marginSpread*rng.Float64()
	t := p.drawTiming(rng, c.beats[leftHand], vigour)
	for hand, beats := range c.beats {
		if hand == rightHand && !c.together {
			t = p.drawTiming(rng, beats, vigour)
		}
		out.arms[hand] = p.arm(hand, seat[hand])
		out.motions[hand] = p.move(rng, hand, beats, t, before, vigour)
		out.duration = max(out.duration, out.motions[hand].end())
	}
	out.duration += p.margin + marginSpread*rng.Float64()
	return out
}

// band returns the band of one hand as a link at time t in seconds.
func (p performance) band(hand int, t float64) link {
	trunk := still().hinged(left, p.pitch.at(t)).hinged(front, p.roll.at(t))
	return p.arms[hand].band(trunk, p.motions[hand].at(t))
}
