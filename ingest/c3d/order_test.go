package c3d

import (
	"math"
	"testing"
)

// TestDECFloat holds the conversion against values worked out by hand from the
// definition of F_floating (VAX Architecture Reference Manual, 1987, chapter 1;
// the same layout at nssdc.gsfc.nasa.gov/nssdc/formats/VAXFloatingPoint.htm):
// low word first, sign, exponent in excess of 128, fraction below a hidden bit
// that is worth 1/2. The range stated there is 0.29e-38 to 1.7e38.
func TestDECFloat(t *testing.T) {
	for _, c := range []struct {
		bytes [4]byte
		want  float64
	}{
		{[4]byte{0x80, 0x40, 0, 0}, 1},                             // 1/2 · 2^(129-128)
		{[4]byte{0x80, 0xc0, 0, 0}, -1},                            // the same with the sign set
		{[4]byte{0xc0, 0xc0, 0, 0}, -1.5},                          // -3/4 · 2^1
		{[4]byte{0x00, 0x40, 0, 0}, 0.5},                           // 1/2 · 2^0
		{[4]byte{0x20, 0x44, 0, 0}, 160},                           // 5/8 · 2^8
		{[4]byte{0xc8, 0x43, 0, 0}, 100},                           // 25/32 · 2^7
		{[4]byte{0x80, 0x40, 1, 0}, 1 + 0x1p-23},                   // lowest bit of the fraction
		{[4]byte{0x49, 0x41, 0xdb, 0x0f}, 13176795.0 / (1 << 22)},  // π in 24 bits: 0xc90fdb · 2^-22
		{[4]byte{0x80, 0x00, 0, 0}, 0x1p-128},                      // smallest, 0.29e-38
		{[4]byte{0xff, 0x7f, 0xff, 0xff}, (1 - 0x1p-24) * 0x1p127}, // largest, 1.7e38
		{[4]byte{0, 0, 0, 0}, 0},
		{[4]byte{0x7f, 0x00, 0xff, 0xff}, 0}, // exponent 0: the fraction does not count
	} {
		if got := DEC.float(c.bytes[:]); got != c.want {
			t.Errorf("% x is read as %v, want %v", c.bytes, got, c.want)
		}
	}
	if got := DEC.float([]byte{0, 0x80, 0, 0}); !math.IsNaN(got) {
		t.Errorf("the reserved operand is read as %v, want NaN", got)
	}
}

// TestOrders reads the same numbers in every order.
func TestOrders(t *testing.T) {
	for _, c := range []struct {
		order Order
		int   []byte
		float []byte
	}{
		{Intel, []byte{0xfe, 0xff}, []byte{0, 0, 0x80, 0xbf}},
		{DEC, []byte{0xfe, 0xff}, []byte{0x80, 0xc0, 0, 0}},
		{MIPS, []byte{0xff, 0xfe}, []byte{0xbf, 0x80, 0, 0}},
	} {
		var got [2]float64
		c.order.ints(got[:1], c.int)
		c.order.floats(got[1:], c.float)
		if got != [2]float64{-2, -1} || c.order.float(c.float) != -1 || c.order.uint16(c.int) != 0xfffe {
			t.Errorf("%v: %v, want -2 and -1", c.order, got)
		}
	}
}
