package export

import (
	"bytes"
	"crypto/hmac"
	"crypto/sha256"
	"encoding/base32"
	"encoding/json"
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"strandwise/channels"
)

// minSalt is the shortest salt that is taken.
const minSalt = 16

// Hider replaces the names of people in whatever goes into a set: subjects, the
// ids and sessions of takes, paths of recordings, the plan and attached files. A
// name becomes the first 60 bits of its HMAC-SHA-256 (RFC 2104) under a salt that
// the user keeps, so the same name has the same replacement in all sets of one
// salt, and none that says anything without it.
//
// What it protects: from a set alone nobody learns a name, nor can try a list of
// names, as long as the salt is secret and not to be guessed. What it does not: whoever has the salt can
// try names; labels are kept as they are, and so is the content of recordings,
// whose SHA-256 stands in the manifest; and people can be told by the way they
// move, whatever they are called. These are pseudonyms, not anonymity.
type Hider struct {
	salt  []byte
	whole map[string]string   // replacement of every name: of people, and of what was named after them
	words map[string][]string // the names that begin with a word, in lower case, the longest first
}

// NewHider returns a hider with this salt, of which white space at both ends is
// no part.
func NewHider(salt []byte) (*Hider, error) {
	salt = []byte(strings.TrimSpace(string(salt)))
	if len(salt) < minSalt {
		return nil, fmt.Errorf("a salt of %d bytes can be guessed; make one of %d random ones or more", len(salt), minSalt)
	}
	return &Hider{salt: salt, whole: map[string]string{}, words: map[string][]string{}}, nil
}

// Check returns a few bits that tell sets of another salt apart.
func (h *Hider) Check() string { return h.hash("check", "")[:6] }

// hash returns the replacement of a text used in one way.
func (h *Hider) hash(use, text string) string {
	mac := hmac.New(sha256.New, h.salt)
	fmt.Fprintf(mac, "%s\x00%s", use, text)
	return strings.ToLower(base32.StdEncoding.EncodeToString(mac.Sum(nil)[:10])[:12])
}

// Know remembers the names in a recorded take, so that [Hider.Text] finds them
// wherever they stand. Every recorded take must be known before the first text
// is hidden.
func (h *Hider) Know(t *channels.Take) {
	h.remember(t.Subject, h.subject(t.Subject))
	if named(t.Session, t.Subject) {
		h.remember(t.Session, h.session(t.Session, t.Subject))
	}
}

// KnowFile remembers the path of a recording, of which nothing is kept, and
// returns what stands for it.
func (h *Hider) KnowFile(path string) string {
	replacement := "recording-" + h.hash("file", path)
	h.remember(path, replacement)
	h.remember(filepath.Base(path), replacement)
	return replacement
}

func (h *Hider) remember(name, replacement string) {
	if _, known := h.whole[name]; known || name == "" {
		return
	}
	h.whole[name] = replacement
	name = strings.TrimLeftFunc(name, func(r rune) bool { return !inWord(r) })
	if name == "" {
		return // it stands only where it is the whole text
	}
	h.whole[name] = replacement
	word := strings.ToLower(firstWord(name))
	h.words[word] = append(h.words[word], name)
	slices.SortStableFunc(h.words[word], func(a, b string) int { return len(b) - len(a) })
}

// Take returns a copy of a take, recorded or synthetic, without names: the
// subject, the whole id, which often has a name in it, and a session named after
// the subject. It shares the samples.
func (h *Hider) Take(t *channels.Take) *channels.Take {
	out := *t
	out.ID, out.Subject, out.Session = h.id(t.ID), h.subject(t.Subject), h.session(t.Session, t.Subject)
	if m := t.Made; m != nil {
		made := *m
		made.Source = h.id(m.Source)
		out.Made = &made
		// The id of a synthetic take is that of its source and something more.
		if more, ok := strings.CutPrefix(t.ID, m.Source); ok && more != "" {
			out.ID = made.Source + more
		}
	}
	return &out
}

func (h *Hider) subject(name string) string {
	if name == "" {
		return ""
	}
	return "person-" + h.hash("subject", name)
}

func (h *Hider) id(id string) string { return "take-" + h.hash("take", id) }

func (h *Hider) session(session, subject string) string {
	if !named(session, subject) {
		return session
	}
	return "session-" + h.hash("session", session)
}

// named reports whether a text has a name in it, upper and lower case apart.
func named(text, name string) bool {
	return name != "" && strings.Contains(strings.ToLower(text), strings.ToLower(name))
}

// Text replaces every name known that stands in a text as a word of its own: with
// no letter or digit before or behind it, in upper or lower case. Names without a
// letter, such as 7, are replaced only as the whole text or in quotation marks,
// because as numbers they stand for much else.
func (h *Hider) Text(text string) string {
	if replacement, ok := h.whole[text]; ok {
		return replacement
	}
	var b strings.Builder
	before := rune(0)
	for rest := text; rest != ""; {
		if n, replacement := h.match(rest, before); n > 0 {
			b.WriteString(replacement)
			before, rest = 'x', rest[n:] // a replacement ends in a letter or digit
			continue
		}
		r, n := utf8.DecodeRuneInString(rest)
		b.WriteString(rest[:n])
		before, rest = r, rest[n:]
	}
	return b.String()
}

// match returns the length of the longest name at the start of a text, and what
// stands for it; before is the character in front.
func (h *Hider) match(text string, before rune) (n int, replacement string) {
	if inWord(before) {
		return 0, ""
	}
	for _, name := range h.words[strings.ToLower(firstWord(text))] {
		if len(text) < len(name) || !strings.EqualFold(text[:len(name)], name) {
			continue
		}
		after, _ := utf8.DecodeRuneInString(text[len(name):])
		if len(text) > len(name) && inWord(after) {
			continue
		}
		if strings.IndexFunc(name, unicode.IsLetter) >= 0 || before == '"' && after == '"' {
			return len(name), h.whole[name]
		}
	}
	return 0, ""
}

// firstWord returns the letters and digits that a text begins with.
func firstWord(text string) string {
	if end := strings.IndexFunc(text, func(r rune) bool { return !inWord(r) }); end >= 0 {
		return text[:end]
	}
	return text
}

func inWord(r rune) bool { return unicode.IsLetter(r) || unicode.IsDigit(r) }

// JSON replaces the names in every string of a JSON value, keys included, and
// leaves all else as it stands.
func (h *Hider) JSON(data json.RawMessage) json.RawMessage {
	var out []byte
	for len(data) > 0 {
		from := bytes.IndexByte(data, '"')
		if from < 0 {
			break
		}
		end := stringEnd(data, from)
		out = append(out, data[:from]...)
		out = append(out, h.literal(data[from:end])...)
		data = data[end:]
	}
	return append(out, data...)
}

// stringEnd returns where the JSON string that begins at a place ends.
func stringEnd(data []byte, from int) int {
	for i := from + 1; i < len(data); i++ {
		switch data[i] {
		case '\\':
			i++
		case '"':
			return i + 1
		}
	}
	return len(data)
}

// literal replaces names in one JSON string.
func (h *Hider) literal(text []byte) []byte {
	var s string
	if json.Unmarshal(text, &s) != nil {
		return text
	}
	hidden := h.Text(s)
	if hidden == s {
		return text
	}
	return appendEscaped(nil, hidden)
}
