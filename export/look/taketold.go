package look

import (
	"errors"
	"net/http"
	"net/url"
	"slices"
	"strings"

	"strandwise/export/marks"
)

// listed is one take in a list.
type listed struct {
	N       int32      `json:"n"`
	ID      string     `json:"id"`
	Label   string     `json:"label"`
	Subject string     `json:"subject"`
	Origin  string     `json:"origin"`
	Rank    int32      `json:"rank"`
	Gate    *float32   `json:"gate"` // of the query's gate; null without one
	Mark    marks.Mark `json:"mark"`
}

type takesList struct {
	Total int      `json:"total"`
	From  int      `json:"from"`
	Takes []listed `json:"takes"`
}

func (s *Server) listTakes(r *http.Request) (any, error) {
	q, err := s.set.parseQuery(r.URL.Query())
	if err != nil {
		return nil, fault{http.StatusBadRequest, err}
	}
	all := s.log.All()
	found := s.set.find(q, all)
	out := takesList{Total: len(found), From: min(q.from, len(found)), Takes: []listed{}}
	for _, n := range found[out.From:min(out.From+q.count, len(found))] {
		out.Takes = append(out.Takes, s.set.listed(n, q.gate, all))
	}
	return out, nil
}

func (s *Set) listed(n int32, gate int, all map[string]marks.Mark) listed {
	r := &s.takes.rows[n]
	out := listed{
		N: n, ID: r.id, Label: s.takes.labels.texts[r.label], Subject: s.takes.subjects.texts[r.subject],
		Origin: r.origin(), Rank: r.rank, Mark: marks.None,
	}
	if m, ok := all[r.id]; ok {
		out.Mark = m
	}
	if gate >= 0 {
		out.Gate = number(s.takes.values[gate][n])
	}
	return out
}

// number returns a value that JSON can hold, nil for one that it cannot.
func number(v float32) *float32 {
	if v-v != 0 {
		return nil
	}
	return &v
}

func (r *row) origin() string {
	if r.synthetic {
		return "synthetic"
	}
	return "recorded"
}

// aboutTake is what the page shows of a take beside its signals.
type aboutTake struct {
	listed
	Session    string      `json:"session"`
	Split      string      `json:"split"`
	Source     int32       `json:"source"`    // number of the source take, -1 for none in the set
	SourceID   string      `json:"source_id"` // empty for a recorded take
	Made       int         `json:"made"`      // takes made from it
	Draw       int32       `json:"draw"`
	Method     string      `json:"method"`
	Parameters []parameter `json:"parameters"`
	Gates      []parameter `json:"gates"`
	Frames     int32       `json:"frames"`
	Rate       *float32    `json:"rate_hz"`
	Step       int         `json:"step"` // every step-th frame is sent
	Figure     *figure     `json:"figure"`
}

type parameter struct {
	Name  string  `json:"name"`
	Value float64 `json:"value"`
}

func (s *Server) aboutTake(r *http.Request) (any, error) {
	n, err := s.set.takeOf(r.URL.Query())
	if err != nil {
		return nil, err
	}
	row := &s.set.takes.rows[n]
	m, err := s.set.making(row)
	if err != nil {
		return nil, err
	}
	f, err := s.set.figureOf(n)
	if err != nil {
		return nil, err
	}
	out := aboutTake{
		listed: s.set.listed(n, -1, s.log.All()), Session: s.set.takes.sessions.texts[row.session], Split: "train",
		Source: row.source, SourceID: m.source, Made: len(s.set.takes.made[n]), Draw: row.draw, Method: m.method,
		Parameters: []parameter{}, Gates: []parameter{}, Frames: row.frames, Rate: number(row.rate), Step: s.set.step(row), Figure: f,
	}
	if row.test {
		out.Split = "test"
	}
	for name, v := range m.parameters {
		if gate, ok := strings.CutPrefix(name, gatePrefix); ok {
			out.Gates = append(out.Gates, parameter{gate, v})
		} else {
			out.Parameters = append(out.Parameters, parameter{name, v})
		}
	}
	byName := func(a, b parameter) int { return strings.Compare(a.Name, b.Name) }
	slices.SortFunc(out.Parameters, byName)
	slices.SortFunc(out.Gates, byName)
	return out, nil
}

// takeOf reads the number of the take that a query asks for.
func (s *Set) takeOf(v url.Values) (int32, error) {
	n := -1
	err := readKeys(v, map[string]func(string) error{"n": func(text string) (err error) {
		n, err = parseNumber(text, len(s.takes.rows)-1)
		return err
	}})
	if err == nil && n < 0 {
		err = errors.New("the query names no take; n is its number")
	}
	if err != nil {
		return 0, fault{http.StatusBadRequest, err}
	}
	return int32(n), nil
}

// sendMotion sends the signals of a take: its clock and then each channel, as
// many little-endian 32-bit floats as frames are sent.
func (s *Server) sendMotion(w http.ResponseWriter, r *http.Request) {
	n, err := s.set.takeOf(r.URL.Query())
	if err != nil {
		fail(w, err)
		return
	}
	row := &s.set.takes.rows[n]
	m, err := s.set.motion(row)
	if err != nil {
		fail(w, err)
		return
	}
	if step := s.set.step(row); step > 1 {
		m = m.thin(step)
	}
	w.Header().Set("Content-Type", "application/octet-stream")
	_, _ = w.Write(m.encode()) // a reader who went away is no fault
}

// numberOf returns the number of the take of an id, -1 when there is none.
func (s *Set) numberOf(id string) int32 {
	return int32(slices.IndexFunc(s.takes.rows, func(r row) bool { return r.id == id }))
}
