// Package classify answers whether synthetic takes help: it scores a
// nearest-template recogniser on recorded takes it has not seen, once with the
// recorded training takes as templates and once with synthetic ones made from
// them added.
//
// The comparison is paired: both sides see the same splits and the same tested
// takes. Synthetic takes are never tested, and they cannot know the tested
// takes: for every split of a protocol, [Score] hands the training takes of
// that split, and nothing else, to a [Fit], and asks the [Maker] it returns
// for takes made from those.
package classify
