package look

import (
	"bytes"
	"encoding/json"
	"errors"
	"net/http"
	"path/filepath"

	"strandwise/export/marks"
)

// fault is what a request asked wrongly, with the status that says so.
type fault struct {
	status int
	error
}

// answer returns a handler that answers in JSON, with {"error": …} when it fails.
func answer(do func(*http.Request) (any, error)) http.HandlerFunc {
	return func(w http.ResponseWriter, r *http.Request) {
		v, err := do(r)
		if err != nil {
			fail(w, err)
			return
		}
		sendJSON(w, http.StatusOK, v)
	}
}

// fail answers with an error in words.
func fail(w http.ResponseWriter, err error) {
	status := http.StatusInternalServerError
	var f fault
	if errors.As(err, &f) {
		status = f.status
	}
	sendJSON(w, status, map[string]string{"error": err.Error()})
}

func sendJSON(w http.ResponseWriter, status int, v any) {
	var b bytes.Buffer
	if err := json.NewEncoder(&b).Encode(v); err != nil {
		refuse(w, http.StatusInternalServerError, "The answer cannot be told: "+err.Error())
		return
	}
	w.Header().Set("Content-Type", "application/json")
	w.WriteHeader(status)
	_, _ = w.Write(b.Bytes()) // a reader who went away is no fault
}

// aboutSet is what the page needs to know before any take.
type aboutSet struct {
	Name      string        `json:"name"`
	Title     string        `json:"title"`
	Takes     int           `json:"takes"`
	Recorded  int64         `json:"recorded"`
	Synthetic int64         `json:"synthetic"`
	Labels    []counted     `json:"labels"`
	Subjects  []counted     `json:"subjects"`
	Sessions  []counted     `json:"sessions"`
	Gates     []string      `json:"gates"`
	Groups    []groupInfo   `json:"groups"`
	Channels  []channelInfo `json:"channels"`
	Cautions  []string      `json:"cautions"`
	Marked    marked        `json:"marked"`
	Secret    string        `json:"secret"`
}

// counted is a text and how many takes have it.
type counted struct {
	Text  string `json:"text"`
	Takes int32  `json:"takes"`
}

type groupInfo struct {
	Name     string `json:"name"`
	Limb     string `json:"limb"`
	Channels []int  `json:"channels"`
}

type channelInfo struct {
	Name      string `json:"name"`
	Component string `json:"component"`
	Quantity  string `json:"quantity"`
	Unit      string `json:"unit"`
}

// marked counts the marks, and those that can be taken back.
type marked struct {
	Drop int `json:"drop"`
	Keep int `json:"keep"`
	Undo int `json:"undo"`
}

func (s *Server) aboutSet(r *http.Request) (any, error) {
	if err := readKeys(r.URL.Query(), nil); err != nil {
		return nil, fault{http.StatusBadRequest, err}
	}
	x, m := s.set.takes, s.set.manifest
	out := aboutSet{
		Name: nameOf(s.set.dir), Title: m.About.Title, Takes: len(x.rows), Recorded: m.Takes("recorded"), Synthetic: m.Takes("synthetic"),
		Labels: x.labels.counted(), Subjects: x.subjects.counted(), Sessions: x.sessions.counted(),
		Gates: append([]string{}, x.gates...), Cautions: m.Cautions, Marked: s.marked(), Secret: s.guard.secret,
	}
	for _, g := range s.set.layout.Groups {
		out.Groups = append(out.Groups, groupInfo{g.Name, g.Limb, g.Channels})
	}
	for _, c := range s.set.layout.Channels {
		out.Channels = append(out.Channels, channelInfo{c.Name, c.Component, c.Quantity.Word(), c.Unit})
	}
	return out, nil
}

// nameOf returns the name of a folder, also of one given as ".".
func nameOf(dir string) string {
	whole, err := filepath.Abs(dir)
	if err != nil {
		return dir
	}
	return filepath.Base(whole)
}

func (n *names) counted() []counted {
	out := make([]counted, len(n.texts))
	for i, t := range n.texts {
		out[i] = counted{t, n.takes[i]}
	}
	return out
}

func (s *Server) marked() marked {
	out := marked{Undo: s.log.Undoable()}
	for _, m := range s.log.All() {
		if m == marks.Drop {
			out.Drop++
		} else {
			out.Keep++
		}
	}
	return out
}
