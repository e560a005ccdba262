package ingest

import (
	"fmt"
	"path"
	"path/filepath"
	"regexp"
	"strings"

	"strandwise/ingest/raw"
)

const legalFields = "{take}, {label}, {subject}, {session} and {split}"

// pathPattern reads identity from the tail of a path.
type pathPattern struct {
	text string
	re   *regexp.Regexp // its named groups are the fields
}

var patternPart = regexp.MustCompile(`\{[^{}]*\}|\*|[^{}*]+|.`)

// parsePattern compiles a pattern such as "{subject}/{label}_{take}.csv".
func parsePattern(text string) (*pathPattern, error) {
	expr := "(?:^|/)(?P<tail>"
	seen := map[string]bool{}
	for _, part := range patternPart.FindAllString(text, -1) {
		switch {
		case part == "*":
			expr += "[^/]*"
		case part == "{" || part == "}":
			return nil, &UsageError{Key: "pattern", Problem: fmt.Sprintf("pattern %q: a brace is left open; fields are %s", text, legalFields)}
		case part[0] == '{':
			name := part[1 : len(part)-1]
			if (&raw.Identity{}).Field(name) == nil {
				return nil, &UsageError{Key: "pattern", Problem: fmt.Sprintf("pattern %q: unknown field {%s}; legal fields are %s", text, name, legalFields)}
			}
			if seen[name] {
				return nil, &UsageError{Key: "pattern", Problem: fmt.Sprintf("pattern %q: field {%s} stands in it twice", text, name)}
			}
			seen[name] = true
			expr += "(?P<" + name + ">[^/]+)"
		default:
			expr += regexp.QuoteMeta(part)
		}
	}
	if len(seen) == 0 {
		return nil, &UsageError{Key: "pattern", Problem: fmt.Sprintf("pattern %q has no field; legal fields are %s", text, legalFields)}
	}
	return &pathPattern{text, regexp.MustCompile(expr + ")$")}, nil
}

// match reads a path. The tail is the part the pattern covers, without its
// extension; it names the file's takes. A packed file may be matched with or
// without the extension of its packing.
func (p *pathPattern) match(name string) (id raw.Identity, tail string, ok bool) {
	name = filepath.ToSlash(name)
	m := p.re.FindStringSubmatch(name)
	if m == nil {
		m = p.re.FindStringSubmatch(unpackedName(name))
	}
	if m == nil {
		return id, "", false
	}
	for i, group := range p.re.SubexpNames() {
		if f := id.Field(group); f != nil {
			*f = m[i]
		}
	}
	return id, stem(m[1]), true
}

// stem returns a name without the extensions of its format and packing.
func stem(name string) string {
	name = unpackedName(name)
	return strings.TrimSuffix(name, path.Ext(name))
}
