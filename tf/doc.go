// Package tf holds transfer functions as engineers write them down: plants, controllers and
// the loops made of them, in continuous time or sampled, with dead time.
//
// # Conventions
//
// SI units: seconds, radians, rad/s. Polynomials stand highest power first. A period of 0
// means continuous time and functions of s; otherwise functions are of z. The loop has
// negative feedback: its characteristic equation is 1 + controller·plant·sensor = 0.
//
// The zero [Function] is a plain wire of gain 1. A Function returned together with an error
// is invalid: its value is NaN everywhere and every use of it returns that error.
//
// # What is guaranteed
//
// Series, parallel and feedback connections are formed without rounding, dead times are
// added without rounding, and nothing cancels unless a call is made to cancel it: an
// unstable pole that a controller's zero hides stays in sight. Roots that were given are
// kept.
//
// What a model says about a machine is a proposal. Try it with limits, guards and an
// emergency stop; local codes and functional-safety rules prevail.
package tf
