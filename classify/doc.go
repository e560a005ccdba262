// Package classify answers whether synthetic takes help: it scores recognisers
// on recorded takes they have not seen, once taught with the recorded training
// takes alone and once with synthetic ones made from them added.
//
// The comparison is paired: both sides see the same splits and the same tested
// takes. Synthetic takes are never tested, and they cannot know the tested
// takes: for every split of a protocol, [Score] hands the training takes of
// that split, and nothing else, to a [Fit], and asks the [Maker] it returns
// for takes made from those.
//
// Recognisers are [Learner] values: nearest templates by several distances, and
// as an independent witness random convolution kernels with ridge regression.
//
// # How sure
//
// Where every take is tested once, as with a given split or when one person is
// left out at a time, the interval of an error is Wilson's and the p of a
// difference McNemar's, exact. Where splits repeat, tests of one take are
// alike, and so are the tests of one split: intervals are bootstrapped over
// splits and takes, or people where six or more are named; p is exact, by flipping
// signs of the differences by take or person, and by split where there are six
// or more, whichever shows less. The interval of a relative reduction is always a
// paired bootstrap. A finding needs both: p below 0.05 and an interval that
// leaves out 0. See package statistic for the methods and their sources. The p
// of single labels are corrected by Holm's method.
//
// # The report as JSON
//
// [Report] is written as one object; testdata/report.json is one. Shares are
// between 0 and 1 and rounded to four decimals, p to four figures.
//
//	protocol, test_share    which takes trained and which were tested
//	normalise, band,        how templates were compared
//	weights
//	seed, per_take          of the splits; synthetic takes per recorded one
//	labels, label_names     number and names of the labels, sorted
//	takes                   recorded takes in all
//	resampled               what bootstrap intervals resample: "takes", "subjects", and "splits and …"
//	results                 list, see below
//	overall                 list: one comparison per learner and method over all takes per label;
//	                        distance or learner, method, tested, errors_recorded, errors_with_synthetic,
//	                        error, low, high, and as in results finding … p
//	verdict                 one plain sentence
//	notes                   list of sentences: what to know before believing it
//	unfinished              true when the score was interrupted; else absent
//
// Each of the results, one per learner × takes per label × method, that of
// recorded takes first and then the methods with the best first:
//
//	distance or learner     of nearest templates, or the name of another learner
//	takes_per_label         recorded training takes per label; null when all there are, or half, train
//	origin, method          "recorded" and "none", or "recorded+synthetic" and who made them
//	repeats                 how often splits were drawn
//	takes, tested, errors   different takes tested; tests; errors
//	error, accuracy         errors / tested, and 1 less that
//	low, high               95 % interval of the error
//	finding                 "helps", "hurts" or "no difference shown"           recorded+synthetic only, as …
//	reduction               1 − errors / errors with recorded takes alone; absent when those are none
//	reduction_low, …_high   its 95 % interval; low is absent when there is no lower limit
//	helped, hurt            takes recognised more often than with recorded takes alone, and less often
//	p                       of the difference, two-sided                        … far as here
//	per_label               list of label, tested, errors_recorded, and with synthetic takes
//	                        errors_with_synthetic, p_holm, finding
//	confusion               tests by label performed (row) and recognised (column), in the order of label_names
//	curve                   list, when asked for: per_take, errors, error, low, high, reduction, reduction_low,
//	                        reduction_high with fewer synthetic takes, the first so many in the order made
//	rejection               when asked for, of distances: threshold, error (the equal error rate), low, high,
//	                        gestures, others, rest (numbers of tests); see [Rejection]
//	comparisons, cells      pairs of takes, and cells of DTW tables or pairs of frames, that a program
//	                        without shortcuts would compute; 0 for learners without templates
package classify
