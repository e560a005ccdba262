package convolution_test

import (
	"fmt"

	"strandwise/channels"
)

func layoutOf(width int) *channels.Layout {
	l := &channels.Layout{}
	for c := range width {
		l.Channels = append(l.Channels, channels.Channel{Name: fmt.Sprintf("c%d", c), Quantity: channels.Misc})
	}
	return l
}

// take returns a take of one frame per second.
func take(id string, l *channels.Layout, data []float64) *channels.Take {
	t := &channels.Take{ID: id, Layout: l, Data: data, Time: make([]float64, len(data)/len(l.Channels))}
	for i := range t.Time {
		t.Time[i] = float64(i)
	}
	return t
}
