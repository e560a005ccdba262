package c3d

import (
	"fmt"
	"math"
)

// shape is how the data section is laid out. A frame is the points, each of
// three coordinates and a residual, then the samples of the analog channels.
type shape struct {
	start    int64   // offset of the first frame
	points   int     // in a frame
	channels int     // of analog data
	samples  int     // of each channel in a frame
	bytes    int     // per number: 2 for integers, 4 for floats
	scale    float64 // of integer coordinates
	counts   []count // of frames, the one to be preferred first
}

// frame returns the number of bytes of a frame.
func (s *shape) frame() int64 {
	return int64(s.bytes) * (4*int64(s.points) + int64(s.channels)*int64(s.samples))
}

// readShape gathers from header and parameters how the frames are laid out and
// how fast they follow. A parameter and its copy must agree.
func (d *decoder) readShape() error {
	if len(d.file.Parameters) == 0 || !d.hasGroup("POINT") {
		return d.fault(offsetOf(int(d.head[parameterBlockAt])), "holds no POINT parameters, which every C3D file needs", "export it again")
	}
	for _, step := range []func() error{d.readStart, d.readPointCount, d.readAnalogCount, d.readScale, d.readRate, d.readCounts} {
		if err := step(); err != nil {
			return err
		}
	}
	if d.shape.frame() == 0 {
		return d.fault(pointsAt, "holds neither points nor analog data", "leave it out")
	}
	return nil
}

func (d *decoder) hasGroup(name string) bool {
	for i := range d.file.Parameters {
		if d.file.Parameters[i].Group == name {
			return true
		}
	}
	return false
}

// number returns the first number of a parameter. Its offset is where the
// parameter stands; ok is false when there is none.
func (d *decoder) number(group, name string) (v float64, offset int64, ok bool, err error) {
	p := d.file.Parameters.Find(group, name)
	if p == nil {
		return 0, 0, false, nil
	}
	all := p.Unsigned()
	if len(all) == 0 {
		return 0, 0, false, d.fault(p.Offset, fmt.Sprintf("has no number in %s:%s", group, name), "export it again")
	}
	return all[0], p.Offset, true, nil
}

// countOf is like number for a parameter that counts.
func (d *decoder) countOf(group, name string) (n int64, offset int64, ok bool, err error) {
	v, offset, ok, err := d.number(group, name)
	if err == nil && ok && !(v >= 0 && v <= maxCount && v == math.Trunc(v)) {
		err = d.fault(offset, fmt.Sprintf("counts %v in %s:%s", v, group, name), "export it again")
	}
	return int64(v), offset, ok && err == nil, err
}

// maxCount keeps the arithmetic of counts far from overflow.
const maxCount = 1 << 40

// readStart finds the data section. Some programs state its place in the
// header alone and leave the parameter 0.
func (d *decoder) readStart() error {
	n, offset, ok, err := d.countOf("POINT", "DATA_START")
	if err != nil {
		return err
	}
	at := int64(d.word(dataBlockAt))
	switch {
	case !ok || n == 0:
		n, offset = at, dataBlockAt
	case at != 0 && at != n:
		return d.contradiction(offset, fmt.Sprintf("begins its data in block %d by POINT:DATA_START, in block %d by its header", n, at))
	}
	d.shape.start = offsetOf(int(n))
	if d.shape.start < d.at {
		return d.contradiction(offset, fmt.Sprintf("begins its data in block %d, inside its parameters", n))
	}
	return nil
}

func (d *decoder) readPointCount() error {
	n, offset, ok, err := d.countOf("POINT", "USED")
	if err != nil {
		return err
	}
	d.shape.points = d.word(pointsAt)
	if ok && n != int64(d.shape.points) {
		return d.contradiction(offset, fmt.Sprintf("has %d points by POINT:USED, %d by its header", n, d.shape.points))
	}
	return nil
}

// readAnalogCount finds the analog channels, and their samples in a frame.
func (d *decoder) readAnalogCount() error {
	n, offset, ok, err := d.countOf("ANALOG", "USED")
	if err != nil {
		return err
	}
	total, samples := d.word(analogAt), d.word(perFrameAt)
	if total == 0 && n == 0 {
		return nil
	}
	if !ok {
		n, offset = int64(total/max(samples, 1)), analogAt
	}
	if total == 0 || n*int64(samples) != int64(total) {
		return d.contradiction(offset, fmt.Sprintf("has %d analog channels of %d samples in a frame, but %d analog numbers", n, samples, total))
	}
	d.shape.channels, d.shape.samples = int(n), samples
	d.file.Analog.PerFrame = samples
	return nil
}

// readScale finds the scale of the coordinates, whose sign tells floats from
// integers. Floats are stored at full size, so that their scale says nothing
// about them.
func (d *decoder) readScale() error {
	copied := d.real(scaleAt)
	scale, offset, ok, err := d.number("POINT", "SCALE")
	if err != nil {
		return err
	}
	if !ok {
		scale, offset = copied, scaleAt
	}
	d.file.Float = scale < 0
	d.shape.bytes, d.shape.scale = 2, scale
	if d.file.Float {
		d.shape.bytes = 4
	}
	switch {
	case math.IsNaN(scale) || math.IsInf(scale, 0) || scale == 0 && d.shape.points > 0:
		return d.fault(offset, fmt.Sprintf("states the scale %v for its points", scale), "export it again")
	case copied != 0 && ((copied < 0) != d.file.Float || !d.file.Float && !near(copied, scale)):
		return d.contradiction(offset, fmt.Sprintf("has the scale %v by POINT:SCALE, %v by its header", scale, copied))
	}
	return nil
}

// near allows for the rounding of a number that was converted between formats.
func near(a, b float64) bool { return math.Abs(a-b) <= 1e-6*math.Abs(b) }

// readRate finds the rates of both clocks.
func (d *decoder) readRate() error {
	rate, offset, _, err := d.number("POINT", "RATE")
	if err != nil {
		return err
	}
	copied := d.real(rateAt)
	switch {
	case rate == 0:
		rate, offset = copied, rateAt
	case !near(copied, rate):
		d.Notice("states another frame rate in its header than in POINT:RATE, which is taken", fmt.Sprintf("%v and %v Hz", copied, rate))
	}
	if !(rate >= 0) || math.IsInf(rate, 0) {
		return d.fault(offset, fmt.Sprintf("states the frame rate %v", rate), "export it again")
	}
	d.file.Points.Rate = rate
	return d.readAnalogRate()
}

// readAnalogRate derives the analog rate from the frames, which hold a whole
// number of samples; what the parameter says counts only without a frame rate.
func (d *decoder) readAnalogRate() error {
	if d.shape.channels == 0 {
		return nil
	}
	stated, offset, ok, err := d.number("ANALOG", "RATE")
	if err != nil {
		return err
	}
	rate := d.file.Points.Rate * float64(d.shape.samples)
	switch {
	case rate == 0 && (!(stated >= 0) || math.IsInf(stated, 0)):
		return d.fault(offset, fmt.Sprintf("states the analog rate %v", stated), "export it again")
	case rate == 0:
		rate = stated
	case ok && stated != 0 && math.Abs(stated-rate) > 1e-3*rate:
		d.Notice("states another analog rate than its frames have, which is taken", fmt.Sprintf("%v and %v Hz", stated, rate))
	}
	d.file.Analog.Rate = rate
	return nil
}
