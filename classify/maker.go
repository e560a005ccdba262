package classify

import "strandwise/channels"

// Maker makes synthetic takes. It must be safe for use by several goroutines
// at a time, and what it makes of a take must not depend on the calls before.
type Maker interface {
	// Make returns at most n synthetic takes made from source, fewer when it
	// cannot make n sound ones. They belong to the caller; their channels are
	// those of source, and their label is taken to be its label.
	Make(source *channels.Take, n int) ([]*channels.Take, error)
}

// Fit measures how the training takes of one split vary, and returns a maker
// that draws from that. Several splits may be fitted at a time. It must not
// keep what it learns for another call: each split is to know its own training
// takes only.
type Fit func(training []*channels.Take) (Maker, error)

// Method is a way of making takes, under the name that reports call it.
type Method struct {
	Name string
	Fit  Fit
}
