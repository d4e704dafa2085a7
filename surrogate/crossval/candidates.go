package crossval

import (
	"slices"

	"rampwright/surrogate"
	"rampwright/surrogate/gpr"
	"rampwright/surrogate/pce"
)

// Default returns the candidates for general use: least-squares, least-angle and
// weighted expansion, and Gaussian processes with the RBF and the rougher
// Matern 5/2 kernel. On 30..150 samples of 2..8 inputs the five with all
// transforms fit in about a second at most.
func Default(seed int64) []surrogate.Model {
	return []surrogate.Model{pce.OLS{}, pce.LeastAngle{}, pce.Ridge{}, gpr.Config{Seed: seed}, gpr.Config{Kernel: gpr.Matern52, Seed: seed}}
}

// Every returns the default candidates and the lasso, for studies where time does
// not matter; the Matern kernel comes last.
func Every(seed int64) []surrogate.Model {
	return slices.Insert(Default(seed), 4, surrogate.Model(pce.Lasso{Seed: seed}))
}
