package classify

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"strandwise/channels"
)

// Protocol says which takes train and which are tested.
type Protocol string

// The protocols. Auto is Given when any take is of the test split, else
// Subject when there are three subjects or more, else Pooled.
const (
	Auto    Protocol = ""
	Given   Protocol = "given"   // the split the recordings state; takes that state none train
	Subject Protocol = "subject" // each subject in turn is tested, or a share of them at a time; the others train
	Session Protocol = "session" // the same with sessions
	Pooled  Protocol = "pooled"  // some takes of each label, drawn at random, train; the rest are tested
)

// Protocols lists the protocols that can be named.
func Protocols() []Protocol { return []Protocol{Given, Subject, Session, Pooled} }

// ParseProtocol reads the name of a protocol; an empty text is Auto. The error
// lists the legal names.
func ParseProtocol(text string) (Protocol, error) {
	names := make([]string, 0, len(Protocols()))
	for _, p := range append(Protocols(), Auto) {
		if text == string(p) {
			return p, nil
		}
		names = append(names, string(p))
	}
	return Auto, fmt.Errorf("unknown protocol %q; legal protocols are %s", text, strings.Join(names[:len(names)-1], ", "))
}

// protocol returns the protocol to use for the takes.
func (o Options) protocol(takes []*channels.Take) Protocol {
	if o.Protocol != Auto {
		return o.Protocol
	}
	if slices.ContainsFunc(takes, func(t *channels.Take) bool { return t.Split == channels.Test }) {
		return Given
	}
	all := !slices.ContainsFunc(takes, func(t *channels.Take) bool { return t.Subject == "" })
	if all && len(distinct(takes, subjectOf)) >= 3 {
		return Subject
	}
	return Pooled
}

// folds returns the splits of the protocol, which is not Auto, repeat by
// repeat, so that a score that is interrupted has something of everything.
func (o Options) folds(takes []*channels.Take) ([]fold, error) {
	switch o.Protocol {
	case Pooled:
		if o.TestShare > 0 {
			return nil, errors.New("protocol pooled keeps no one apart: a share to test goes with protocols subject and session")
		}
		return o.pooled(takes)
	case Given:
		if len(o.TakesPerLabel) > 0 || o.Repeats > 0 || o.TestShare > 0 {
			return nil, errors.New("protocol given draws nothing at random: training takes per label, repeats and a share to test go with the other protocols")
		}
		return givenFold(takes)
	case Session:
		return o.leaveOut(takes, "session", sessionOf)
	}
	return o.leaveOut(takes, "subject", subjectOf)
}

func labelOf(t *channels.Take) string   { return t.Label }
func subjectOf(t *channels.Take) string { return t.Subject }
func sessionOf(t *channels.Take) string { return t.Session }

// distinct returns the different values of a property, sorted.
func distinct(takes []*channels.Take, property func(*channels.Take) string) []string {
	values := make([]string, len(takes))
	for i, t := range takes {
		values[i] = property(t)
	}
	slices.Sort(values)
	return slices.Compact(values)
}

// from says where a take comes from, for messages.
func from(t *channels.Take) string {
	if t.Where == "" {
		return ""
	}
	return " (" + t.Where + ")"
}
