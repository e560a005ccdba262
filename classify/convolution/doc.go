// Package convolution is the second witness of a score: a learner that shares
// nothing with the nearest template, so that a gain which both show is no
// artefact of templates. It describes a take by its responses to random
// convolution kernels and tells labels apart by ridge regression on them:
// A. Dempster, F. Petitjean, G. I. Webb, "ROCKET: exceptionally fast and
// accurate time series classification using random convolutional kernels",
// Data Mining and Knowledge Discovery 34 (2020) 1454–1495,
// https://arxiv.org/abs/1910.13051, written here from the description.
//
// # Features
//
// Takes are read at a common number of frames, at equal intervals of their
// clock and linearly between frames, and then normalised. A kernel has l taps
// d frames apart, the dilation, on some of the channels. Its response at frame
// i of take x is
//
//	z(i) = b + Σ_c Σ_j w_c(j) · x_c(i + j·d),  j = 0 … l−1
//
// over its channels c, and the take's two features of it are the largest
// response and the share of responses above zero. Kernels are drawn as
// published:
//
//	l  7, 9 or 11 with equal chance
//	w  from the normal distribution N(0, 1), less the mean of the l weights of its channel
//	b  uniform on (−1, 1)
//	d  ⌊2^u⌋, u uniform on (0, log2((frames − 1)/(l − 1)))
//
// and with an even chance the take is padded with (l − 1)·d/2 zeros at both
// ends, so that there is a response at every frame; else the kernel stays
// inside. A kernel reads ⌊2^v⌋ channels, v uniform on (0, log2(min(channels,
// l) + 1)), drawn without replacement: the authors' form for several channels
// (memory), the idea of which is described in Ruiz, Flynn, Large, Middlehurst,
// Bagnall, "The great multivariate time series classification bake off", Data
// Mining and Knowledge Discovery 35 (2021) 401–449. For one channel it is the
// published univariate form.
//
// The published learner differs in three ways: it has 10 000 kernels, reads
// takes at the length they share, and chooses the strength by leaving out
// single takes.
//
// # Ridge
//
// Features are taken less their mean over the training takes and divided by
// their standard deviation; one that does not vary counts for nothing. Each
// label has a linear function fitted to +1 on its own takes and −1 on the
// others, with the sum of squared weights times the strength as penalty and
// the constant free of it; the label of the greatest value is predicted. The
// equations are solved by Cholesky decomposition in the smaller of two forms,
// by rows while there are no more rows than features, else by features, which
// needs no row to be kept.
//
// The strength is fixed or chosen by validation. Leaving out single rows would
// be fooled by synthetic takes: the row left out has near-copies among the
// others, and next to no penalty looks best. So a recorded take is always left
// out together with all takes made from it; see [Ridge].
package convolution
