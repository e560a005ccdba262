package clock

import (
	"math"
	"slices"
)

// Sensor is a set of columns that were sampled together, and the rows they
// were sampled in.
type Sensor struct {
	Columns []int // ascending
	Rows    []int // ascending; those in which at least one of the columns has a value
}

// Rows lists the rows in which at least one of the columns has a value.
func Rows(data []float64, width int, columns []int) []int {
	var rows []int
	for row := 0; (row+1)*width <= len(data) && width > 0; row++ {
		if slices.ContainsFunc(columns, func(c int) bool { return !math.IsNaN(data[row*width+c]) }) {
			rows = append(rows, row)
		}
	}
	return rows
}

// At returns the times of these rows.
func At(time []float64, rows []int) []float64 {
	out := make([]float64, len(rows))
	for i, row := range rows {
		out[i] = time[row]
	}
	return out
}

// Two columns are of one sensor when their median steps differ by no more than
// a quarter and the rows of the one with fewer values lie, but for a tenth,
// among the rows of the sensor. So a marker that is often out of sight stays
// with the others, and a slower sensor logged in every fourth row does not.
const (
	sameStep = 0.25
	sameRows = 0.9
)

// Sensors partitions the columns of a recording by how they were sampled, in
// the order of their first columns. A column without any value is in none of
// them. Time is in seconds, one per row.
func Sensors(time, data []float64, width int) []Sensor {
	if !slices.ContainsFunc(data, math.IsNaN) {
		return whole(len(time), width)
	}
	columns := make([]column, width)
	for c := range columns {
		columns[c] = presence(time, data, width, c)
	}
	slices.SortStableFunc(columns, func(a, b column) int { return len(b.rows) - len(a.rows) })
	var found []cluster
	for _, c := range columns {
		if len(c.rows) == 0 {
			continue
		}
		i := slices.IndexFunc(found, func(s cluster) bool { return s.holds(c) })
		if i < 0 {
			i, found = len(found), append(found, cluster{step: c.step, present: make([]bool, len(time))})
		}
		found[i].add(c)
	}
	out := make([]Sensor, len(found))
	for i, s := range found {
		out[i] = s.sensor()
	}
	slices.SortFunc(out, func(a, b Sensor) int { return a.Columns[0] - b.Columns[0] })
	return out
}

// whole is the one sensor of a recording without missing values.
func whole(rows, width int) []Sensor {
	if rows == 0 || width == 0 {
		return nil
	}
	s := Sensor{Columns: make([]int, width), Rows: make([]int, rows)}
	for i := range s.Columns {
		s.Columns[i] = i
	}
	for i := range s.Rows {
		s.Rows[i] = i
	}
	return []Sensor{s}
}

// column is the rows in which one column has a value, and the median step
// between them.
type column struct {
	index int
	rows  []int
	step  float64
}

func presence(time, data []float64, width, index int) column {
	c := column{index: index, rows: Rows(data, width, []int{index})}
	var steps []float64
	for i := 1; i < len(c.rows); i++ {
		if s := time[c.rows[i]] - time[c.rows[i-1]]; s > 0 {
			steps = append(steps, s)
		}
	}
	slices.Sort(steps)
	c.step = quantile(steps, 0.5)
	return c
}

// cluster is a sensor while it is found.
type cluster struct {
	columns []int
	step    float64
	present []bool // by row
}

// holds tells whether a column was sampled with this sensor. Fewer than three
// values have no step to speak of.
func (s *cluster) holds(c column) bool {
	if len(c.rows) > 2 && math.Abs(c.step-s.step) > sameStep*s.step {
		return false
	}
	n := 0
	for _, row := range c.rows {
		if s.present[row] {
			n++
		}
	}
	return float64(n) >= sameRows*float64(len(c.rows))
}

func (s *cluster) add(c column) {
	s.columns = append(s.columns, c.index)
	for _, row := range c.rows {
		s.present[row] = true
	}
}

func (s *cluster) sensor() Sensor {
	slices.Sort(s.columns)
	out := Sensor{Columns: s.columns}
	for row, here := range s.present {
		if here {
			out.Rows = append(out.Rows, row)
		}
	}
	return out
}
