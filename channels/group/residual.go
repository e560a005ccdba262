package group

import (
	"math/rand/v2"
	"slices"

	"strandwise/channels"
	"strandwise/channels/align"
)

// mostTakes bounds the takes of one label that are read.
const mostTakes = 40

// readings are the residuals of many takes: what of each unit is left when
// takes have been aligned to the medoid of their block.
type readings struct {
	units  []unit
	labels []string
	rows   []row
	people []bool // per label: blocks are of one person each
	blocks int    // number of blocks
	parts  []part
}

// row is one take.
type row struct {
	label int
	// block holds the takes among which this one could be exchanged if the
	// units were independent: those of one label, of one person where that is
	// known. Takes are aligned to the medoid of the block, and residuals taken
	// from their mean over it.
	block  int
	medoid bool // of its block
}

// part holds the residuals of one unit, rows × waves each. They are not yet
// taken from their means.
type part struct {
	timing []float64    // of the timing map, in parts of the label's median duration
	halves [2][]float64 // the same read from one half of the channels each; nil for a unit of one channel
	shape  []float64    // of the size of the movement, in parts of it
}

// read aligns the takes of every block to its medoid, unit by unit. Labels of
// fewer than two takes are left out, and so are takes beyond mostTakes of a
// label, chosen by the seed.
func read(takes []*channels.Take, units []unit, s *channels.Scales, seed uint64) *readings {
	r := &readings{units: units, parts: make([]part, len(units))}
	byLabel := make(map[string][]*channels.Take)
	for _, t := range takes {
		if t.Frames() > 1 {
			byLabel[t.Label] = append(byLabel[t.Label], t)
		}
	}
	for label := range byLabel {
		r.labels = append(r.labels, label)
	}
	slices.Sort(r.labels)
	r.labels = slices.DeleteFunc(r.labels, func(l string) bool { return len(byLabel[l]) < 2 })
	chosen := make([][]*channels.Take, len(r.labels))
	rng := generator(seed, forChoice)
	for k, label := range r.labels {
		chosen[k] = choose(byLabel[label], rng)
	}
	values := make([][][]float64, len(chosen))
	for k, list := range chosen {
		for _, t := range list {
			values[k] = append(values[k], onClock(t, s.Apply(t), clockFrames))
		}
	}
	if len(chosen) == 0 {
		return r
	}
	r.deal(values)
	for k, list := range chosen {
		r.add(k, list, values[k])
	}
	return r
}

// choose draws mostTakes of the takes, in their order.
func choose(list []*channels.Take, rng *rand.Rand) []*channels.Take {
	if len(list) <= mostTakes {
		return list
	}
	at := rng.Perm(len(list))[:mostTakes]
	slices.Sort(at)
	out := make([]*channels.Take, len(at))
	for i, k := range at {
		out[i] = list[k]
	}
	return out
}

// deal divides each unit's channels into halves, by their sizes over all takes.
func (r *readings) deal(values [][][]float64) {
	var size []float64
	for _, list := range values {
		for _, v := range list {
			w := len(v) / clockFrames
			if size == nil {
				size = make([]float64, w)
			}
			for c := range w {
				size[c] += squaresAboutMean(v, w, c)
			}
		}
	}
	r.units = slices.Clone(r.units)
	for i := range r.units {
		r.units[i].deal(size)
	}
}

func squaresAboutMean(v []float64, w, c int) float64 {
	mean, sum := 0.0, 0.0
	for i := c; i < len(v); i += w {
		mean += v[i]
	}
	mean *= float64(w) / float64(len(v))
	for i := c; i < len(v); i += w {
		sum += (v[i] - mean) * (v[i] - mean)
	}
	return sum
}

// add reads the takes of one label, block by block.
func (r *readings) add(label int, takes []*channels.Take, values [][]float64) {
	stretch := durations(takes)
	block, count, people := blocksOf(takes)
	r.people = append(r.people, people)
	for b := range count {
		var length []float64
		var list [][]float64
		for i := range takes {
			if block[i] == b {
				length, list = append(length, stretch[i]), append(list, values[i])
				r.rows = append(r.rows, row{label: label, block: r.blocks})
			}
		}
		first := len(r.rows) - len(list)
		r.rows[first+r.addBlock(length, list)].medoid = true
		r.blocks++
	}
}

// addBlock aligns the takes of a block to their medoid, unit by unit. It
// returns which take that is.
func (r *readings) addBlock(stretch []float64, values [][]float64) int {
	width := len(values[0]) / clockFrames
	middle := r.medoid(values, width)
	a := align.NewAligner(align.Default())
	for k, u := range r.units {
		p := &r.parts[k]
		whole := picked(values, width, u.channels)
		maps := make([][]float64, len(values))
		for i := range values {
			maps[i] = timingMap(a, whole, len(u.channels), middle, i)
		}
		reader := newWaveReader(whole[middle], len(u.channels), commonClock(maps, stretch))
		for i, at := range maps {
			p.timing = reader.append(p.timing, at, stretch[i], stretch[middle])
		}
		p.shape = appendShape(p.shape, whole, maps, len(u.channels))
		for h, list := range u.halves {
			if len(list) == 0 {
				continue
			}
			half := picked(values, width, list)
			for i := range values {
				at := timingMap(a, half, len(list), middle, i)
				p.halves[h] = reader.append(p.halves[h], at, stretch[i], stretch[middle])
			}
		}
	}
	return middle
}

// blocksOf numbers the blocks of the takes of one label from 0, and tells
// whether they are people. A person with several takes is a block; if that
// leaves out half of the takes or more, the label is one block.
func blocksOf(takes []*channels.Take) (block []int, count int, people bool) {
	of := make(map[string]int)
	for _, t := range takes {
		of[t.Subject]++
	}
	several := 0
	for person, n := range of {
		if person != "" && n > 1 {
			several += n
		}
	}
	block = make([]int, len(takes))
	if 2*several <= len(takes) {
		return block, 1, false
	}
	number := make(map[string]int)
	for i, t := range takes {
		if _, ok := number[t.Subject]; !ok {
			number[t.Subject] = len(number)
		}
		block[i] = number[t.Subject]
	}
	return block, len(number), true
}

// durations returns each take's duration in parts of their median.
func durations(takes []*channels.Take) []float64 {
	out := make([]float64, len(takes))
	for i, t := range takes {
		out[i] = t.Duration()
	}
	sorted := slices.Sorted(slices.Values(out))
	for i := range out {
		out[i] /= sorted[len(sorted)/2]
	}
	return out
}

// medoid returns the take nearest to the others once each unit is aligned by
// itself. Aligned together, what counts would be how far a take's units are
// apart in time, and choosing by that would set units against each other. Takes
// are read at every second frame, which is enough to tell near from far.
func (r *readings) medoid(values [][]float64, width int) int {
	const every = 2
	thin := make([][][]float64, len(r.units))
	for k, u := range r.units {
		thin[k] = make([][]float64, len(values))
		for i, v := range values {
			for f := 0; f < clockFrames; f += every {
				thin[k][i] = append(thin[k][i], pick(v[f*width:(f+1)*width], width, u.channels)...)
			}
		}
	}
	a := align.NewAligner(align.Default())
	m, _ := align.Medoid(len(values), func(i, j int) float64 {
		sum := 0.0
		for k, u := range r.units {
			w := len(u.channels)
			sum += float64(w) * a.Align(thin[k][i], thin[k][j], w).Cost
		}
		return sum
	})
	return m
}

func picked(values [][]float64, width int, list []int) [][]float64 {
	out := make([][]float64, len(values))
	for i, v := range values {
		out[i] = pick(v, width, list)
	}
	return out
}

// timingMap returns, per frame of the medoid, the frame of take i that shows
// the same moment. The medoid's own is its clock, exactly.
func timingMap(a *align.Aligner, values [][]float64, width, medoid, i int) []float64 {
	if i == medoid {
		at := make([]float64, len(values[i])/width)
		for f := range at {
			at[f] = float64(f)
		}
		return at
	}
	return a.Align(values[medoid], values[i], width).At
}
