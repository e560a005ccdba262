package export_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"strandwise/channels"
	"strandwise/export"
)

// changed returns a copy of a take under another id and split, its values
// changed.
func changed(t *channels.Take, id string, split channels.Split, change func(i, c int, v float64) float64) *channels.Take {
	out := t.Clone()
	out.ID, out.Split = id, split
	for i := range out.Data {
		out.Data[i] = change(i/t.Width(), i%t.Width(), out.Data[i])
	}
	return out
}

// resampled returns a take of another number of frames along the same path.
func resampled(t *channels.Take, id string, split channels.Split, frames int) *channels.Take {
	out := t.Clone()
	out.ID, out.Split, out.Time, out.Data = id, split, nil, nil
	for i := range frames {
		at := float64(i) * float64(t.Frames()-1) / float64(frames-1)
		from := min(int(at), t.Frames()-2)
		out.Time = append(out.Time, float64(i)/50)
		for c := range t.Width() {
			a, b := t.Frame(from)[c], t.Frame(from + 1)[c]
			out.Data = append(out.Data, a+(at-float64(from))*(b-a))
		}
	}
	return out
}

// smooth returns an invented take of slow waves, with a phase of its own.
func smooth(l *channels.Layout, id string, phase float64) *channels.Take {
	t := &channels.Take{ID: id, Label: "curtain", Split: channels.Train, Layout: l}
	for i := range 60 {
		t.Time = append(t.Time, float64(i)/50)
		for c := range l.Channels {
			t.Data = append(t.Data, math.Sin(float64(i)/12+float64(c)+phase)+3)
		}
	}
	return t
}

// TestNearCopiesAcrossTheSplit: what is a near-copy, and what is not.
func TestNearCopiesAcrossTheSplit(t *testing.T) {
	l := wristband(t)
	base := smooth(l, "base", 0)
	same := func(_, _ int, v float64) float64 { return v }
	r := rand.New(rand.NewPCG(5, 5))
	made := func(t *channels.Take) *channels.Take {
		t.Made = &channels.Making{Source: "base", Method: "combined"}
		return t
	}
	for _, tc := range []struct {
		name  string
		takes []*channels.Take
		want  []string // as "test train"
		fault bool
	}{
		{"another performance", []*channels.Take{smooth(l, "b", 0.5)}, nil, false},
		{"recorded twice", []*channels.Take{changed(base, "b", channels.Test, same)}, []string{"b base"}, false},
		{"recorded twice for training", []*channels.Take{changed(base, "b", channels.Train, same)}, nil, false},
		{"noise of 1 %", []*channels.Take{changed(base, "b", channels.Test, func(_, _ int, v float64) float64 { return v + 0.01*r.NormFloat64() })}, []string{"b base"}, false},
		{"noise of 10 %", []*channels.Take{changed(base, "b", channels.Test, func(_, _ int, v float64) float64 { return v + 0.1*r.NormFloat64() })}, nil, false},
		{"at another rate", []*channels.Take{resampled(base, "b", channels.Test, 97)}, []string{"b base"}, false},
		{"one group apart", []*channels.Take{changed(base, "b", channels.Test, func(_, c int, v float64) float64 {
			if c >= 3 {
				v = 2*v - 3
			}
			return v
		})}, nil, false},
		{"an offset", []*channels.Take{changed(base, "b", channels.Test, func(_, _ int, v float64) float64 { return v + 1 })}, nil, false},
		{"a synthetic copy", []*channels.Take{
			changed(base, "b", channels.Test, func(_, _ int, v float64) float64 { return 1.2 * v }),
			made(changed(base, "base~0", channels.Train, func(_, _ int, v float64) float64 { return 1.201 * v })),
		}, []string{"b base~0"}, true},
	} {
		t.Run(tc.name, func(t *testing.T) {
			for _, take := range tc.takes {
				if take.ID == "b" && take.Split == channels.Train && tc.name == "another performance" {
					take.Split = channels.Test
				}
			}
			dir := t.TempDir()
			write(t, dir, l, both(), append([]*channels.Take{base}, tc.takes...))
			v, err := export.Verify(dir)
			if err != nil {
				t.Fatal(err)
			}
			var got []string
			for _, c := range v.Copies {
				got = append(got, c.Test+" "+c.Train)
				if !(c.Difference >= 0 && c.Difference <= export.NearCopy) {
					t.Errorf("difference %g", c.Difference)
				}
			}
			if strings.Join(got, ", ") != strings.Join(tc.want, ", ") {
				t.Errorf("copies %q, want %q", got, tc.want)
			}
			if v.Sound() == tc.fault {
				t.Errorf("problems %v", v.Problems)
			}
		})
	}
}

// TestConstantTakesAreCopiesOnlyWhenEqual: takes in which nothing moves.
func TestConstantTakesAreCopiesOnlyWhenEqual(t *testing.T) {
	l := wristband(t)
	still := func(id string, split channels.Split, level float64) *channels.Take {
		return changed(smooth(l, id, 0), id, split, func(int, int, float64) float64 { return level })
	}
	dir := t.TempDir()
	write(t, dir, l, both(), []*channels.Take{
		still("a", channels.Train, 1), still("b", channels.Train, 2), still("c", channels.Test, 2), still("d", channels.Test, 2.001),
	})
	v, err := export.Verify(dir)
	if err != nil || len(v.Copies) != 1 || v.Copies[0] != (export.Copy{Test: "c", Train: "b", Origin: channels.Recorded}) {
		t.Errorf("copies %v, %v; want c of b", v.Copies, err)
	}
}

// TestCopiesAreThoseOfAPlainSearch holds the search against one that compares
// every take for testing with every other.
func TestCopiesAreThoseOfAPlainSearch(t *testing.T) {
	l := wristband(t)
	r := rand.New(rand.NewPCG(9, 9))
	var takes []*channels.Take
	for i := range 60 {
		take := smooth(l, fmt.Sprintf("train-%02d", i), 7*r.Float64())
		takes = append(takes, take)
		for k := range i % 3 {
			noise := 0.1 * r.Float64() * r.Float64()
			takes = append(takes, changed(take, fmt.Sprintf("test-%02d-%d", i, k), channels.Test, func(_, _ int, v float64) float64 { return v + noise*r.NormFloat64() }))
		}
	}
	dir := t.TempDir()
	o := both()
	o.Buckets = 4
	write(t, dir, l, o, takes)
	v, err := export.Verify(dir)
	if err != nil {
		t.Fatal(err)
	}
	got := map[string]string{}
	for _, c := range v.Copies {
		got[c.Test] = c.Train
	}
	found := 0
	for _, a := range takes {
		if a.Split != channels.Test {
			continue
		}
		nearest, least := "", export.NearCopy
		for _, b := range takes {
			if d := plainDifference(a, b); b.Split == channels.Train && d <= least {
				nearest, least = b.ID, d
			}
		}
		if nearest != "" {
			found++
		}
		if got[a.ID] != nearest {
			t.Errorf("take %s: copy of %q, a plain search finds %q at %g", a.ID, got[a.ID], nearest, least)
		}
	}
	if found < 20 || found == 60 {
		t.Errorf("%d of 60 are copies; the test means to see some and not all", found)
	}
}

// plainDifference is the largest difference of a group of two takes, as a part
// of the movement of the first.
func plainDifference(a, b *channels.Take) float64 {
	const points = 32
	at := func(t *channels.Take, p, c int) float64 {
		x := float64(p) * float64(t.Frames()-1) / (points - 1)
		from := min(int(x), t.Frames()-2)
		return t.Frame(from)[c] + (x-float64(from))*(t.Frame(from + 1)[c]-t.Frame(from)[c])
	}
	largest := 0.0
	for _, g := range a.Layout.Groups {
		apart, moved := 0.0, 0.0
		for _, c := range g.Channels {
			mean := 0.0
			for p := range points {
				mean += at(a, p, c) / points
			}
			for p := range points {
				apart += math.Pow(at(a, p, c)-at(b, p, c), 2)
				moved += math.Pow(at(a, p, c)-mean, 2)
			}
		}
		largest = max(largest, math.Sqrt(apart/moved))
	}
	return largest
}
