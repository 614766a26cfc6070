// Package ode integrates ordinary differential equations y′ = f(t, y), y real of any
// dimension, with dense output and located events.
//
// Two methods share one interface. The explicit Runge–Kutta method of order 8 by Dormand
// and Prince (Hairer, Nørsett, Wanner, Solving Ordinary Differential Equations I, section
// II.5) is for problems without stiffness; the implicit Radau IIA method of order 5, which
// is L-stable (Hairer, Wanner, Solving Ordinary Differential Equations II, section IV.8),
// for stiff ones. The default starts with the first and changes where the stiffness that
// is measured on the way says so.
//
// Guarantee: none that is proved. The local error of each step is estimated and held below
// RelTol·|y| + AbsTol, and the global error is an estimate too. What needs proof has to
// come from elsewhere; this package is the independent second way.
package ode
