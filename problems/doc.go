// Package problems is the contract between a design problem and everything
// that searches it: variables, quantities, limits, evaluations and the typed
// reasons why a value is missing. It holds no physics.
//
// Values cross this boundary in the unit their name states (degrees in
// ramp_1_angle_deg, kilopascals in throat_pressure_kPa); behind it, physics
// works in SI units and radians.
package problems
