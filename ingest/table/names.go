package table

import (
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"
)

// keys are the columns of identity, as [raw.Identity.Field] knows them.
var keys = []string{"take", "label", "subject", "session", "split"}

// Keys lists the names of the columns that state identity: take, label,
// subject, session and split.
func Keys() []string { return slices.Clone(keys) }

// Key returns which identity a column of this name states, upper and lower
// case apart, and empty when it states none.
func Key(name string) string {
	for _, key := range keys {
		if strings.EqualFold(key, name) {
			return key
		}
	}
	return ""
}

var timeWords = []string{"time", "t", "timestamp", "elapsed"}

// timeUnits maps the spellings of a time unit to the unit.
var timeUnits = map[string]string{
	"s": "s", "sec": "s", "secs": "s", "second": "s", "seconds": "s",
	"ms": "ms", "msec": "ms", "millis": "ms", "millisecond": "ms", "milliseconds": "ms",
	"us": "us", "µs": "us", "μs": "us", "usec": "us", "micros": "us", "microsecond": "us", "microseconds": "us",
	"ns": "ns", "nsec": "ns", "nanos": "ns", "nanosecond": "ns", "nanoseconds": "ns",
}

// TimeUnit returns the unit of time, s, ms, us or ns, that a text spells:
// "s" for "Seconds".
func TimeUnit(text string) (unit string, ok bool) {
	unit, ok = timeUnits[strings.ToLower(strings.TrimSpace(text))]
	return unit, ok
}

// IsTime tells whether a column of this name holds time, and the unit the name
// states, if any: "time", "t_ms", "timestamp [us]", "Time (s)".
func IsTime(name string) (unit string, ok bool) {
	words := strings.FieldsFunc(strings.ToLower(name), func(r rune) bool {
		return strings.ContainsRune("_ .[]()", r)
	})
	switch {
	case len(words) == 0 || len(words) > 2 || !slices.Contains(timeWords, words[0]):
		return "", false
	case len(words) == 1:
		return "", true
	}
	return TimeUnit(words[1])
}

// IsFrame tells whether a column of this name numbers the frames.
func IsFrame(name string) bool {
	switch strings.ToLower(name) {
	case "frame", "frame_index", "index":
		return true
	}
	return false
}

// Unclean says what makes a text unfit as a name, empty when nothing does.
func Unclean(text string) string {
	switch {
	case !utf8.ValidString(text):
		return "is not valid UTF-8"
	case strings.ContainsFunc(text, unicode.IsControl):
		return "holds control characters"
	}
	return ""
}
