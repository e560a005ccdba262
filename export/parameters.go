package export

import (
	"math"
	"slices"
	"strconv"
)

// parameterText writes parameters as JSON, reusing its memory.
type parameterText struct {
	names []string
	text  []byte
}

// encode returns the parameters of a draw as a JSON object with its keys
// sorted, each number in the fewest digits that read back as the same number
// and, like encoding/json, without an exponent where it reads well without.
// The numbers must be finite.
func (p *parameterText) encode(parameters map[string]float64) string {
	p.names = p.names[:0]
	for name := range parameters {
		p.names = append(p.names, name)
	}
	slices.Sort(p.names)
	p.text = append(p.text[:0], '{')
	for i, name := range p.names {
		if i > 0 {
			p.text = append(p.text, ',')
		}
		p.text = append(appendQuoted(p.text, name), ':')
		p.text = appendNumber(p.text, parameters[name])
	}
	p.text = append(p.text, '}')
	return string(p.text)
}

func appendNumber(dst []byte, v float64) []byte {
	format := byte('f')
	if size := math.Abs(v); size != 0 && (size < 1e-6 || size >= 1e21) {
		format = 'e'
	}
	return strconv.AppendFloat(dst, v, format, -1, 64)
}

// appendQuoted appends a JSON string, by the short way for plain names.
func appendQuoted(dst []byte, s string) []byte {
	for i := range len(s) {
		if c := s[i]; c < ' ' || c > '~' || c == '"' || c == '\\' {
			return appendEscaped(dst, s)
		}
	}
	return append(append(append(dst, '"'), s...), '"')
}

func appendEscaped(dst []byte, s string) []byte {
	quoted, err := marshal(s, "")
	if err != nil {
		panic("export: text that JSON cannot hold") // every string can be quoted
	}
	return append(dst, quoted...)
}
