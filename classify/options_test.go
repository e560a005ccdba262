package classify_test

import (
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/classify"
	"strandwise/classify/template"
)

func TestParseProtocol(t *testing.T) {
	for _, p := range append(classify.Protocols(), classify.Auto) {
		if got, err := classify.ParseProtocol(string(p)); got != p || err != nil {
			t.Errorf("ParseProtocol(%q) = %q, %v", p, got, err)
		}
	}
	_, err := classify.ParseProtocol("evening")
	if want := `unknown protocol "evening"; legal protocols are given, subject, session, pooled`; err == nil || err.Error() != want {
		t.Errorf("ParseProtocol(evening): %v, want %s", err, want)
	}
}

func TestAutomaticProtocol(t *testing.T) {
	nameless := theatre(2, 3, 2, 0.1)
	nameless[1].Subject = ""
	for name, c := range map[string]struct {
		takes []*channels.Take
		want  classify.Protocol
	}{
		"a test split":        {split(theatre(2, 3, 2, 0.1)), classify.Given},
		"three subjects":      {theatre(2, 3, 2, 0.1), classify.Subject},
		"two subjects":        {theatre(2, 2, 2, 0.1), classify.Pooled},
		"a take of no person": {nameless, classify.Pooled},
	} {
		if r := mustScore(t, c.takes, nil, classify.Options{}); r.Protocol != c.want {
			t.Errorf("%s: protocol %s, want %s", name, r.Protocol, c.want)
		}
	}
}

func TestOptionFaults(t *testing.T) {
	err := classify.Options{
		Protocol: "odd", Distances: []template.Distance{"far"}, Band: 2, PerTake: -1, TakesPerLabel: []int{-2}, Repeats: -3, Workers: -4,
	}.Validate()
	for _, text := range []string{`"odd"`, `"far"`, "recorded one: -1", "per label: -2", "repeats: -3", "workers: -4"} {
		if err == nil || !strings.Contains(err.Error(), text) {
			t.Errorf("error %v does not say %s", err, text)
		}
	}
	err = classify.Options{
		TakesPerLabel: []int{2, 2}, PerTake: 8, Curve: []int{4, 9}, TestShare: 1, Rest: theatre(1, 1, 1, 1), Weights: map[string]float64{"left": -1},
	}.Validate()
	for _, text := range []string{"2 is below 0, or named twice", "curve: 9", "0 to 8", "share to test: 1", "no gesture", "weight -1 of group left"} {
		if err == nil || !strings.Contains(err.Error(), text) {
			t.Errorf("error %v does not say %s", err, text)
		}
	}
	if err := (classify.Options{Band: 2}).Validate(); err == nil || strings.Count(err.Error(), "band 2") != 1 {
		t.Errorf("error of one impossible band: %v", err)
	}
	if err := (classify.Options{}).Validate(); err != nil {
		t.Errorf("zero options: %v", err)
	}
}

// TestScoreRefuses lists takes that cannot be scored on, and what the message
// must say: what is wrong, where, and what would be legal.
func TestScoreRefuses(t *testing.T) {
	change := func(takes []*channels.Take, f func(*channels.Take)) []*channels.Take {
		for _, t := range takes {
			f(t)
		}
		return takes
	}
	all := func(s channels.Split) []*channels.Take {
		return change(theatre(2, 2, 2, 0.1), func(t *channels.Take) { t.Split = s })
	}
	one := func(f func(*channels.Take)) []*channels.Take {
		takes := theatre(2, 2, 2, 0.1)
		takes[3].Where = "evening.csv:120"
		f(takes[3])
		return takes
	}
	for name, c := range map[string]struct {
		takes   []*channels.Take
		options classify.Options
		text    string
	}{
		"nothing":           {nil, classify.Options{}, "no takes"},
		"one label":         {theatre(1, 2, 2, 0.1), classify.Options{}, "every take is labelled cue0"},
		"no label":          {one(func(t *channels.Take) { t.Label = "" }), classify.Options{}, "(evening.csv:120) has no label"},
		"synthetic":         {one(func(t *channels.Take) { t.Made = &channels.Making{} }), classify.Options{}, "is synthetic"},
		"other channels":    {one(func(t *channels.Take) { t.Layout = &channels.Layout{} }), classify.Options{}, "needs the same"},
		"nothing tested":    {all(channels.Train), classify.Options{Protocol: classify.Given}, "no take is of the test split"},
		"nothing trains":    {all(channels.Test), classify.Options{}, "every take is of the test split"},
		"one subject":       {theatre(2, 1, 2, 0.1), classify.Options{Protocol: classify.Subject}, "every take is of one subject, puppeteer0"},
		"no subject":        {one(func(t *channels.Take) { t.Subject = "" }), classify.Options{Protocol: classify.Subject}, "(evening.csv:120) names no subject"},
		"none left to test": {theatre(2, 2, 2, 0.1), classify.Options{Protocol: classify.Pooled, TakesPerLabel: []int{4}}, "none to test of cue0 (4), cue1 (4)"},
		"one take each":     {theatre(3, 1, 1, 0.1), classify.Options{}, "every label has one take"},
		"repeats":           {theatre(2, 3, 2, 0.1), classify.Options{Repeats: 3}, "protocol subject draws nothing at random"},
		"repeats of given":  {split(theatre(2, 3, 2, 0.1)), classify.Options{Repeats: 3}, "protocol given draws nothing at random"},
		"share of pooled":   {theatre(2, 3, 2, 0.1), classify.Options{Protocol: classify.Pooled, TestShare: 0.5}, "goes with protocols subject and session"},
		"no session":        {one(func(t *channels.Take) { t.Session = "" }), classify.Options{Protocol: classify.Session}, "(evening.csv:120) names no session"},
		"one session":       {theatre(2, 2, 1, 0.1), classify.Options{Protocol: classify.Session}, "every take is of one session, evening0"},
		"options":           {theatre(2, 3, 2, 0.1), classify.Options{Workers: -1}, "workers: -1"},
	} {
		for _, check := range []func() error{
			func() error { _, err := classify.Score(t.Context(), c.takes, nil, c.options, nil); return err },
			func() error { _, err := c.options.Comparisons(c.takes); return err },
		} {
			if err := check(); err == nil || !strings.Contains(err.Error(), c.text) {
				t.Errorf("%s: error %v does not say %q", name, err, c.text)
			}
		}
	}
}

func TestComparisons(t *testing.T) {
	// Three subjects of 4 takes each: 8 takes train and 4 are tested each time.
	n, err := classify.Options{PerTake: 9}.Comparisons(theatre(2, 3, 2, 0.1))
	if want := 3 * 8 * (1 + 9) * 4; n != want || err != nil {
		t.Errorf("%d comparisons and error %v, want %d", n, err, want)
	}
}

// TestFaultyTake checks that a take no distance can be taken from is named.
func TestFaultyTake(t *testing.T) {
	for _, place := range []int{0, 5} { // tested first, and training first
		takes := theatre(2, 3, 2, 0.1)
		takes[place].Data = takes[place].Data[:5]
		_, err := classify.Score(t.Context(), takes, nil, classify.Options{}, nil)
		if err == nil || !strings.Contains(err.Error(), takes[place].ID) {
			t.Errorf("error %v does not name take %s", err, takes[place].ID)
		}
	}
}
