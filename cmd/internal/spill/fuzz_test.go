package spill

import (
	"testing"

	"strandwise/channels"
	"strandwise/channels/body"
)

// FuzzTake: whatever the bytes, reading a take ends, and what is read whole has
// as many values as frames and channels.
func FuzzTake(f *testing.F) {
	layouts := []*channels.Layout{{Channels: []channels.Channel{{Name: "x"}, {Name: "y"}}}}
	skeletons := []*body.Skeleton{nil}
	take := &channels.Take{ID: "a", Label: "bow", Layout: layouts[0], Time: []float64{0, 1}, Data: []float64{1, 2, 3, 4}}
	whole := appendTake(nil, take, 0, 0)
	f.Add(whole)
	f.Add(whole[:9])
	f.Add([]byte("\xff\xff\xff\xff\xff\xff\xff\xff\xff\x01"))
	f.Fuzz(func(t *testing.T, data []byte) {
		r := reader{data: data}
		got := r.take(layouts, skeletons)
		if r.short {
			return
		}
		if got == nil || len(got.Data) != 2*len(got.Time) {
			t.Errorf("a take of %v", got)
		}
	})
}
