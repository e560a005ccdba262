// Package template finds, for each of a number of takes, the nearest of a
// stream of templates: the nearest-template baseline. The search is exact: it
// gives what comparing every pair in full would give, ties included.
//
// # Distances
//
// Takes x and y have C channels; x_c is channel c of x. Definitions of the
// first four are those of Shifaz, Pelletier, Petitjean, Webb, "Elastic
// similarity and distance measures for multivariate time series", Knowledge
// and Information Systems (2023), https://arxiv.org/abs/2102.10231.
//
//	euclidean-dependent    √ Σ_c Σ_i (x_c(i) − y_c(i))²
//	euclidean-independent  Σ_c √ Σ_i (x_c(i) − y_c(i))²
//	dtw-dependent          least Σ of Σ_c (x_c(i) − y_c(j))² along one path for all channels
//	dtw-independent        Σ_c √ (least Σ of (x_c(i) − y_c(j))² along a path of channel c)
//	direction-cosine       mean over groups and steps of 1 − cos(step of x, step of y)
//
// A dynamic time warping (DTW) path runs from the first frames to the last by
// steps of one frame in either take or both (Sakoe and Chiba, IEEE
// Transactions on Acoustics, Speech, and Signal Processing 26 (1978) 43).
//
// Euclidean distances need a common length, see [Metric.Length]; DTW takes
// takes as long as they are. For the direction cosine, each group's path is
// cut into 16 steps of equal arc length and only the steps' directions are
// kept. A step without length (a group at rest, or a path that comes back to
// the same point) has a direction of its own at right angles to every other:
// it is at 0 from another such step and at 1 from a step that moves.
//
// With weights, see [Metric], a distance is the sum over channel groups of
// weight × distance of the group alone.
//
// # Search
//
// Dynamic time warping costs a table per pair, so that most pairs should never
// come to it. Every query visits the templates of a block in the order of the
// first of these bounds, and gives one up at the first that is above the
// distance of the nearest template so far:
//
//  1. the first frames and the last, which every path holds against each other;
//  2. the query's segments against the template's envelope within the band, or
//     its range in the full window, and
//  3. the template's against the query's (LB_Keogh both ways, on means of four
//     frames);
//  4. dynamic time warping of the sketches of the two: takes rounded to whole
//     numbers, three channels to a machine word. Cells are left out, and the
//     table given up, where no path can end below the nearest, counting what 2 or
//     3 says is to come;
//  5. the table itself, given up in the same way.
//
// Bounds 1 to 4 are in exact integer arithmetic on sketches, and allow for what
// rounding to whole numbers can take off a distance; [Counts] says what each of
// them threw out. A pair at the same distance as the nearest is never thrown
// out, so that ties go to the first template by order. LB_Improved (Lemire,
// Pattern Recognition 42 (2009) 2169) is not among the bounds: on noisy random
// walks of 128 frames and 6 channels, a table of sketches is given up after a
// third of its cells, which takes less time than its second envelope would, and
// it throws out all but a few in a thousand of the pairs that can be.
package template
