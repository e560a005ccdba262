package bids

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"strings"

	"strandwise/ingest/delimited"
	"strandwise/ingest/fault"
)

// metadata is what the JSON files of a recording state, by key.
type metadata map[string]value

// value is one value and where it is stated.
type value struct {
	json.RawMessage
	from *sidecar
}

// readMetadata reads all JSON files of a recording. It is nil when there are
// none.
func (c *recording) readMetadata() (metadata, error) {
	var m metadata
	for s, err := range c.sidecars("motion", ".json") {
		if err != nil {
			return nil, err
		}
		stated, err := s.object()
		if err != nil {
			return nil, err
		}
		if m == nil {
			m = metadata{}
		}
		for key, v := range stated {
			if _, nearer := m[key]; !nearer {
				m[key] = value{v, s}
			}
		}
	}
	return m, nil
}

// object reads a file that is one JSON object.
func (s *sidecar) object() (map[string]json.RawMessage, error) {
	s.data = bytes.TrimPrefix(s.data, []byte("\ufeff"))
	var out map[string]json.RawMessage
	err := json.Unmarshal(s.data, &out)
	if err == nil && out == nil {
		err = errors.New("it is null")
	}
	if err == nil {
		return out, nil
	}
	e := &fault.Error{File: s.file, Problem: "is not a JSON object", Err: err, Remedy: "correct it there"}
	var syntax *json.SyntaxError
	if errors.As(err, &syntax) {
		e.Line = s.line(int(syntax.Offset) - 1)
	}
	return nil, e
}

// number returns a number, and whether one is stated: n/a and null state none.
func (m metadata) number(key string) (v float64, ok bool, err error) {
	stated, ok := m[key]
	if !ok || stated.is("null") || stated.is(`"n/a"`) {
		return 0, false, nil
	}
	if err := json.Unmarshal(stated.RawMessage, &v); err != nil {
		return 0, false, m.fault(key, "which is no number", "write a number, without quotes, or \"n/a\"")
	}
	return v, true, nil
}

func (v value) is(text string) bool { return string(v.RawMessage) == text }

// fault makes a fault of a value that is stated.
func (m metadata) fault(key, problem, remedy string) *fault.Error {
	v := m[key]
	return &fault.Error{
		File: v.from.file, Line: v.from.line(bytes.Index(v.from.data, []byte(`"`+key+`"`))),
		Problem: fmt.Sprintf("states the %s %s, %s", key, v, problem), Remedy: remedy,
	}
}

// String gives the value in one line, shortened.
func (v value) String() string {
	const most = 40
	var b bytes.Buffer
	if json.Compact(&b, v.RawMessage) != nil || b.Len() <= most {
		return b.String()
	}
	return strings.ToValidUTF8(b.String()[:most], "") + "…"
}

// frequency returns a sampling frequency in Hz, 0 when none is stated.
func (m metadata) frequency(key string) (float64, error) {
	v, ok, err := m.number(key)
	if err == nil && ok && !isFrequency(v) {
		err = m.fault(key, "which is no frequency in Hz", "write how many rows there are per second, or \"n/a\"")
	}
	return v, err
}

// isFrequency tells whether a recording can have this many rows per second,
// with room to spare.
func isFrequency(v float64) bool { return v > 1e-6 && v < 1e9 }

// absence is how a recording writes that there is no value, besides n/a and
// the like.
type absence struct {
	word     string
	number   float64
	isNumber bool
}

// absence returns what MissingValues states.
func (m metadata) absence() (a absence) {
	stated := m["MissingValues"]
	if json.Unmarshal(stated.RawMessage, &a.word) != nil {
		a.word = string(stated.RawMessage)
	}
	v, missing, err := delimited.Number([]byte(a.word))
	a.number, a.isNumber = v, err == nil && !missing
	return a
}

// check compares the counts that are stated with the channels. A wrong count
// of all of them is a fault, since then a column may be missing.
func (m metadata) check(list []channel, notice func(text, evidence string)) error {
	counts, points := map[string]int{}, map[string]bool{}
	for _, ch := range list {
		counts[ch.kind]++
		if ch.point != "" {
			points[ch.point] = true
		}
	}
	n, ok, err := m.number("MotionChannelCount")
	if err != nil {
		return err
	}
	if least := len(list) - counts["LATENCY"] - counts["MISC"]; ok && (n < float64(least) || n > float64(len(list))) {
		return m.fault("MotionChannelCount", fmt.Sprintf("but %s has %d channels", list[0].file, len(list)), "correct the count, or the list of channels")
	}
	compare := func(key string, have int) {
		if n, ok, err := m.number(key); ok && err == nil && n != float64(have) {
			notice("states a "+key+" that is not the one of its channels", fmt.Sprintf("%g; they have %d", n, have))
		}
	}
	for _, kind := range kinds() {
		compare(kind+"ChannelCount", counts[kind])
	}
	compare("TrackedPointsCount", len(points))
	return nil
}
