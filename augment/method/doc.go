// Package method has the published ways of making a synthetic take from a
// recorded one that the product's own recipe is compared with.
//
// Each method is a small struct of parameters with one method Apply, a pure
// function of the values of a take, its clock and a generator:
//
//	method         what it does                                source
//	Jitter         independent noise on every value            Um et al. 2017
//	Scaling        one factor per channel                      Um et al. 2017
//	Rotation       one rotation of the axes                    Um et al. 2017
//	MagnitudeWarp  a smooth factor per channel                 Um et al. 2017
//	TimeWarp       a smooth time map                           Um et al. 2017
//	Slice          a stretched part of the take                Le Guennec et al. 2016
//	NoiseField     smooth displacement by gradient noise       Perlin 1985, 2002
//	Parts          parts of the path turned, scaled, shifted   Varga & Bunke 2003; Mouchère et al. 2007
//	Barycentre     weighted average under time warping         Petitjean et al. 2011; Forestier et al. 2017
//
// # Values and units
//
// src is frames × width values, frame-major, of one channel group or of several
// that are to vary as one; time has one instant per frame, in seconds,
// strictly increasing. A size that has no unit of its own is in the unit of
// the values: the published settings, which the Published functions return, are
// fractions of a group's root mean square, meant for values divided by it.
// The clock of the new take is the source's.
//
// # Contract
//
// Apply writes into dst, which must hold as many values as src and must not
// overlap it, and returns it; nil allocates. It panics when the sizes disagree.
// A method of no strength gives the source back. The same generator state
// gives the same values. Finite values stay finite.
//
// # Sources
//
//   - Um, Pfister, Pichler, Endo, Lang, Hirche, Fietzek, Kulić, "Data
//     augmentation of wearable sensor data for Parkinson's disease monitoring
//     using convolutional neural networks", ICMI 2017, 216–220 (arXiv
//     1706.00527). Its settings are written down here from memory.
//   - Le Guennec, Malinowski, Tavenard, "Data augmentation for time series
//     classification using convolutional neural networks", ECML/PKDD Workshop
//     on Advanced Analytics and Learning on Temporal Data, 2016.
//   - Perlin, "An image synthesizer", SIGGRAPH 1985, 287–296; "Improving
//     noise", SIGGRAPH 2002, 681–682.
//   - Varga, Bunke, "Generation of synthetic training data for an HMM-based
//     handwriting recognition system", ICDAR 2003, 618–622 (memory); Mouchère,
//     Bayoudh, Anquetil, Miclet, "Synthetic on-line handwriting generation by
//     distortions and analogy", IGS 2007 (memory).
//   - Petitjean, Ketterlin, Gançarski, "A global averaging method for dynamic
//     time warping, with applications to clustering", Pattern Recognition 44
//     (2011) 678–693; Forestier, Petitjean, Dau, Webb, Keogh, "Generating
//     synthetic time series to augment sparse datasets", ICDM 2017, 865–870.
package method
