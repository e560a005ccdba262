package channels_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"strandwise/channels"
)

// TestScalesGoOnElsewhere: scales that were written and read again measure and go
// on as those that were not.
func TestScalesGoOnElsewhere(t *testing.T) {
	l := &channels.Layout{
		Channels: []channels.Channel{{Name: "a"}, {Name: "b"}, {Name: "c"}},
		Groups:   []channels.Group{{Name: "one", Channels: []int{0, 2}}, {Name: "two", Channels: []int{1}}},
	}
	rapid.Check(t, func(t *rapid.T) {
		take := func() *channels.Take {
			n := rapid.IntRange(1, 9).Draw(t, "frames")
			out := &channels.Take{Layout: l, Time: make([]float64, n)}
			for range 3 * n {
				out.Data = append(out.Data, rapid.Float64Range(-1e6, 1e6).Draw(t, "value"))
			}
			return out
		}
		var here, there channels.Scales
		for range rapid.IntRange(0, 3).Draw(t, "takes") {
			here.Add(take())
		}
		data, err := here.MarshalBinary()
		if err != nil {
			t.Fatal(err)
		}
		if err := there.UnmarshalBinary(data); err != nil {
			t.Fatal(err)
		}
		if rapid.Bool().Draw(t, "more") {
			more := take()
			here.Add(more)
			there.Add(more)
		}
		for g := range 2 {
			if math.Float64bits(here.RMS(g)) != math.Float64bits(there.RMS(g)) {
				t.Fatalf("group %d measures %v here and %v there", g, here.RMS(g), there.RMS(g))
			}
		}
		if len(data) > 0 {
			if err := there.UnmarshalBinary(data[1:]); err == nil {
				t.Fatal("scales that are cut short are taken up")
			}
		}
	})
}
