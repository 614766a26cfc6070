// Package hybrid follows a control loop whose parts are linear but for the limit of its
// actuator, in continuous time or with a sampled controller, dead time anywhere.
//
// Between switching instants, sampling instants and jumps of the inputs the loop is linear
// with polynomial or otherwise analytic inputs. There its signals are Taylor series about the
// start of a segment, formed by recurrence (Hairer, Nørsett, Wanner, Solving Ordinary
// Differential Equations I, section I.8); a segment is short enough for the terms left out
// to be below the rounding of those kept. A delayed signal is the series of an earlier
// segment, so that dead time needs no approximation: the method of steps, with every kink
// carried on from one interval to the next.
//
// Where the actuator reaches or leaves its limit is a root of such a series, isolated by
// the sign changes of its Bernstein coefficients, so that no excursion is stepped over.
//
// Guarantee: rounding and truncation of a segment are near unit roundoff, but their growth
// over many segments is not bounded here. The error is small and not proved.
package hybrid
