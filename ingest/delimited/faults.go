package delimited

import (
	"errors"
	"fmt"
	"io"

	"strandwise/ingest/fault"
)

func (d *reader) fault(line int, channel, problem, remedy string) *fault.Error {
	return &fault.Error{File: d.in.Name, Line: line, Channel: channel, Problem: problem, Remedy: remedy}
}

// broken makes an error of the text itself a fault at the next line. It passes
// on io.EOF and what is a fault already.
func (d *reader) broken(err error) error {
	var known *fault.Error
	switch {
	case err == io.EOF || errors.As(err, &known):
		return err
	case err == errLongRow:
		return d.fault(d.line, "", fmt.Sprintf("a row is longer than %d MiB", maxRow>>20), "check that rows end in line ends and quotes are closed")
	case err == errOpenQuote || err == errAfterQuote:
		return d.fault(d.line, "", err.Error(), "repair the quotes, doubling those within a field")
	}
	return &fault.Error{File: d.in.Name, Line: d.line, Problem: "cannot be read", Err: err, Remedy: "copy or record it again"}
}

// quote shows the text of a field in a message, shortened.
func quote(text []byte) string {
	const most = 40
	s := string(text)
	if len(s) > most {
		s = s[:most] + "…"
	}
	return fmt.Sprintf("%q", s)
}
