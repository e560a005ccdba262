// Package fault is the error every reader reports of a recording: what is
// wrong, where, and what to do about it.
package fault

import (
	"fmt"
	"strings"
)

// Error is one fault of a recording. Empty parts are left out of its text.
type Error struct {
	File    string // as the user named it; "-" is standard input
	Line    int    // 1-based line of a text file, 0 when unknown
	Offset  int64  // byte offset in a binary file, 0 when unknown
	Channel string
	Take    string
	Problem string // what is wrong, in lower case, without a full stop
	Remedy  string // what to do about it
	Err     error  // the cause, if any
}

// Error gives the fault in one line:
//
//	file:line: take T: channel C: problem: cause; remedy
func (e *Error) Error() string {
	var b strings.Builder
	b.WriteString(e.File)
	switch {
	case e.Line > 0:
		fmt.Fprintf(&b, ":%d", e.Line)
	case e.Offset > 0:
		fmt.Fprintf(&b, ": byte %d", e.Offset)
	}
	b.WriteString(": ")
	if e.Take != "" {
		fmt.Fprintf(&b, "take %s: ", e.Take)
	}
	if e.Channel != "" {
		fmt.Fprintf(&b, "channel %s: ", e.Channel)
	}
	b.WriteString(e.Problem)
	if e.Err != nil {
		fmt.Fprintf(&b, ": %v", e.Err)
	}
	if e.Remedy != "" {
		fmt.Fprintf(&b, "; %s", e.Remedy)
	}
	return b.String()
}

// Unwrap returns the cause.
func (e *Error) Unwrap() error { return e.Err }
