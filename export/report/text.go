package report

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode"

	"github.com/rivo/uniseg"
)

// name is a text that is not ours, such as a label, as the page shows it.
type name struct {
	Short string // at most mostShown characters
	Full  string // the whole, where Short is not
}

// Bounds of a text that is not ours: columns, and the code points of one
// character, which may otherwise pile up any number of marks.
const (
	mostShown  = 60
	mostPoints = 12
)

// named returns a text that is not ours for the page. An empty one is
// nameless.
func named(text, nameless string) name {
	if strings.TrimSpace(text) == "" {
		return name{Short: nameless}
	}
	n := name{Short: shortened(text, mostShown)}
	if whole := visible(text); n.Short != whole {
		n.Full = whole
	}
	return n
}

// visible makes a text such that a page can show it: characters without a look
// are replaced, and of marks that pile up on one letter only the first few are
// kept, or they would cover what stands above and below.
func visible(text string) string {
	piled := 0
	return strings.Map(func(r rune) rune {
		if piled++; !unicode.Is(unicode.M, r) {
			piled = 0
		}
		switch {
		case piled >= mostPoints:
			return -1
		case unicode.IsControl(r) && r != '\n' && r != '\t' && r != '\r':
			return unicode.ReplacementChar
		}
		return r
	}, strings.ToValidUTF8(text, "\uFFFD"))
}

// allVisible makes sentences such that a page can show them.
func allVisible(texts []string) []string {
	out := make([]string, len(texts))
	for i, text := range texts {
		out[i] = visible(text)
	}
	return out
}

// isolated returns a text that is not ours between marks that keep its
// direction of writing from what stands around it.
func isolated(text string, most int, nameless string) string {
	return "\u2068" + shortened(named(text, nameless).Short, most) + "\u2069"
}

// shortened returns a text of at most so many columns of a fixed-width type, an
// ellipsis included. Wide characters count as two.
func shortened(text string, most int) string {
	text = visible(text)
	var out []byte
	fits, width := 0, 0 // fits is how many bytes leave room for the ellipsis
	for g := uniseg.NewGraphemes(text); g.Next(); {
		if width += max(1, g.Width()); width > most {
			return strings.TrimRightFunc(string(out[:fits]), unicode.IsSpace) + "…"
		}
		runes := g.Runes()
		out = append(out, string(runes[:min(len(runes), mostPoints)])...)
		if width < most {
			fits = len(out)
		}
	}
	return string(out)
}

// number writes three figures, with a true minus sign; a dash for what is no
// number.
func number(v float64) string {
	if !finite(v) {
		return "–"
	}
	if a := math.Abs(v); a >= 1000 && a < 1e6 {
		return minus(strconv.FormatFloat(v, 'f', 0, 64))
	}
	return minus(strconv.FormatFloat(v, 'g', 3, 64))
}

// tickText writes the value of a tick, whose neighbours are so far apart.
func tickText(v, apart float64) string {
	if v == 0 {
		return "0"
	}
	if a := math.Abs(v); a >= 1e5 || a < 1e-4 {
		return minus(strconv.FormatFloat(v, 'g', 3, 64))
	}
	decimals := 0
	if apart > 0 {
		decimals = max(0, int(math.Ceil(-math.Log10(apart)-1e-9)))
	}
	return minus(strconv.FormatFloat(v, 'f', min(decimals, 6), 64))
}

// minus replaces hyphens that stand for minus.
func minus(text string) string { return strings.ReplaceAll(text, "-", "−") }

// percent writes a share in per cent with one decimal.
func percent(v float64) string {
	if !finite(v) {
		return "–"
	}
	return minus(strconv.FormatFloat(100*v, 'f', 1, 64)) + " %"
}

// points writes a difference of shares in percentage points, with its sign.
func points(v float64) string {
	if !finite(v) {
		return "–"
	}
	if math.Abs(v) < 0.0005 {
		return "0.0"
	}
	return minus(fmt.Sprintf("%+.1f", 100*v))
}

// between writes an interval.
func between(low, high float64, write func(float64) string) string {
	return write(low) + " to " + write(high)
}

// whole writes a count with thin spaces between thousands.
func whole[N int | int64](n N) string {
	s := strconv.FormatInt(int64(n), 10)
	sign := ""
	if strings.HasPrefix(s, "-") {
		sign, s = "−", s[1:]
	}
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "\u202f" + s[i:]
	}
	return sign + s
}

// counted writes a count with its noun.
func counted[N int | int64](n N, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return whole(n) + " " + many
}

// pValue writes a p.
func pValue(p float64) string {
	switch {
	case !finite(p):
		return "–"
	case p < 0.001:
		return "below 0.001"
	}
	return strconv.FormatFloat(p, 'g', 2, 64)
}

// plainBytes writes a size of a file.
func plainBytes(n int64) string {
	switch {
	case n < 1e3:
		return counted(n, "byte", "bytes")
	case n < 1e6:
		return fmt.Sprintf("%.1f kB", float64(n)/1e3)
	case n < 1e9:
		return fmt.Sprintf("%.1f MB", float64(n)/1e6)
	}
	return fmt.Sprintf("%.1f GB", float64(n)/1e9)
}

// decimal writes a number that people copy, without spaces.
func decimal(n uint64) string { return strconv.FormatUint(n, 10) }
