package c3d

import "fmt"

// Byte offsets of the header's parts; the manual counts them in words of two
// bytes from 1.
const (
	parameterBlockAt = 0   // byte 1
	keyAt            = 1   // byte 2
	pointsAt         = 2   // word 2
	analogAt         = 4   // word 3: analog numbers in a frame
	firstFrameAt     = 6   // word 4
	lastFrameAt      = 8   // word 5
	scaleAt          = 12  // words 7-8
	dataBlockAt      = 16  // word 9
	perFrameAt       = 18  // word 10: samples of each analog channel in a frame
	rateAt           = 20  // words 11-12
	eventKeyAt       = 298 // word 150
	eventCountAt     = 300 // word 151
	eventTimesAt     = 304 // words 153-188
	eventLabelsAt    = 396 // words 199-234
)

// key is the second byte of every C3D file.
const key = 0x50

// readHead reads the header block. Its numbers can be read only once the order
// is known, which stands in the parameter section.
func (d *decoder) readHead() error {
	if err := d.need(d.head[:], "its header"); err != nil {
		return err
	}
	if d.head[keyAt] != key {
		return d.fault(keyAt, fmt.Sprintf("is no C3D file: its second byte is %#02x, not %#02x", d.head[keyAt], key), "name the file by the format it is in")
	}
	if d.head[parameterBlockAt] < 2 {
		return d.fault(parameterBlockAt, fmt.Sprintf("places its parameters in block %d, where the header is", d.head[parameterBlockAt]), "export it again")
	}
	return nil
}

// word reads an unsigned number of the header.
func (d *decoder) word(offset int) int {
	return int(d.file.Order.uint16(d.head[offset:]))
}

// real reads a float of the header.
func (d *decoder) real(offset int) float64 {
	return d.file.Order.float(d.head[offset:])
}

// offsetOf returns the byte offset of a block; blocks count from 1.
func offsetOf(n int) int64 { return int64(n-1) * block }
