package report

import (
	"cmp"
	"crypto/sha256"
	"encoding/binary"
	"slices"

	"strandwise/channels"
)

// MostFrames is the number of frames that a take is thinned to for drawing.
const MostFrames = 200

// sketched is the number of instants at which takes are compared.
const sketched = 64

// reservoir keeps the takes whose ids have the least hashes.
type reservoir struct {
	drawn int // takes kept to be drawn
	most  int // takes kept as sketches, no fewer
	list  []entry
}

// entry is one take kept.
type entry struct {
	key    uint64
	id     string
	drawn  *channels.Take // nil from the drawn-th entry on
	sketch *channels.Take // sketched frames
}

func (e entry) compare(o entry) int {
	return cmp.Or(cmp.Compare(e.key, o.key), cmp.Compare(e.id, o.id))
}

// add keeps the take if its turn comes.
func (r *reservoir) add(t *channels.Take) {
	sum := sha256.Sum256([]byte(t.ID))
	e := entry{key: binary.BigEndian.Uint64(sum[:]), id: t.ID}
	at, _ := slices.BinarySearchFunc(r.list, e, entry.compare)
	if at >= r.most {
		return
	}
	stored := asStored(t)
	e.sketch = sketch(stored)
	if at < r.drawn {
		e.drawn = thinned(stored)
	}
	r.list = slices.Insert(r.list, at, e)
	r.trim()
}

// trim lets go of what is beyond the bounds.
func (r *reservoir) trim() {
	if len(r.list) > r.most {
		clear(r.list[r.most:])
		r.list = r.list[:r.most]
	}
	for i := r.drawn; i < len(r.list); i++ {
		r.list[i].drawn = nil
	}
}

// merge takes over the entries of another reservoir of the same bounds.
func (r *reservoir) merge(o *reservoir) {
	r.list = append(r.list, o.list...)
	slices.SortFunc(r.list, entry.compare)
	r.trim()
}

func (r *reservoir) takes() []*channels.Take {
	var out []*channels.Take
	for _, e := range r.list[:min(len(r.list), r.drawn)] {
		out = append(out, e.drawn)
	}
	return out
}

func (r *reservoir) sketches() []*channels.Take {
	var out []*channels.Take
	for _, e := range r.list {
		out = append(out, e.sketch)
	}
	return out
}

// asStored returns the take as a reader of the set finds it: 32-bit numbers,
// and the clock starting at 0.
func asStored(t *channels.Take) *channels.Take {
	out := t.Clone()
	for i, at := range t.Time {
		out.Time[i] = float64(float32(at - t.Time[0]))
	}
	for i, v := range t.Data {
		out.Data[i] = float64(float32(v))
	}
	out.Skeleton, out.Where = nil, "" // not drawn, and not in every reader's hands
	return out
}

// thinned returns the take with at most MostFrames of its frames, evenly
// spread, the first and last among them.
func thinned(t *channels.Take) *channels.Take {
	n := t.Frames()
	if n <= MostFrames {
		return t
	}
	out := *t
	out.Time, out.Data = make([]float64, 0, MostFrames), make([]float64, 0, MostFrames*t.Width())
	for k := range MostFrames {
		i := k * (n - 1) / (MostFrames - 1)
		out.Time = append(out.Time, t.Time[i])
		out.Data = append(out.Data, t.Frame(i)...)
	}
	return &out
}

// sketch returns the take read linearly at evenly spaced instants from its
// first frame to its last.
func sketch(t *channels.Take) *channels.Take {
	out := *t
	w, last := t.Width(), t.Frames()-1
	out.Time, out.Data = make([]float64, sketched), make([]float64, 0, sketched*w)
	for k, i := 0, 0; k < sketched; k++ {
		at := t.Time[0] + t.Duration()*float64(k)/(sketched-1)
		for i < last-1 && t.Time[i+1] < at {
			i++
		}
		next, u := min(i+1, last), 0.0
		if span := t.Time[next] - t.Time[i]; span > 0 {
			u = min(1, (at-t.Time[i])/span)
		}
		for c := range w {
			out.Data = append(out.Data, (1-u)*t.Data[i*w+c]+u*t.Data[next*w+c])
		}
		out.Time[k] = float64(k)
	}
	return &out
}
