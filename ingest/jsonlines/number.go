package jsonlines

import (
	"bytes"
	"math"
	"strconv"
)

var powers = [...]float64{1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22}

// parseNumber reads the number of JSON (RFC 8259) that b begins with, rounded
// correctly, and returns how long it is: 0 when b begins with none. A number
// beyond float64 is infinite. The byte after the number is there to be read.
//
// Up to 15 digits and a power of ten up to 22 are exact as floats, so their
// product or quotient is the nearest float (W. D. Clinger, "How to read floating
// point numbers accurately", PLDI 1990); strconv reads the rest.
func parseNumber(b []byte) (v float64, n int) { return scanNumber(b, true) }

// scanNumber is parseNumber, and gives a value only when it is wanted.
func scanNumber(b []byte, wanted bool) (v float64, n int) {
	i := 0
	if b[0] == '-' {
		i++
	}
	first := i
	var mantissa uint64
	for ; b[i]-'0' <= 9; i++ {
		mantissa = mantissa*10 + uint64(b[i]-'0')
	}
	digits := i - first
	if digits == 0 || digits > 1 && b[first] == '0' {
		return 0, 0
	}
	scale := 0
	if b[i] == '.' {
		i++
		from := i
		for ; b[i]-'0' <= 9; i++ {
			mantissa = mantissa*10 + uint64(b[i]-'0')
		}
		if scale = i - from; scale == 0 {
			return 0, 0
		}
	}
	if b[i]|0x20 == 'e' {
		if i = exponent(b, i); i == 0 {
			return 0, 0
		}
		scale = len(powers) // left to strconv
	}
	if !wanted {
		return 0, i
	}
	if digits+scale <= 15 && scale < len(powers) {
		v = float64(mantissa) / powers[scale]
		if first == 1 {
			v = -v
		}
		return v, i
	}
	v, _ = strconv.ParseFloat(string(b[:i]), 64)
	return v, i
}

// exponent returns where the exponent that begins at i ends, 0 when it is none.
func exponent(b []byte, i int) int {
	i++
	if b[i] == '+' || b[i] == '-' {
		i++
	}
	first := i
	for b[i]-'0' <= 9 {
		i++
	}
	if i == first {
		return 0
	}
	return i
}

// reading says what a value is for a channel or a clock.
type reading int

const (
	isNumber reading = iota
	isMissing
	isInfinite
	isText // or anything else
)

// read reads a token of an object as a number. Quotes around a number do not
// count.
func read(object []byte, t token) (float64, reading) {
	t, missing := t.bare(object)
	switch {
	case missing:
		return math.NaN(), isMissing
	case t.kind != number:
		return 0, isText
	}
	switch v, n := parseNumber(object[t.from:]); {
	case n != t.to-t.from:
		return 0, isText
	case math.IsInf(v, 0):
		return 0, isInfinite
	default:
		return v, isNumber
	}
}

// bare returns a token without the quotes around it, as a number, and tells
// whether it says that there is no value.
func (t token) bare(object []byte) (token, bool) {
	if t.kind == null {
		return t, true
	}
	if t.kind != text {
		return t, false
	}
	t.kind, t.from, t.to = number, t.from+1, t.to-1
	for t.from < t.to && object[t.from] == ' ' {
		t.from++
	}
	for t.from < t.to && object[t.to-1] == ' ' {
		t.to--
	}
	inner := object[t.from:t.to]
	return t, len(inner) == 0 || bytes.Equal(inner, nan)
}

// farDigits is the length from which whole units and fraction of a time are
// read apart: a float64 holds ten digits and five decimals.
const farDigits = 10

// split reads a number as whole units and a fraction, when it is written so and
// is so far from zero that this matters.
func split(b []byte) (whole int64, fraction float64, ok bool) {
	digits, rest, _ := bytes.Cut(b, []byte("."))
	if len(digits) < farDigits || b[0] == '+' || bytes.ContainsAny(rest, "eE") {
		return 0, 0, false
	}
	whole, err := strconv.ParseInt(string(digits), 10, 64)
	if err == nil && len(rest) > 0 {
		fraction, err = strconv.ParseFloat("0."+string(rest), 64)
	}
	if b[0] == '-' {
		fraction = -fraction
	}
	return whole, fraction, err == nil
}
