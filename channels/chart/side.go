package chart

import (
	"regexp"
	"strings"
)

// otherSide maps the words for a side to those for the other.
var otherSide = map[string]string{"left": "right", "right": "left", "lt": "rt", "rt": "lt", "l": "r", "r": "l"}

// word finds the words of a name: runs of letters, parted also where a capital
// follows a small letter.
var word = regexp.MustCompile(`[A-Z]+[a-z]*|[a-z]+`)

// opposite returns a name with its sides changed: "left_wrist.accel.x" gives
// "right_wrist.accel.x", "J_R_Hip" gives "J_L_Hip". It is not ok when no word of
// the name is a side.
func opposite(name string) (other string, ok bool) {
	var b strings.Builder
	end := 0
	for _, at := range word.FindAllStringIndex(name, -1) {
		w := name[at[0]:at[1]]
		side, found := otherSide[strings.ToLower(w)]
		numbered := at[1] < len(name) && name[at[1]] >= '0' && name[at[1]] <= '9'
		if !found || numbered && len(w) == 1 { // L5 is a vertebra
			continue
		}
		ok = true
		b.WriteString(name[end:at[0]])
		b.WriteString(likeCase(side, w))
		end = at[1]
	}
	b.WriteString(name[end:])
	return b.String(), ok
}

// likeCase writes a lower-case word with capitals where the other has them.
func likeCase(lower, other string) string {
	switch {
	case other == strings.ToUpper(other):
		return strings.ToUpper(lower)
	case other[:1] == strings.ToUpper(other[:1]):
		return strings.ToUpper(lower[:1]) + lower[1:]
	}
	return lower
}

// initial returns a name that begins with l or r with the other letter there,
// for names such as "lfemur" and "LThumb", which show their side only by there
// being both.
func initial(name string) string {
	for _, p := range []string{"lr", "rl", "LR", "RL"} {
		if strings.HasPrefix(name, p[:1]) {
			return p[1:] + name[1:]
		}
	}
	return ""
}
