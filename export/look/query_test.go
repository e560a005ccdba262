package look

import (
	"cmp"
	"fmt"
	"maps"
	"net/url"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"strandwise/channels"
	"strandwise/export/marks"
)

func TestQueriesThatAreNone(t *testing.T) {
	s := open(t, write(t, small(), troupe(puppets(t), 4, 2, 20)))
	for _, tc := range []struct{ query, says string }{
		{"colour=red", `names "colour", which there is not`},
		{"label=1&label=2", `names "label", which there is not, or twice`},
		{"label=bow", "whole numbers from 0 to 2"},
		{"label=3", "whole numbers from 0 to 2"},
		{"label=-1", "whole numbers"},
		{"label=%2B1", "whole numbers"},
		{"label=01", "whole numbers"},
		{"label=..", "whole numbers"},
		{"source=999999999999", "whole numbers"},
		{"count=201", "from 0 to 200"},
		{"split=dev", "legal are train, test"},
		{"origin=made", "legal are recorded, synthetic"},
		{"mark=maybe", "legal are drop, keep, none, marked"},
		{"order=best", "legal are [set rank label subject high low]"},
		{"holds=" + strings.Repeat("x", 401), "at most 400 bytes"},
	} {
		v, err := url.ParseQuery(tc.query)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := s.parseQuery(v); err == nil || !strings.Contains(err.Error(), tc.says) {
			t.Errorf("%.30s: error %v, want one that says %q", tc.query, err, tc.says)
		}
	}
}

// TestFind holds what queries find against a plain search of the takes.
func TestFind(t *testing.T) {
	takes := troupe(puppets(t), 8, 5, 20)
	s := open(t, write(t, small(), takes))
	inOrder := map[string]*channels.Take{}
	for _, take := range takes {
		inOrder[take.ID] = take
	}
	rapid.Check(t, func(t *rapid.T) {
		pick := func(name string, of ...string) string { return rapid.SampledFrom(append(of, "")).Draw(t, name) }
		label, subject, split, origin := pick("label", "bow", "nod"), pick("subject", "pim", "wick"), pick("split", "train", "test"), pick("origin", "recorded", "synthetic")
		mark, holds := pick("mark", "drop", "keep", "none", "marked"), pick("holds", "TAKE 1", "~", "ow", "zebra")
		marked := map[string]marks.Mark{}
		for i, take := range takes {
			if i%3 > 0 {
				marked[take.ID] = []marks.Mark{marks.Drop, marks.Keep}[i%2]
			}
		}
		v := url.Values{"split": {split}, "origin": {origin}, "mark": {mark}, "holds": {holds}}
		if label != "" {
			v.Set("label", fmt.Sprint(s.takes.labels.at[label]))
		}
		if subject != "" {
			v.Set("subject", fmt.Sprint(s.takes.subjects.at[subject]))
		}
		q, err := s.parseQuery(v)
		if err != nil {
			t.Fatal(err)
		}
		got := map[string]bool{}
		for _, n := range s.find(q, marked) {
			got[s.takes.rows[n].id] = true
		}
		want := map[string]bool{}
		for _, take := range takes {
			m := marked[take.ID]
			if (label == "" || take.Label == label) && (subject == "" || take.Subject == subject) && (split == "" || string(take.Split) == split) &&
				(origin == "" || string(take.Origin()) == origin) && (mark == "" || string(m) == mark || mark == "none" && m == "" || mark == "marked" && m != "") &&
				(holds == "" || strings.Contains(strings.ToLower(take.ID+"|"+take.Label+"|"+take.Subject+"|"+take.Session), strings.ToLower(holds))) {
				want[take.ID] = true
			}
		}
		if !maps.Equal(want, got) {
			t.Fatalf("%v finds %v, want %v", v, slices.Sorted(maps.Keys(got)), slices.Sorted(maps.Keys(want)))
		}
	})
}

func TestFamily(t *testing.T) {
	s := open(t, write(t, small(), troupe(puppets(t), 5, 3, 20)))
	source := s.numberOf("take 2")
	found := s.find(query{label: -1, subject: -1, session: -1, gate: -1, source: int(source)}, nil)
	var ids []string
	for _, n := range found {
		ids = append(ids, s.takes.rows[n].id)
	}
	slices.Sort(ids)
	if want := []string{"take 2", "take 2~0", "take 2~1", "take 2~2"}; !slices.Equal(want, ids) {
		t.Errorf("the family of take 2 is %v", ids)
	}
}

func TestOrders(t *testing.T) {
	s := open(t, write(t, small(), troupe(puppets(t), 5, 4, 20)))
	stray := slices.Index(s.takes.gates, "stray")
	for _, o := range orders() {
		list := s.find(query{label: -1, subject: -1, session: -1, source: -1, gate: stray, order: o}, nil)
		if len(list) != s.Takes() {
			t.Fatalf("%s: %d takes", o, len(list))
		}
		key := func(n int32) (text string, number float64) {
			r := &s.takes.rows[n]
			v := float64(s.takes.values[stray][n])
			switch o {
			case byRank:
				return "", float64(r.rank)
			case byLabel:
				return s.takes.labels.texts[r.label], 0
			case bySubject:
				return s.takes.subjects.texts[r.subject], 0
			case highestGate:
				if v != v {
					return "", 1e9
				}
				return "", -v
			case lowestGate:
				if v != v {
					return "", 1e9
				}
				return "", v
			}
			return "", 0
		}
		if !slices.IsSortedFunc(list, func(a, b int32) int {
			ta, na := key(a)
			tb, nb := key(b)
			return cmp.Or(cmp.Compare(ta, tb), cmp.Compare(na, nb), cmp.Compare(a, b))
		}) {
			t.Errorf("the order %s gives %v", o, list)
		}
	}
}

// FuzzQuery reads any query. One that is understood finds takes, and none twice.
func FuzzQuery(f *testing.F) {
	dir := write(f, small(), troupe(puppets(f), 4, 3, 20))
	s := open(f, dir)
	for _, q := range []string{"", "label=1&origin=synthetic&order=high&gate=0", "source=2&from=3&count=1", "holds=%2e%2e%2f&mark=none", "n=../../etc/passwd", "label=%00", "order=low"} {
		f.Add(q)
	}
	f.Fuzz(func(t *testing.T, text string) {
		v, err := url.ParseQuery(text)
		if err != nil {
			return
		}
		if n, err := s.takeOf(v); err == nil && (n < 0 || int(n) >= s.Takes()) {
			t.Errorf("%q is take %d", text, n)
		}
		q, err := s.parseQuery(v)
		if err != nil {
			return
		}
		found := s.find(q, map[string]marks.Mark{"take 1": marks.Drop})
		once := slices.Clone(found)
		slices.Sort(once)
		if len(slices.Compact(once)) != len(found) || len(found) > s.Takes() {
			t.Errorf("%q finds %v", text, found)
		}
	})
}
