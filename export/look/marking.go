package look

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net/http"

	"strandwise/export/marks"
)

// markAnswer is what became of a mark.
type markAnswer struct {
	N      int32      `json:"n"` // -1 for a take that is not in the set any more
	ID     string     `json:"id"`
	Mark   marks.Mark `json:"mark"`
	Marked marked     `json:"marked"`
}

// mostBody is the largest body that a request that marks may have.
const mostBody = 1 << 10

// readBody reads the JSON object of a request that marks.
func readBody(r *http.Request, into any) error {
	if r.Header.Get("Content-Type") != "application/json" {
		return fault{http.StatusUnsupportedMediaType, errors.New("a mark is a JSON object")}
	}
	data, err := io.ReadAll(io.LimitReader(r.Body, mostBody+1))
	if err == nil && len(data) > mostBody {
		err = fmt.Errorf("more than %d bytes", mostBody)
	}
	if err == nil {
		d := json.NewDecoder(bytes.NewReader(data))
		d.DisallowUnknownFields()
		err = d.Decode(into)
	}
	if err == nil && len(r.URL.RawQuery) > 0 {
		err = errors.New("a mark has no query")
	}
	if err != nil {
		return fault{http.StatusBadRequest, fmt.Errorf("the mark cannot be read: %w", err)}
	}
	return nil
}

func (s *Server) mark(r *http.Request) (any, error) {
	asked := struct {
		N    *int64 `json:"n"`
		Mark string `json:"mark"`
	}{}
	if err := readBody(r, &asked); err != nil {
		return nil, err
	}
	m, err := marks.Parse(asked.Mark)
	if err != nil {
		return nil, fault{http.StatusBadRequest, err}
	}
	if asked.N == nil || *asked.N < 0 || *asked.N >= int64(s.set.Takes()) {
		return nil, fault{http.StatusBadRequest, errors.New("the mark is of no take of the set; n is its number")}
	}
	id := s.set.takes.rows[*asked.N].id
	if err := s.log.Set(id, m); err != nil {
		return nil, err
	}
	return markAnswer{int32(*asked.N), id, m, s.marked()}, nil
}

func (s *Server) undo(r *http.Request) (any, error) {
	if err := readBody(r, &struct{}{}); err != nil {
		return nil, err
	}
	id, m, ok, err := s.log.Undo()
	if err != nil {
		return nil, err
	}
	if !ok {
		return nil, fault{http.StatusConflict, errors.New("there is no mark left to take back")}
	}
	return markAnswer{s.set.numberOf(id), id, m, s.marked()}, nil
}
