package c3d

import (
	"fmt"
	"io"
	"math"
	"slices"

	"strandwise/ingest/fault"
)

// frames reads the data section.
type frames struct {
	*decoder
	numbers func(dst []float64, b []byte)
	scratch []float64 // the numbers of one frame
	gauge   []gauge
}

// gauge turns the stored numbers of an analog channel into its unit.
type gauge struct{ offset, scale float64 }

const (
	readSize    = 64 << 10 // bytes read at once, if a frame is not longer
	blindFrames = 1 << 20  // bytes of frames taken on trust when the file's size is not known
)

// readFrames reads the data section: as many frames as any count states and
// the file holds. Which count is right shows at the end of the file.
func (d *decoder) readFrames() error {
	f := &frames{decoder: d, numbers: d.file.Order.ints}
	if d.file.Float {
		f.numbers = d.file.Order.floats
	}
	if !d.SkipAnalog {
		var err error
		if f.gauge, err = d.readGauges(); err != nil {
			return err
		}
	}
	if err := d.skipTo(d.shape.start, "its data"); err != nil {
		return err
	}
	bytes, err := f.read()
	if err != nil {
		return err
	}
	n, err := d.settle(bytes)
	if err != nil {
		return err
	}
	d.file.Frames = int(n)
	return f.finish(int(n))
}

// read decodes the frames and returns how many bytes there are to the end of
// the file.
func (f *frames) read() (int64, error) {
	size, left := f.shape.frame(), f.shape.most()
	f.grow(left)
	buf := make([]byte, size*max(1, min(left, readSize/size)))
	for left > 0 {
		n, err := f.fill(buf[:min(int64(len(buf)), left*size)])
		if err != nil {
			return 0, err
		}
		for b := range slices.Chunk(buf[:int64(n)/size*size], int(size)) {
			f.frame(b)
		}
		left -= int64(n) / size
		if n < len(buf) {
			break
		}
	}
	rest, err := io.Copy(io.Discard, f.r)
	f.at += rest
	return f.at - f.shape.start, err
}

// grow makes room for frames, but for no more than the file can hold.
func (f *frames) grow(n int64) {
	bytes := int64(blindFrames)
	if f.Size > 0 {
		bytes = max(f.Size-f.shape.start, 0)
	}
	n = min(n, bytes/f.shape.frame())
	if !f.SkipPoints {
		f.file.Points.Data = make([]float64, 0, n*int64(f.shape.points)*3)
	}
	if !f.SkipAnalog {
		f.file.Analog.Data = make([]float64, 0, n*int64(f.shape.channels)*int64(f.shape.samples))
	}
	f.scratch = make([]float64, max(4*f.shape.points, f.shape.channels*f.shape.samples))
}

func (f *frames) frame(b []byte) {
	n := 4 * f.shape.points
	if !f.SkipPoints {
		f.points(b[:n*f.shape.bytes])
	}
	if !f.SkipAnalog {
		f.analog(b[n*f.shape.bytes:])
	}
}

func (f *frames) points(b []byte) {
	v := f.scratch[:4*f.shape.points]
	f.numbers(v, b)
	scale := f.shape.scale
	if f.file.Float {
		scale = 1
	}
	dst := extend(&f.file.Points.Data, 3*f.shape.points)
	for ; len(v) >= 4 && len(dst) >= 3; v, dst = v[4:], dst[3:] {
		x, y, z := v[0]*scale, v[1]*scale, v[2]*scale
		if v[3] < 0 || x != x || y != y || z != z {
			x, y, z = math.NaN(), math.NaN(), math.NaN()
		}
		dst[0], dst[1], dst[2] = x, y, z
	}
}

// extend lengthens a slice and returns the new part.
func extend(s *[]float64, n int) []float64 {
	*s = slices.Grow(*s, n)[:len(*s)+n]
	return (*s)[len(*s)-n:]
}

// analog applies the manual's formula ("Analog Data - Integer Format"):
// (stored − OFFSET) · SCALE · GEN_SCALE, for floats too.
func (f *frames) analog(b []byte) {
	v := f.scratch[:f.shape.channels*f.shape.samples]
	f.numbers(v, b)
	wrap := f.file.Analog.Unsigned && !f.file.Float
	dst := extend(&f.file.Analog.Data, len(v))
	for ; len(v) > 0; v, dst = v[len(f.gauge):], dst[len(f.gauge):] {
		for c, g := range f.gauge {
			x := v[c]
			if wrap && x < 0 {
				x += 1 << 16
			}
			dst[c] = (x - g.offset) * g.scale
		}
	}
}

// finish cuts the data to the frames the file holds, and counts what is
// missing in them. A value that is infinite is a fault.
func (f *frames) finish(n int) error {
	p, a := &f.file.Points, &f.file.Analog
	if !f.SkipPoints {
		p.Data = p.Data[:n*f.shape.points*3]
		p.Missing = missing(p.Data, 3, len(p.Labels))
		if i := infinite(p.Data); i >= 0 {
			row := 3 * f.shape.points
			return f.notFinite(i/row, i%row/3*4+i%3, p.Labels[i%row/3])
		}
	}
	if !f.SkipAnalog {
		a.Data = a.Data[:n*f.shape.samples*f.shape.channels]
		a.Missing = missing(a.Data, 1, len(a.Labels))
		if i := infinite(a.Data); i >= 0 {
			row := f.shape.samples * f.shape.channels
			return f.notFinite(i/row, 4*f.shape.points+i%row, a.Labels[i%f.shape.channels])
		}
	}
	return nil
}

// missing counts for each of n labels the rows of data in which its values, so
// many each, are NaN.
func missing(data []float64, each, n int) []int {
	out := make([]int, n)
	for len(data) > 0 {
		for i := range out {
			if v := data[i*each]; v != v {
				out[i]++
			}
		}
		data = data[n*each:]
	}
	return out
}

// infinite returns the position of the first infinite value, or -1.
func infinite(data []float64) int {
	return slices.IndexFunc(data, func(v float64) bool { return math.IsInf(v, 0) })
}

func (f *frames) notFinite(frame, number int, label string) error {
	return &fault.Error{
		File: f.Name, Channel: label,
		Offset:  f.shape.start + int64(frame)*f.shape.frame() + int64(number*f.shape.bytes),
		Problem: fmt.Sprintf("has a value in frame %d that is not finite", frame),
		Remedy:  "repair the value or leave the file out",
	}
}
