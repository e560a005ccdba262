package delimited

import (
	"bytes"
	"errors"
	"math"
	"math/bits"
	"strconv"
	"strings"
)

// pow10 holds the powers of ten that a float64 holds exactly.
var pow10 = [23]float64{
	1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11,
	1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22,
}

// ten holds the powers of ten that a uint64 holds.
var ten = [20]uint64{
	1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9,
	1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19,
}

// noPoint as a decimal mark matches nothing: no digit is left after digits.
const noPoint = '0'

// values reads len(dst) numbers that stand at b[i:] with one separator between
// them, and returns where the last one ends. It returns -1 when the text is
// anything but numbers in decimal notation, each at most padded by spaces on
// the left. b must end in a line end.
//
// A number is its digits m times a power of ten. When m < 2^53 and the power
// is within 10^±22, both are exact in a float64 and one multiplication or
// division rounds correctly: Clinger, "How to read floating point numbers
// accurately", PLDI 1990. Up to 19 digits and as many decimals, which is how
// a float64 is usually written in full, are divided as integers. All others go
// to strconv. So values are those of strconv.ParseFloat to the bit.
func values(dst []float64, b []byte, i int, sep, point byte) int {
	for k := range dst {
		if k > 0 {
			if b[i] != sep {
				return -1
			}
			i++
		}
		for b[i] == ' ' {
			i++
		}
		start := i
		neg := b[i] == '-'
		if neg || b[i] == '+' {
			i++
		}
		var m uint64
		first := i
		for i < len(b) {
			c := b[i] - '0'
			if c > 9 {
				break
			}
			m = m*10 + uint64(c)
			i++
		}
		digits, exp := i-first, 0
		if b[i] == point {
			i++
			first = i
			for i < len(b) {
				c := b[i] - '0'
				if c > 9 {
					break
				}
				m = m*10 + uint64(c)
				i++
			}
			exp = first - i
			digits -= exp
		}
		if digits == 0 {
			return -1
		}
		if b[i]|0x20 == 'e' {
			e, end := exponent(b, i+1)
			if end < 0 {
				return -1
			}
			exp, i = exp+e, end
		}
		var v float64
		switch {
		case m < 1<<53 && digits <= 19 && exp <= 0 && exp >= -22:
			v = float64(int64(m)) / pow10[-exp]
		case m < 1<<53 && digits <= 19 && exp > 0 && exp <= 22:
			v = float64(int64(m)) * pow10[exp]
		case digits <= 19 && exp < 0 && exp >= -19:
			v = quotient(m, ten[-exp])
		default:
			var err error
			if v, err = exact(b[start:i], point); err != nil {
				return -1
			}
			dst[k] = v
			continue
		}
		if neg {
			v = -v
		}
		dst[k] = v
	}
	return i
}

// quotient returns m/d for m, d > 0, rounded to the nearest float64, ties to
// even. Both are shifted until their top bit is set, so that the integer
// quotient has at least 62 bits, 9 more than a float64 keeps; the remainder only
// matters as not being zero, which its last bit stands for.
func quotient(m, d uint64) float64 {
	shiftM, shiftD := bits.LeadingZeros64(m), bits.LeadingZeros64(d)
	m <<= shiftM
	q, rest := bits.Div64(m>>2, m<<62, d<<shiftD)
	if rest != 0 {
		q |= 1
	}
	power := uint64(1023 - 62 - shiftM + shiftD)
	return float64(int64(q)) * math.Float64frombits(power<<52)
}

// exponent reads the digits after an e. Beyond what a float64 can hold it
// stops counting.
func exponent(b []byte, i int) (exp, end int) {
	neg := b[i] == '-'
	if neg || b[i] == '+' {
		i++
	}
	first := i
	for ; b[i]-'0' <= 9; i++ {
		exp = min(exp*10+int(b[i]-'0'), 1<<20)
	}
	if i == first {
		return 0, -1
	}
	if neg {
		exp = -exp
	}
	return exp, i
}

// exact converts text that is known to be a number by strconv.
func exact(text []byte, point byte) (float64, error) {
	s := string(text)
	if point == ',' {
		s = strings.Replace(s, ",", ".", 1)
	}
	return strconv.ParseFloat(s, 64)
}

// reading is how a text reads as a number.
type reading int

const (
	isNumber   reading = iota
	isMissing          // empty, or says that there is no value
	isInfinite         // infinity, or beyond the range of a float64
	isText
)

// read reads a whole field, spaces around it aside. It is the plain form of
// values, for the rows that are not plain.
func read(text []byte, point byte) (float64, reading) {
	text = bytes.TrimSpace(text)
	var buf [64]byte // on the stack
	line := append(append(buf[:0], text...), '\n')
	var v [1]float64
	if values(v[:], line, 0, '\n', point) == len(text) && len(text) > 0 {
		return v[0], isNumber
	}
	switch strings.ToLower(string(bytes.TrimLeft(text, "+-"))) {
	case "", "nan", "na", "n/a", "null", "none":
		return math.NaN(), isMissing
	case "inf", "infinity":
		return math.Inf(1), isInfinite
	}
	if decimal(text, point) {
		return math.Inf(1), isInfinite
	}
	return 0, isText
}

// decimal tells whether a text is a number in decimal notation, whatever its
// size.
func decimal(text []byte, point byte) bool {
	s := string(text)
	if point == ',' {
		if strings.Contains(s, ".") {
			return false
		}
		s = strings.Replace(s, ",", ".", 1)
	}
	if strings.Trim(s, "+-.eE0123456789") != "" {
		return false
	}
	_, err := strconv.ParseFloat(s, 64)
	return err == nil || errors.Is(err, strconv.ErrRange)
}
