// Package variation measures how takes of one label differ, and says it in
// the sizes of the model by which takes are made: how much their tempo
// changes and how smoothly, how early they begin and late they end, how long
// they last, how large they are, how they are turned, what else is different,
// and how much a sensor at rest trembles.
//
// # What is measured
//
// Takes are brought to [Options.Frames] frames, each channel group divided by
// its size over all takes, and pairs of takes of one label are aligned by
// dynamic time warping (package align). Each pair gives a number for each
// thing that differs: the mean squared log slope of the timing map, the
// squared offset at the open ends, the log ratio of root mean squares, the
// angle of the rotation that fits best, and the rest that is left.
//
// # What the figures mean
//
// Such a number is not yet a size of the model: noise makes a timing map
// ragged where nothing was re-timed, an open end hides a trim that is larger
// than it may open, a take that is turned is also aligned less well. The
// takes are therefore varied by the model itself, with sizes guessed, aligned
// and measured in the same way, with each part and without it, and the sizes
// are moved until what the model gives is what the recordings gave (indirect
// inference: Gouriéroux, Monfort and Renault, Journal of Applied Econometrics
// 8 (1993) S85–S118). [Figure.Measured] is the size found so, [Figure.Raw] the
// plain number.
//
// Intervals are 95 % and come from weighting the takes at random (Rubin, "The
// Bayesian bootstrap", Annals of Statistics 9 (1981) 130–134): the spread of
// the logarithm over the weightings, never less than that of a variance with
// as many degrees of freedom, times the quantile of Student's distribution.
//
// Figures that the test of this package plants come back: see TestPlanted.
// Where a part is hidden by the others, as timing is where takes of a label
// differ much in shape, the figure says so instead of giving a size.
//
// # What is used
//
// [Figure.Used] is what a maker of takes should use. It is the documented
// default ([Part.Default]) where there is nothing to measure, and else lies
// between the default and what was measured: with p more takes than labels,
// the measured size counts p/(p+10). A label's own figure is drawn towards
// that of all labels in the same way. Timing, trim and orientation are used
// as they served best in making takes, not as they measure: see [Part.Default].
package variation
