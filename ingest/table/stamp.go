package table

import "time"

// Stamp reads a date and time of day as whole seconds and the fraction of a
// second since 1970. It takes RFC 3339, a space in place of the T, and a stamp
// without an offset, whose time is taken as it stands.
func Stamp(text string) (whole int64, fraction float64, ok bool) {
	if len(text) < len("2006-01-02T15:04:05") || text[4] != '-' {
		return 0, 0, false
	}
	if text[10] == ' ' {
		text = text[:10] + "T" + text[11:]
	}
	t, err := time.Parse(time.RFC3339Nano, text)
	if err != nil {
		t, err = time.Parse("2006-01-02T15:04:05.999999999", text)
	}
	return t.Unix(), float64(t.Nanosecond()) / 1e9, err == nil
}
