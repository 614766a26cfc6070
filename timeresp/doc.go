// Package timeresp computes the time responses of linear functions and loops, and the
// figures of merit that gains are accepted on.
//
// A [Response] is known at every instant, not at samples: for rational functions it is the
// sum of the modes of the certified poles, with dead time the exact solution of the delay
// equation, interval by interval. Nothing is approximated by a rational function, and no
// figure is read off samples: [Response.Figures] finds crossings and extrema by root-finding
// on cells with a proven error, up to a horizon after which the modes together cannot leave
// the band.
//
// Times are in seconds, counted from t = 0 with dead time included; before it everything is
// at rest. Ratios are fractions of the final value. What does not exist is NaN.
//
// # Accuracy
//
// The error of [Response.At] is below 1e-11 of the largest |y| so far, at every t: early on,
// where all modes nearly cancel; for repeated and nearly repeated poles; for time constants
// many decades apart. Where that cannot be reached the call says so with an error.
//
// # Caution
//
// A response is that of the model. Gains that it recommends are proposals: try them on the
// machine with limits, guards and an emergency stop in place; local codes, rules of
// functional safety and licensed practice prevail.
package timeresp
