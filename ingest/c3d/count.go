package c3d

import (
	"fmt"
	"strings"
)

// count is one statement of how many frames a file holds.
type count struct {
	where  string
	frames int64
}

const full = 65535 // what 16 bits state when there are more

// readCounts gathers the frame counts stated, in the order in which the manual
// believes them ("Reading the frame count"): POINT:FRAMES, unless its 16 bits
// are full; then POINT:LONG_FRAMES and TRIAL; then the header.
func (d *decoder) readCounts() error {
	n, offset, ok, err := d.countOf("POINT", "FRAMES")
	if err != nil {
		return err
	}
	d.file.First = d.word(firstFrameAt)
	long, err := d.longCounts()
	if err != nil {
		return err
	}
	p := d.file.Parameters.Find("POINT", "FRAMES")
	if n > 0 && (p.Type == Real || n < full || len(long) == 0) {
		d.shape.counts = append(d.shape.counts, count{"POINT:FRAMES", n})
	}
	d.shape.counts = append(d.shape.counts, long...)
	first, last := d.word(firstFrameAt), d.word(lastFrameAt)
	if last > 0 && last >= first && (last < full || len(d.shape.counts) == 0) {
		d.shape.counts = append(d.shape.counts, count{"its header", int64(last-first) + 1})
	}
	switch {
	case len(d.shape.counts) > 0:
		return nil
	case ok:
		return d.fault(offset, "holds no frames", "leave it out")
	}
	return d.contradiction(firstFrameAt, "does not say how many frames it holds")
}

// longCounts gathers the counts made for files of more than 65535 frames.
func (d *decoder) longCounts() (out []count, err error) {
	n, _, ok, err := d.countOf("POINT", "LONG_FRAMES")
	if err != nil {
		return nil, err
	}
	if ok && n > 0 {
		out = append(out, count{"POINT:LONG_FRAMES", n})
	}
	first, ok1 := d.field("ACTUAL_START_FIELD")
	last, ok2 := d.field("ACTUAL_END_FIELD")
	if ok1 && ok2 && last >= first {
		out = append(out, count{"the TRIAL group", last - first + 1})
		d.file.First = int(first)
	}
	return out, nil
}

// field reads a frame number of the TRIAL group: two 16-bit words, the low one
// first.
func (d *decoder) field(name string) (int64, bool) {
	p := d.file.Parameters.Find("TRIAL", name)
	if p == nil || p.Type != Int || p.Len() != 2 {
		return 0, false
	}
	w := p.Unsigned()
	return int64(w[0]) + int64(w[1])*65536, true
}

// most returns the largest count stated.
func (s *shape) most() int64 {
	var n int64
	for _, c := range s.counts {
		n = max(n, c.frames)
	}
	return n
}

// settle returns how many frames the file holds, of which there are as many
// bytes of data. Where all counts agree, the data must hold them. Where they
// differ, the count is right that fills the data, up to the padding of the
// last block.
func (d *decoder) settle(bytes int64) (int64, error) {
	s := &d.shape
	first, differ, fits := s.counts[0].frames, false, false
	for _, c := range s.counts {
		differ = differ || c.frames != first
		fits = fits || c.frames*s.frame() <= bytes
	}
	end := s.start + bytes
	switch {
	case !fits:
		return 0, d.fault(end, fmt.Sprintf("ends after %d whole frames of %s", bytes/s.frame(), d.stated()), "copy or export it again")
	case !differ && bytes-first*s.frame() >= block:
		d.Notice("goes on after its last frame; what follows is not read", fmt.Sprintf("%d bytes", bytes-first*s.frame()))
		return first, nil
	case !differ:
		return first, nil
	}
	for _, c := range s.counts {
		if over := bytes - c.frames*s.frame(); over >= 0 && over < block {
			d.Notice("states several frame counts; the one that fills the file is taken", d.stated())
			return c.frames, nil
		}
	}
	return 0, d.contradiction(firstFrameAt, fmt.Sprintf("states %s, and holds %d", d.stated(), bytes/s.frame()))
}

// stated lists the counts for a message.
func (d *decoder) stated() string {
	var out []string
	for _, c := range d.shape.counts {
		out = append(out, fmt.Sprintf("%d frames by %s", c.frames, c.where))
	}
	return strings.Join(out, ", ")
}
