package export

import (
	"strandwise/channels"
	"strandwise/export/pages"
)

// StreamMetadata returns what a stream of takes says of itself before they are
// made, in the order it is written, as far as the recorded takes noted tell: the
// [FileLayout], without a rate; the skeletons of recorded takes, if there are any,
// of which each synthetic take has that of its source; and the [Run].
func (f *TakeFacts) StreamMetadata(l *channels.Layout, o Options) ([]pages.KeyValue, error) {
	known := *f
	known.rate = commonRate{}
	out, err := known.Metadata(l, o.Version)
	if err != nil {
		return nil, err
	}
	run, err := o.Run().metadata()
	return append(out, run), err
}
