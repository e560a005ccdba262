package clock

import (
	"math"
	"slices"
)

// ordered is a recording whose times ascend, and where its rows came from.
type ordered struct {
	Series
	from []int // row of the recording; the first of those merged
}

// inOrder sorts and merges rows as far as allowed. Rows of one time that have
// no column in common are two sensors' and are merged without further ado.
// The series is not changed; the result shares its arrays where it can.
func inOrder(s Series, o Options, counts *Counts) (ordered, error) {
	rows := make([]int, len(s.Time))
	equal := false
	for i, t := range s.Time {
		rows[i] = i
		switch {
		case math.IsNaN(t) || math.IsInf(t, 0):
			return ordered{}, refuse(NoTime, i)
		case i > 0 && t < s.Time[i-1] && !o.Sort:
			return ordered{}, refuse(OutOfOrder, i)
		case i > 0 && t < s.Time[i-1]:
			counts.Reversals++
		case i > 0 && t == s.Time[i-1]:
			equal = true
		}
	}
	if counts.Reversals == 0 && !equal {
		return ordered{s, rows}, nil
	}
	slices.SortStableFunc(rows, func(a, b int) int { return compare(s.Time[a], s.Time[b]) })
	return merged(s, rows, o, counts)
}

// merged makes one row of each run of rows of one time.
func merged(s Series, rows []int, o Options, counts *Counts) (ordered, error) {
	out := ordered{Series: Series{Width: s.Width}}
	for len(rows) > 0 {
		n := 1
		for n < len(rows) && s.Time[rows[n]] == s.Time[rows[0]] {
			n++
		}
		var again int
		out.Data, again = appendMean(out.Data, s, rows[:n])
		if again > 0 && !o.Merge {
			return ordered{}, refuse(Repeated, rows[again])
		}
		counts.Duplicates += again
		out.Time, out.from = append(out.Time, s.Time[rows[0]]), append(out.from, rows[0])
		rows = rows[n:]
	}
	return out, nil
}

// appendMean appends the mean of the values present in these rows, and tells
// how many more than one there are in the column that has most.
func appendMean(dst []float64, s Series, rows []int) (mean []float64, again int) {
	for c := range s.Width {
		sum, n := 0.0, 0
		for _, row := range rows {
			if v := s.at(row, c); !math.IsNaN(v) {
				sum, n = sum+v, n+1
			}
		}
		switch n {
		case 0:
			sum = math.NaN()
		case 1: // as it is
		default:
			sum /= float64(n)
		}
		dst, again = append(dst, sum), max(again, n-1)
	}
	return dst, again
}
