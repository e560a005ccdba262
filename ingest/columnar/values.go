package columnar

import (
	"errors"
	"math"
	"slices"
)

// values are values in one of three forms, the others being empty.
type values struct {
	floats []float64
	whole  []int64
	texts  []string
}

var (
	errLevels = errors.New("its levels do not fit its values")
	errIndex  = errors.New("an index beyond its dictionary")
)

func (v *values) len() int { return len(v.floats) + len(v.whole) + len(v.texts) }

func (v *values) reset() {
	v.floats, v.whole, v.texts = v.floats[:0], v.whole[:0], v.texts[:0]
}

// drop forgets the first n values.
func (v *values) drop(as want, n int) {
	switch as {
	case floats:
		v.floats = slices.Delete(v.floats, 0, n)
	case whole:
		v.whole = slices.Delete(v.whole, 0, n)
	case texts:
		v.texts = slices.Delete(v.texts, 0, n)
	}
}

// slice returns some of the values as a vector.
func (v *values) slice(as want, from, to int) vector {
	switch as {
	case floats:
		return vector{floats: v.floats[from:to]}
	case whole:
		return vector{whole: v.whole[from:to]}
	}
	return vector{texts: v.texts[from:to]}
}

// append appends all values of another.
func (v *values) append(src *values) {
	v.floats = append(v.floats, src.floats...)
	v.whole = append(v.whole, src.whole...)
	v.texts = append(v.texts, src.texts...)
}

// gather appends the values of a dictionary at these indexes.
func (v *values) gather(as want, dictionary *values, indexes []int32) (err error) {
	switch as {
	case floats:
		v.floats, err = gather(v.floats, dictionary.floats, indexes)
	case whole:
		v.whole, err = gather(v.whole, dictionary.whole, indexes)
	case texts:
		v.texts, err = gather(v.texts, dictionary.texts, indexes)
	}
	return err
}

func gather[T any](dst, dictionary []T, indexes []int32) ([]T, error) {
	dst = slices.Grow(dst, len(indexes))
	for _, i := range indexes {
		if uint(i) >= uint(len(dictionary)) {
			return dst, errIndex
		}
		dst = append(dst, dictionary[i])
	}
	return dst, nil
}

// expand appends the values of a column that stand at the definition level
// max, and what stands for a missing one at other levels from listed on.
func (v *values) expand(as want, dense *values, definitions []byte, listed, max byte) (err error) {
	switch as {
	case floats:
		v.floats, err = expand(v.floats, dense.floats, math.NaN(), definitions, listed, max)
	case whole:
		v.whole, err = expand(v.whole, dense.whole, noInstant, definitions, listed, max)
	case texts:
		v.texts, err = expand(v.texts, dense.texts, "", definitions, listed, max)
	}
	return err
}

func expand[T any](dst, dense []T, missing T, definitions []byte, listed, max byte) ([]T, error) {
	dst = slices.Grow(dst, len(definitions))
	for _, d := range definitions {
		switch {
		case d < listed:
		case d < max:
			dst = append(dst, missing)
		case len(dense) == 0:
			return dst, errLevels
		default:
			dst = append(dst, dense[0])
			dense = dense[1:]
		}
	}
	if len(dense) > 0 {
		return dst, errLevels
	}
	return dst, nil
}
