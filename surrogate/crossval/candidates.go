package crossval

import (
	"rampwright/surrogate"
	"rampwright/surrogate/gpr"
	"rampwright/surrogate/pce"
)

// Default returns the candidates of a design run: least-squares, least-angle
// and weighted expansion, and RBF Gaussian process. On 30..150 samples of 2..8
// inputs the four with all transforms fit in well under a second.
func Default(seed int64) []surrogate.Model {
	return []surrogate.Model{pce.OLS{}, pce.LeastAngle{}, pce.Ridge{}, gpr.Config{Seed: seed}}
}

// Every returns the default candidates and, beyond them, the lasso and a
// rougher Gaussian process, for studies where time does not matter.
func Every(seed int64) []surrogate.Model {
	return append(Default(seed), pce.Lasso{Seed: seed}, gpr.Config{Kernel: gpr.Matern52, Seed: seed})
}
