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
package template
