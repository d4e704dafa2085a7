package pce

// Moments returns mean and variance of the expansion under the distribution of
// its inputs: c_0 and the sum of the other squared coefficients (Sudret 2008).
func (e *Expansion) Moments() (mean, variance float64) {
	sum := 0.0
	for _, c := range e.scaled[1:] {
		sum += c * c
	}
	return e.scaling.Undo(e.scaled[0]), e.scaling.Scale * e.scaling.Scale * sum
}

// FirstOrder returns the first-order Sobol' indices: the share of the variance
// from terms in input j alone (Sudret 2008). All are 0 for a constant.
func (e *Expansion) FirstOrder() []float64 {
	return e.shares(func(a index, j int) bool { return a[j] > 0 && a.total() == int(a[j]) })
}

// Total returns the total Sobol' indices: the share of the variance from all
// terms that contain input j (Homma & Saltelli 1996; Sudret 2008).
func (e *Expansion) Total() []float64 {
	return e.shares(func(a index, j int) bool { return a[j] > 0 })
}

// Interaction returns the Sobol' index of a set of inputs: the share of the
// variance from terms that contain exactly these.
func (e *Expansion) Interaction(inputs ...int) float64 {
	member := make([]bool, len(e.basis.inputs))
	for _, j := range inputs {
		member[j] = true
	}
	return e.share(func(a index) bool {
		for j, k := range a {
			if (k > 0) != member[j] {
				return false
			}
		}
		return true
	})
}

func (e *Expansion) shares(counts func(a index, j int) bool) []float64 {
	shares := make([]float64, len(e.basis.inputs))
	for j := range shares {
		shares[j] = e.share(func(a index) bool { return counts(a, j) })
	}
	return shares
}

// share returns the part of the variance from the terms that count.
func (e *Expansion) share(counts func(a index) bool) float64 {
	part, whole := 0.0, 0.0
	for t, a := range e.basis.terms[1:] {
		square := e.scaled[t+1] * e.scaled[t+1]
		whole += square
		if counts(a) {
			part += square
		}
	}
	if whole == 0 {
		return 0
	}
	return part / whole
}

// Influence returns Cook's distance of each sample,
//
//	D_i = e_i^2 h_i / (P s^2 (1 - h_i)^2)
//
// (Cook 1977); more than 4/n marks a sample that alone moves the fit. It is nil
// for fits that are not plain least squares, and 0 where the fit is exact.
func (e *Expansion) Influence() []float64 {
	g := e.regression
	if g == nil {
		return nil
	}
	distance := make([]float64, len(g.residual))
	if g.s == 0 {
		return distance
	}
	for i, r := range g.looResidual {
		t := r / g.s
		distance[i] = t * t * g.leverage[i] / float64(len(g.coefficients))
	}
	return distance
}
