// Package local finds a constrained local minimum of a smooth function of a few
// variables (to about 15) under many constraints (to about 250), as plain
// functions of numbers: it knows nothing of designs, limits or surrogates.
//
// The method is sequential quadratic programming: a damped BFGS model of the
// Lagrangian (Powell 1978; Nocedal & Wright, Numerical Optimization, 2nd ed.,
// Procedure 18.2), a dual active-set quadratic program (Goldfarb & Idnani,
// Mathematical Programming 27, 1983), an l1 merit function with a second-order
// correction against the Maratos effect (Nocedal & Wright section 18.3), and an
// elastic phase that minimises the l1 violation while the linearised
// constraints contradict each other. All cited from memory.
//
// MinimizeAugmented is a second, independent route by the augmented Lagrangian.
//
// In Minimize the box and the linear rows hold at every point where the functions are
// evaluated, to rounding; only the nonlinear constraints may be violated on the
// way.
package local
