// Package lognormal takes a path apart into the strokes of the sigma-lognormal
// model, changes the strokes' parameters a little and puts a new path together
// from them.
//
// # The model
//
// The kinematic theory of rapid movements (Plamondon, "A kinematic theory of
// rapid human movements", Biological Cybernetics 72 (1995) 295) has a movement
// as the sum of strokes that overlap in time. The speed of one is
//
//	D·Λ(t; t₀, μ, σ²) = D/(σ√2π (t−t₀)) · exp(−(ln(t−t₀)−μ)²/2σ²),  t > t₀
//
// with D the stroke's length in the unit of the path, t₀ in seconds the time
// of its command, μ and σ its log-time delay and log-response time. In the
// sigma-lognormal form (O'Reilly & Plamondon, "Development of a
// Sigma–Lognormal representation for on-line signatures", Pattern Recognition 42
// (2009) 3324–3337) the direction turns from θs to θe in step with the distance
// covered: the stroke is a circular arc.
//
// In space an arc lies in a plane of its own. That plane is spanned by the
// direction half-way along the stroke and the normal it turns towards: our
// extension, which in the plane is the published model.
//
// # Extraction
//
// [Extract] follows the outline of the robust XZERO extractor of that paper:
// take the largest peak of the speed that is left unexplained, estimate a
// lognormal from its characteristic points, refine it, take it off, go on. The
// refinement is Levenberg–Marquardt least squares (Marquardt, J. SIAM 11 (1963)
// 431) with exact derivatives, on each new stroke and those it overlaps, and on
// all strokes together at the end. The reconstruction is judged by its
// signal-to-noise ratio in decibels, of velocities v and their model v̂:
//
//	SNR = 10 log₁₀(Σ|v|² / Σ|v − v̂|²)
//
// A path that the model does not reach is refused with a [*PoorFitError].
package lognormal
