package classify

import (
	"strandwise/channels"
	"strandwise/classify/template"
)

// table counts the cells a plain program fills to hold one template against
// the takes of a lesson.
type table struct {
	metric  template.Metric
	tables  int         // filled for each pair of takes
	lengths map[int]int // takes to recognise, by their number of frames
	fixed   int         // frame pairs compared where lengths do not matter; 0 for DTW
}

func newTable(m template.Metric, l Lesson) table {
	t := table{metric: m, tables: 1, lengths: make(map[int]int)}
	for _, take := range l.Test {
		t.lengths[take.Frames()]++
	}
	groups, width := weighted(m, l.Training[0].Layout)
	switch m.Distance {
	case template.DTWDependent:
		t.tables = groups
	case template.DTWIndependent:
		t.tables = width
	case template.DirectionCosine:
		if len(m.Weights) == 0 {
			groups = max(1, len(l.Training[0].Layout.Groups))
		}
		t.fixed = directionSteps * groups
	default:
		for _, take := range l.Training {
			t.fixed = max(t.fixed, take.Frames())
		}
	}
	return t
}

// weighted returns the numbers of groups and channels that weigh anything.
// Without weights all channels are one group.
func weighted(m template.Metric, l *channels.Layout) (groups, width int) {
	if len(m.Weights) == 0 {
		return 1, len(l.Channels)
	}
	for _, g := range l.Groups {
		if w, ok := m.Weights[g.Name]; !ok || w > 0 {
			groups++
			width += len(g.Channels)
		}
	}
	return groups, width
}

// directionSteps is the number of steps the direction cosine cuts a path into.
const directionSteps = 16

// cells returns the cells filled for a template of n frames.
func (t table) cells(n int) int64 {
	sum := int64(0)
	for m, takes := range t.lengths {
		cells := t.fixed
		if cells == 0 {
			cells = t.tables * band(n, m, t.metric.HalfWidth(n, m))
		}
		sum += int64(cells) * int64(takes)
	}
	return sum
}

// band returns the number of cells of a table of n × m that are at most h from
// the diagonal.
func band(n, m, h int) int { return n*m - beyond(n, m-1-h) - beyond(m, n-1-h) }

// beyond returns how many cells of n rows lie beyond the band: a in the first
// row, and one less in each row after.
func beyond(n, a int) int {
	if a <= 0 {
		return 0
	}
	rows := min(n, a)
	return rows*a - rows*(rows-1)/2
}
