package job

import (
	"crypto/sha256"
	"encoding/hex"
	"math"
	"slices"
	"strconv"
	"strings"

	"strandwise/channels"
)

// holdOut is the people kept for the test; nil keeps the splits of the
// recordings.
type holdOut map[string]bool

// holdOut reads the plan's hold_out: "subject=ann,bo" or a fraction of the
// people, who are then chosen by a hash of their name and the seed.
func (p *Plan) holdOut(takes channels.Stream) (holdOut, error) {
	if p.HoldOut == "" {
		return nil, nil
	}
	people, err := subjects(takes)
	if err != nil {
		return nil, err
	}
	if names, ok := strings.CutPrefix(p.HoldOut, "subject="); ok {
		return p.heldByName(strings.Split(names, ","), people)
	}
	fraction, err := strconv.ParseFloat(p.HoldOut, 64)
	if err != nil || !(fraction > 0 && fraction < 1) {
		return nil, p.fault("hold_out", "%q is neither subject=NAME,… nor a fraction between 0 and 1", p.HoldOut)
	}
	if len(people) < 2 {
		return nil, p.fault("hold_out", "the recordings name %d subjects; holding people out needs at least 2", len(people))
	}
	key := func(name string) string {
		sum := sha256.Sum256([]byte(strconv.FormatUint(p.Seed, 10) + " " + name))
		return hex.EncodeToString(sum[:])
	}
	slices.SortFunc(people, func(a, b string) int { return strings.Compare(key(a), key(b)) })
	n := min(max(int(math.Round(fraction*float64(len(people)))), 1), len(people)-1)
	return set(people[:n]), nil
}

func (p *Plan) heldByName(names, people []string) (holdOut, error) {
	for _, name := range names {
		if !slices.Contains(people, name) {
			return nil, p.fault("hold_out", "no take is by subject %q; subjects are %s", name, strings.Join(people, ", "))
		}
	}
	held := set(names)
	if len(held) == len(people) {
		return nil, p.fault("hold_out", "all subjects are held out; leave at least one to train")
	}
	return held, nil
}

// subjects lists the people of the recordings, sorted.
func subjects(takes channels.Stream) ([]string, error) {
	found := make(map[string]bool)
	for t, err := range takes {
		if err != nil {
			return nil, err
		}
		found[t.Subject] = true
	}
	delete(found, "")
	var out []string
	for name := range found {
		out = append(out, name)
	}
	slices.Sort(out)
	return out, nil
}

func set(names []string) holdOut {
	out := make(holdOut, len(names))
	for _, n := range names {
		out[n] = true
	}
	return out
}

// apply puts the held-out people's takes into the test split and all others
// into the training split.
func (h holdOut) apply(takes channels.Stream) channels.Stream {
	if h == nil {
		return takes
	}
	return func(yield func(*channels.Take, error) bool) {
		for t, err := range takes {
			if t != nil {
				t.Split = channels.Train
				if h[t.Subject] {
					t.Split = channels.Test
				}
			}
			if !yield(t, err) {
				return
			}
		}
	}
}
