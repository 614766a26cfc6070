// Package tf holds what a loop designer has in hand before any design: plants from data sheets
// or derivations, controllers, and the loops made of them, in continuous time or sampled,
// with dead time.
//
// # Conventions
//
// SI units: seconds, radians, rad/s. Polynomials stand highest power first. A period of 0
// means continuous time and functions of s; otherwise functions are of z and the region of
// stability is the open unit disc. The loop has negative feedback: its characteristic equation
// is 1 + controller·plant·sensor = 0.
//
// The zero [Function] is a plain wire of gain 1. A Function returned together with an error
// is invalid: its value is NaN everywhere and every use of it returns that error.
//
// # What is where
//
// [Parse], [New], [FromRoots], [FromStateMatrices] and the constructors by the trade's names
// make functions; the controllers and filters ([PID], [Lead], [Butterworth], …) are values that
// say their parameters. [Function.Series], [Function.Parallel] and [Function.Feedback] join
// functions, [Loop] closes them around a plant: [Loop.Open], [Loop.Closed], [Loop.Path] between any
// two points, [Loop.Margins], [Loop.InternalStability], [Loop.ErrorConstants].
// [Function.Sample] goes to sampled time, [Function.Continuous] comes back; a controller in
// z around a plant in s is a sampled-data loop.
//
// # What is guaranteed
//
// Series, parallel and feedback connections are formed without rounding, dead times are
// added without rounding, and nothing cancels unless a call is made to cancel it: an
// unstable pole that a controller's zero hides stays in sight. Roots that were given are
// kept. [Parse] of [Function.String] is the identical function. Sampled functions carry as many
// digits as keep their zeros, poles and static gain right to float64 however short or long the
// period. Values are immutable and hold no caches.
//
// # Where it ends
//
// What a model says about a machine is a proposal, and no more certain than the model. Try it
// with limits, guards and an emergency stop; local codes, functional-safety rules and licensed
// practice prevail.
package tf
