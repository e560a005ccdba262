package variation

import (
	"cmp"
	"slices"
	"sort"

	"strandwise/channels"
)

// view is a take as it is measured: scaled, brought to a fixed number of frames
// evenly spaced in time, and about its mean. Means stand apart: takes that lie
// elsewhere would be aligned by where they are, not by how they move.
type view struct {
	data     []float64   // frames × width
	means    []float64   // per channel
	limbs    [][]float64 // per limb the same for its channels, where there are several limbs
	duration float64     // s
	raw      *channels.Take
}

// label is the takes of one label.
type label struct {
	name  string
	takes []*view
}

// form is what all takes have in common.
type form struct {
	frames, width int
	layout        *channels.Layout
	limbs         [][]int // channels of each limb, ascending
	limbNames     []string
	vectors       [][]int // channels of each vector of three axes, or of two where there is none of three
	axes          int     // 3, 2, or 0 where there is no vector
	groupVectors  [][][]int
	scales        *channels.Scales
}

// gather sorts takes by label and id, so that the order in which they came
// does not matter, and brings each to its view.
func (f *form) gather(takes []*channels.Take) []label {
	sorted := slices.Clone(takes)
	slices.SortStableFunc(sorted, func(a, b *channels.Take) int {
		return cmp.Or(cmp.Compare(a.Label, b.Label), cmp.Compare(a.ID, b.ID))
	})
	var out []label
	for _, t := range sorted {
		if n := len(out); n == 0 || out[n-1].name != t.Label {
			out = append(out, label{name: t.Label})
		}
		l := &out[len(out)-1]
		l.takes = append(l.takes, f.view(t))
	}
	return out
}

// view brings one take to its view.
func (f *form) view(t *channels.Take) *view {
	scaled := f.scales.Apply(t)
	v := &view{data: make([]float64, f.frames*f.width), duration: t.Duration(), raw: t}
	spacing := t.Duration() / float64(f.frames-1)
	for k := range f.frames {
		read(v.data[k*f.width:][:f.width], scaled, f.width, place(t.Time, t.Time[0]+spacing*float64(k)))
	}
	f.settle(v)
	return v
}

// settle sets the means of a view apart and copies out its limbs.
func (f *form) settle(v *view) {
	v.means = v.means[:0]
	for c := range f.width {
		v.means = append(v.means, centre(v.data, f.width, c))
	}
	f.part(v)
}

// part copies out the channels of each limb, where there are several.
func (f *form) part(v *view) {
	if len(f.limbs) < 2 {
		return
	}
	if v.limbs == nil {
		v.limbs = make([][]float64, len(f.limbs))
	}
	for l, list := range f.limbs {
		v.limbs[l] = v.limbs[l][:0]
		for i := range f.frames {
			for _, c := range list {
				v.limbs[l] = append(v.limbs[l], v.data[i*f.width+c])
			}
		}
	}
}

// place returns the frame, with its fraction, shown at a time.
func place(time []float64, at float64) float64 {
	last := len(time) - 1
	switch {
	case at <= time[0]:
		return 0
	case at >= time[last]:
		return float64(last)
	}
	i := sort.SearchFloat64s(time, at) - 1
	return float64(i) + (at-time[i])/(time[i+1]-time[i])
}

// read reads a frame between frames along a Catmull–Rom spline, and the first
// or the last beyond the ends (Catmull and Rom, "A class of local
// interpolating splines", Computer Aided Geometric Design, 1974).
func read(dst, data []float64, width int, at float64) {
	last := len(data)/width - 1
	at = min(max(at, 0), float64(last))
	i := min(int(at), max(0, last-1))
	x := at - float64(i)
	p := data[max(0, i-1)*width:][:width]
	q := data[i*width:][:width]
	r := data[min(last, i+1)*width:][:width]
	s := data[min(last, i+2)*width:][:width]
	for c := range dst {
		dst[c] = q[c] + x*((r[c]-p[c])/2+x*(p[c]-2.5*q[c]+2*r[c]-s[c]/2+x*(1.5*(q[c]-r[c])+(s[c]-p[c])/2)))
	}
}
