package look

import (
	"cmp"
	"fmt"
	"math"
	"net/url"
	"slices"
	"strconv"
	"strings"

	"strandwise/export/marks"
)

// order says in which order takes are listed.
type order string

const (
	inSet       order = "set"  // as they stand in the set
	byRank      order = "rank" // the most useful draw of every source first
	byLabel     order = "label"
	bySubject   order = "subject"
	highestGate order = "high" // the highest value of a gate first, takes without one last
	lowestGate  order = "low"
)

func orders() []order { return []order{inSet, byRank, byLabel, bySubject, highestGate, lowestGate} }

// query says which takes are listed. A number of -1 stands for any.
type query struct {
	label, subject, session int
	source                  int    // number of a take: it, and those made from it
	split, origin           string // empty for any
	mark                    string // "", or a mark, or "marked" for drop or keep
	holds                   string // a text in the id, label, subject or session
	gate                    int    // that the order goes by, and whose values are shown
	order                   order
	from, count             int // the part of the list that is wanted
}

// pageTakes is the number of takes on a page, and mostTakes the largest that
// may be asked for.
const (
	pageTakes = 50
	mostTakes = 200
	longest   = 400 // bytes of the text that takes are searched for
)

// parseQuery reads a query. The error lists what would be legal.
func (s *Set) parseQuery(v url.Values) (query, error) {
	q := query{label: -1, subject: -1, session: -1, source: -1, gate: -1, order: inSet, count: pageTakes}
	x := s.takes
	number := func(dst *int, most int) func(string) error {
		return func(text string) (err error) { *dst, err = parseNumber(text, most); return err }
	}
	choice := func(dst *string, legal ...string) func(string) error {
		return func(text string) error {
			if !slices.Contains(legal, text) {
				return fmt.Errorf("legal are %s", strings.Join(legal, ", "))
			}
			*dst = text
			return nil
		}
	}
	return q, readKeys(v, map[string]func(string) error{
		"label":   number(&q.label, len(x.labels.texts)-1),
		"subject": number(&q.subject, len(x.subjects.texts)-1),
		"session": number(&q.session, len(x.sessions.texts)-1),
		"source":  number(&q.source, len(x.rows)-1),
		"gate":    number(&q.gate, len(x.gates)-1),
		"from":    number(&q.from, math.MaxInt32),
		"count":   number(&q.count, mostTakes),
		"split":   choice(&q.split, "train", "test"),
		"origin":  choice(&q.origin, "recorded", "synthetic"),
		"mark":    choice(&q.mark, string(marks.Drop), string(marks.Keep), string(marks.None), "marked"),
		"holds": func(text string) error {
			if len(text) > longest {
				return fmt.Errorf("at most %d bytes are searched for", longest)
			}
			q.holds = strings.ToLower(text)
			return nil
		},
		"order": func(text string) error {
			if !slices.Contains(orders(), order(text)) {
				return fmt.Errorf("legal are %v", orders())
			}
			q.order = order(text)
			return nil
		},
	})
}

// readKeys reads each key of a query once, by what reads it.
func readKeys(v url.Values, read map[string]func(string) error) error {
	for key, texts := range v {
		do, ok := read[key]
		if !ok || len(texts) != 1 {
			return fmt.Errorf("the query names %.40q, which there is not, or twice", key)
		}
		if texts[0] == "" {
			continue
		}
		if err := do(texts[0]); err != nil {
			return fmt.Errorf("%s=%.40q: %w", key, texts[0], err)
		}
	}
	return nil
}

// parseNumber reads a whole number from 0 to most, in plain digits.
func parseNumber(text string, most int) (int, error) {
	n, err := strconv.ParseUint(text, 10, 31)
	if err != nil || int(n) > most || strconv.FormatUint(n, 10) != text {
		return 0, fmt.Errorf("legal are whole numbers from 0 to %d", most)
	}
	return int(n), nil
}

// find returns the numbers of the takes that a query asks for, all of them, in
// its order.
func (s *Set) find(q query, marked map[string]marks.Mark) []int32 {
	x := s.takes
	labels, subjects, sessions := x.labels.holding(q.holds), x.subjects.holding(q.holds), x.sessions.holding(q.holds)
	var out []int32
	for n := range x.rows {
		r := &x.rows[n]
		if !q.wants(int32(n), r) || !q.wantsMark(marked[r.id]) {
			continue
		}
		if q.holds == "" || labels[r.label] || subjects[r.subject] || sessions[r.session] || strings.Contains(strings.ToLower(r.id), q.holds) {
			out = append(out, int32(n))
		}
	}
	x.sort(out, q)
	return out
}

// wants tells whether a query asks for a take, but for its mark and its texts.
func (q *query) wants(n int32, r *row) bool {
	return (q.label < 0 || int(r.label) == q.label) &&
		(q.subject < 0 || int(r.subject) == q.subject) &&
		(q.session < 0 || int(r.session) == q.session) &&
		(q.source < 0 || int(r.source) == q.source || int(n) == q.source) &&
		(q.split == "" || r.test == (q.split == "test")) &&
		(q.origin == "" || r.synthetic == (q.origin == "synthetic"))
}

// wantsMark tells whether a query asks for takes of a mark, empty for none.
func (q *query) wantsMark(m marks.Mark) bool {
	switch q.mark {
	case "":
		return true
	case "marked":
		return m != ""
	case string(marks.None):
		return m == ""
	}
	return string(m) == q.mark
}

// holding tells which texts hold another, in lower case.
func (n *names) holding(text string) []bool {
	out := make([]bool, len(n.texts))
	for i, t := range n.texts {
		out[i] = text != "" && strings.Contains(strings.ToLower(t), text)
	}
	return out
}

// sort brings takes into the order of a query; those that are alike stay in the
// order of the set.
func (x *index) sort(list []int32, q query) {
	text := func(n *names, of func(*row) uint32) func(a, b int32) int {
		return func(a, b int32) int { return cmp.Compare(n.texts[of(&x.rows[a])], n.texts[of(&x.rows[b])]) }
	}
	switch q.order {
	case byRank:
		slices.SortStableFunc(list, func(a, b int32) int { return cmp.Compare(x.rows[a].rank, x.rows[b].rank) })
	case byLabel:
		slices.SortStableFunc(list, text(&x.labels, func(r *row) uint32 { return r.label }))
	case bySubject:
		slices.SortStableFunc(list, text(&x.subjects, func(r *row) uint32 { return r.subject }))
	case highestGate, lowestGate:
		if q.gate < 0 {
			return
		}
		values, sign := x.values[q.gate], 1
		if q.order == highestGate {
			sign = -1
		}
		slices.SortStableFunc(list, func(a, b int32) int {
			if na, nb := values[a] != values[a], values[b] != values[b]; na || nb {
				return boolCompare(na, nb)
			}
			return sign * cmp.Compare(values[a], values[b])
		})
	}
}

// boolCompare puts false before true.
func boolCompare(a, b bool) int {
	switch {
	case a == b:
		return 0
	case a:
		return 1
	}
	return -1
}
