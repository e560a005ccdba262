package ingest

import (
	"fmt"
	"maps"
	"slices"
)

// notices collects what the user should know, one line for each kind of thing
// however many files it concerns.
type notices struct {
	order []string
	of    map[string]*notice
}

type notice struct {
	file     string // the first one
	evidence string // in it
	files    map[string]bool
}

func (n *notices) add(file, text, evidence string) {
	if n.of == nil {
		n.of = map[string]*notice{}
	}
	x, ok := n.of[text]
	if !ok {
		x = &notice{file, evidence, map[string]bool{}}
		n.of[text] = x
		n.order = append(n.order, text)
	}
	x.files[file] = true
}

// lines returns the notices in the order they came up.
func (n *notices) lines() []string {
	out := make([]string, len(n.order))
	for i, text := range n.order {
		x := n.of[text]
		out[i] = x.file
		if more := len(x.files) - 1; more > 0 {
			out[i] = fmt.Sprintf("%s and %d more", x.file, more)
		}
		out[i] += ": " + text
		if x.evidence != "" {
			out[i] += " (" + x.evidence + ")"
		}
	}
	return out
}

// clone returns a copy to add more to.
func (n *notices) clone() notices {
	out := notices{order: slices.Clone(n.order), of: map[string]*notice{}}
	for text, x := range n.of {
		out.of[text] = &notice{x.file, x.evidence, maps.Clone(x.files)}
	}
	return out
}
