// Package locus describes, follows and inverts the roots of a family of polynomials
//
//	A(s) + k·B(s),   k real,
//
// that depends linearly on one parameter: the characteristic polynomial of a loop with negative
// feedback around k·B/A, or of anything else with one parameter that enters linearly.
//
// # Conventions
//
// A [Family] is made of two real polynomials, exactly as they are: a given float64 is taken as
// the number it is, and A + k·B counts as formed without rounding. In a family of s, roots are in
// rad/s; in one of z, which knows its sampling period, they are ratios. Angles are in radians.
// The gain k has the unit that makes k·B/A a number, and both signs: [Positive] and [Negative]
// choose where it matters. Roots common to A and B are fixed: part of [Family.PolesAt] and of
// windows, but not of branches, angles or crossings.
//
// # What is answered
//
//   - [Family.PolesAt], [Family.Sensitivities]: the roots at a gain, and how fast they move.
//   - [Family.GainAt], [Family.Deficiency]: the gain for a point, and what a point lacks to be on
//     the locus.
//   - [Family.Asymptotes], [Family.BreakPoints], [Family.Departures], [Family.Arrivals],
//     [Family.RealSegments]: the facts that a locus is sketched by, complete and exact.
//   - [Family.Windows]: every gain for which all roots lie inside a [Region], as open intervals,
//     over all real k; [Family.WindowsOf] the same for a number of roots, [WindowsOfAll] for a
//     list of families. [Family.Crossings] and [Family.On] tell where branches meet a boundary.
//   - [Family.Trace]: the branches themselves.
//
// # What is guaranteed
//
// Nothing is found by a grid, and nothing is missed between grid points. The condition for a real
// gain on a line, ray or circle is a real polynomial; its roots are isolated, the gains read off
// and the roots inside counted once per interval. The first attempt is made in float64 with
// bounds on every error; where these do not prove the answer, exact arithmetic does. Gains are
// correct to 1e-12 in relation to themselves, as a rule to the last place. A break point is
// reported only if its gain is proved to be real.
//
// # Where it ends
//
// Regions with curved boundaries other than circles ([OnSamples], [Parametric]) are searched by
// intervals with bounds on the curve; where a branch touches such a boundary, or a break point
// lies on it, the answer is an [*UndecidedError]. A window too narrow to hold a float64 is not
// reported. Dead time in continuous time is a [*tf.UnsupportedError] here.
//
// All of this is about the model. A gain from it is a proposal: try it on the machine with limits,
// guards and an emergency stop, and follow local codes, functional-safety rules and licensed
// practice.
//
// Sources: W. R. Evans, Control system synthesis by root locus method, Trans. AIEE 69 (1950)
// 66–69; A. M. Eydgahi and M. Ghavamzadeh, Complementary root locus revisited, IEEE Trans. Educ. 44
// (2001) 137–143; those of the methods stand beside them.
package locus
