package signal

import "math"

// Duplicates notices a take that was met before, under whatever name: the same
// number of frames, and values that differ by no more than saving them with
// few decimals makes them differ. The zero value is ready for use. It keeps no
// samples, but 8 sums of 16 bits and a reference for each take: 60 to 110
// bytes in all, by how full its tables are.
//
// Each value, counted in last decimals, is added with a weight to one of the
// sums. Which sum and which weight are fixed pseudo-random functions of its
// place (after the count sketch of Charikar, Chen and Farach-Colton, "Finding
// frequent items in data streams", ICALP 2002, whose weights are ±1: with
// those, two equal changes may cancel; here they are of many sizes). A sum
// of n values is divided by √n, so that rounding changes each sum by 1/√12 of
// a last decimal in the root mean square. Two takes match when all sums agree to five times what
// rounding both makes of them. Sums are kept as quarters of a decimal modulo
// 2^16, like the wheels of a counter; sums of unlike takes then agree by
// chance once in three thousand, and all eight of them once in 10^28 pairs.
//
// A take whose values vary by less than thirty last decimals says too
// little for that: it matches only a take whose values are the same. Missing
// values count as 0. Takes cut out of one another, or put on another clock, do
// not match.
type Duplicates struct {
	// Decimal is how large the last decimal is that a copy keeps, for each
	// channel in its own unit; nil is 1e-4 for all. Where a file in g was read
	// as m/s², it is 9.80665e-4.
	Decimal []float64

	drawers  map[uint64]int32 // the sketch put in last, of those that may match each other
	sketches []sketch
}

const (
	sums     = 8
	decimal  = 1e-4
	quarters = 4                  // of a last decimal: the unit of the sums
	agree    = 9                  // quarters: 5·√(2/12) decimals, and one for making whole numbers of them
	drawer   = 16                 // quarters; at least agree, so that a match lies in the same drawer or the next
	tooFlat  = 30                 // last decimals
	least    = 0.5                // weights are ±, evenly from least
	most     = 1.4270509831248424 // to most, (√45 − 1)/4, which makes their mean square 1
	exactly  = 1e6                // parts of a last decimal that are told apart in a take as flat as that
)

// sketch is what is kept of a take.
type sketch struct {
	ref   uint64
	sums  [sums]uint16
	below int32 // the sketch under it in its drawer, -1 for none
}

// Add looks for a take like this one among those added before. If there is
// one, its ref is returned, which is the caller's name for it. If not, this one
// is added. All takes must have the same channels.
func (d *Duplicates) Add(ref uint64, data []float64, width int) (earlier uint64, found bool) {
	n := frames(data, width)
	if d.drawers == nil {
		d.drawers = map[uint64]int32{}
	}
	total, flat := d.add(data, width)
	s := sketch{ref: ref, below: -1}
	for i, v := range total {
		s.sums[i] = uint16(v)
	}
	place := int64(math.Floor(float64(total[0]) / drawer))
	for _, next := range []int64{place, place - 1, place + 1} {
		for i, ok := d.drawers[label(n, flat, next)]; ok && i >= 0; i = d.sketches[i].below {
			if d.sketches[i].matches(&s, flat) {
				return d.sketches[i].ref, true
			}
		}
	}
	key := label(n, flat, place)
	if i, ok := d.drawers[key]; ok {
		s.below = i
	}
	d.drawers[key] = int32(len(d.sketches))
	d.sketches = append(d.sketches, s)
	return 0, false
}

// matches compares all sums, on the wheel.
func (s *sketch) matches(other *sketch, flat bool) bool {
	for i := range s.sums {
		apart := int16(s.sums[i] - other.sums[i])
		if flat && apart != 0 || apart > agree || apart < -agree {
			return false
		}
	}
	return true
}

// add returns the sums of a take, and whether it is too flat for rounding to
// be told from a difference.
func (d *Duplicates) add(data []float64, width int) (total [sums]int64, flat bool) {
	per := make([]float64, width) // units to a channel's unit
	for c := range per {
		per[c] = 1 / decimal
		if d.Decimal != nil {
			per[c] = 1 / d.Decimal[c]
		}
	}
	unit := float64(quarters)
	if flat = spread(data, per) < tooFlat; flat {
		unit *= exactly
	}
	var sum, count [sums]float64
	for i, v := range data {
		if math.IsNaN(v) {
			continue
		}
		h := mixed(uint64(i))
		k := h % sums
		weight := least + (most-least)*float64(h>>11)/(1<<53)
		if h&sums != 0 { // the bit above those that choose the sum
			weight = -weight
		}
		sum[k] += weight * v * per[i%width]
		count[k]++
	}
	for k := range sum {
		v := math.Round(unit * sum[k] / math.Sqrt(max(count[k], 1)))
		total[k] = int64(min(max(v, -1<<60), 1<<60)) // infinite values are no reason to fail here
	}
	return total, flat
}

// spread is the standard deviation of values about the mean of their channel,
// over all of them.
func spread(data, per []float64) float64 {
	w := len(per)
	mean, n := make([]float64, w), make([]float64, w)
	for i, v := range data {
		if !math.IsNaN(v) {
			mean[i%w] += v * per[i%w]
			n[i%w]++
		}
	}
	square, all := 0.0, 0.0
	for c := range mean {
		mean[c] /= max(n[c], 1)
		all += n[c]
	}
	for i, v := range data {
		if e := v*per[i%w] - mean[i%w]; !math.IsNaN(e) {
			square += e * e
		}
	}
	return math.Sqrt(square / max(all, 1))
}

// label names a drawer. That two drawers share a name is as unlikely as it is
// harmless.
func label(frames int, flat bool, place int64) uint64 {
	h := mixed(uint64(frames))
	if flat {
		h++
	}
	return mixed(h ^ uint64(place))
}

// mixed is the output function of SplitMix64 (Steele, Lea and Flood, "Fast
// splittable pseudorandom number generators", OOPSLA 2014).
func mixed(x uint64) uint64 {
	x += 0x9e3779b97f4a7c15
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}
