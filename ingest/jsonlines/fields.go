package jsonlines

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
)

// kind is what a value of JSON is.
type kind byte

const (
	number kind = iota
	text        // within quotes
	truth       // true or false
	null        // null, or NaN, which is no JSON but written by some programs
	list        // of values
	nested      // a list that holds lists or objects
)

// token is a value that is neither object nor list, where it stands in an
// object. Quotes count.
type token struct {
	kind     kind
	from, to int
}

// field is one named value of an object, those of objects within it included.
type field struct {
	name  string // parts joined by dots
	token        // of a list all of it
	first int    // of a list: its elements, in parser.elements
	count int
}

// parser lists the fields of an object.
type parser struct {
	object   []byte
	fields   []field
	elements []token
	seen     map[string]bool
}

// maxDepth is how deep objects may stand within each other.
const maxDepth = 32

var errDeep = fmt.Errorf("holds objects more than %d deep within each other", maxDepth)

// parse lists the fields of an object, valid until the next call.
func (p *parser) parse(object []byte) error {
	if err := check(object); err != nil {
		return err
	}
	p.object, p.fields, p.elements = object, p.fields[:0], p.elements[:0]
	if p.seen == nil {
		p.seen = map[string]bool{}
	}
	clear(p.seen)
	_, err := p.members(0, "", 0)
	return err
}

// check reports what makes an object unsound. NaN is let pass.
func check(object []byte) error {
	if json.Valid(object) || bytes.Contains(object, nan) && json.Valid(withoutNaN(object)) {
		return nil
	}
	var value any
	if err := json.Unmarshal(object, &value); err != nil {
		return err
	}
	return errors.New("is no JSON")
}

var nan = []byte("NaN")

// withoutNaN returns a copy in which every NaN that stands for a value is a
// number of the same length.
func withoutNaN(object []byte) []byte {
	out := bytes.Clone(object)
	quoted := false
	for i := 0; i < len(out); i++ {
		switch c := out[i]; {
		case c == '\\' && quoted:
			i++
		case c == '"':
			quoted = !quoted
		case !quoted && bytes.HasPrefix(out[i:], nan) && i > 0 && i+len(nan) < len(out) &&
			bytes.IndexByte([]byte(":,[- \t\r\n"), out[i-1]) >= 0 && bytes.IndexByte([]byte(",]} \t\r\n"), out[i+len(nan)]) >= 0:
			copy(out[i:], "0.0")
		}
	}
	return out
}

// members lists the fields of the object that begins at i, whose own name is a
// prefix of theirs, and returns where it ends. The text is known to be sound.
func (p *parser) members(i int, name string, depth int) (end int, err error) {
	if depth == maxDepth {
		return 0, errDeep
	}
	for i = p.space(i + 1); p.object[i] != '}'; i = p.space(i) {
		if p.object[i] == ',' {
			i = p.space(i + 1)
		}
		to := p.quoted(i)
		key := join(name, unquote(p.object[i:to]))
		i = p.space(p.space(to) + 1) // the colon
		switch p.object[i] {
		case '{':
			i, err = p.members(i, key, depth+1)
		case '[':
			i, err = p.list(i, key)
		default:
			t := p.value(i)
			i, err = t.to, p.add(field{name: key, token: t})
		}
		if err != nil {
			return 0, err
		}
	}
	return i + 1, nil
}

func join(name, part string) string {
	if name == "" {
		return part
	}
	return name + "." + part
}

func (p *parser) add(f field) error {
	if p.seen[f.name] {
		return fmt.Errorf("holds %q twice", f.name)
	}
	p.seen[f.name] = true
	p.fields = append(p.fields, f)
	return nil
}

// list adds the list that begins at i, and returns where it ends.
func (p *parser) list(i int, name string) (end int, err error) {
	f := field{name: name, token: token{list, i, 0}, first: len(p.elements)}
	depth := 0
	for {
		switch i = p.space(i); p.object[i] {
		case '[', '{':
			if depth++; depth > 1 {
				f.kind = nested
			}
			i++
		case ']', '}':
			i++
			if depth--; depth == 0 {
				f.to, f.count = i, len(p.elements)-f.first
				return i, p.add(f)
			}
		case ',', ':':
			i++
		default:
			t := p.value(i)
			p.elements = append(p.elements, t)
			i = t.to
		}
	}
}

// value returns the token that begins at i.
func (p *parser) value(i int) token {
	switch p.object[i] {
	case '"':
		return token{text, i, p.quoted(i)}
	case 't', 'f':
		return token{truth, i, p.word(i)}
	case 'n', 'N':
		return token{null, i, p.word(i)}
	}
	t := token{number, i, p.word(i)}
	if bytes.HasSuffix(p.object[t.from:t.to], nan) {
		t.kind = null
	}
	return t
}

// word returns where a token without quotes ends.
func (p *parser) word(i int) int {
	for ; ; i++ {
		switch p.object[i] {
		case ',', '}', ']', ':', ' ', '\t', '\r', '\n':
			return i
		}
	}
}

// quoted returns where a text that begins at i ends.
func (p *parser) quoted(i int) int {
	for i++; p.object[i] != '"'; i++ {
		if p.object[i] == '\\' {
			i++
		}
	}
	return i + 1
}

// space passes over white space.
func (p *parser) space(i int) int {
	for p.object[i] == ' ' || p.object[i] == '\n' || p.object[i] == '\t' || p.object[i] == '\r' {
		i++
	}
	return i
}

// unquote returns the text within quotes. What is no UTF-8 in it is left so.
func unquote(quoted []byte) string {
	inner := quoted[1 : len(quoted)-1]
	if bytes.IndexByte(inner, '\\') < 0 {
		return string(inner)
	}
	var out string
	if json.Unmarshal(quoted, &out) != nil {
		return string(inner)
	}
	return out
}
