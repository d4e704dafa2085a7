package robust

import "math"

// reliability is the nearest way to break a limit over its rows and their sides, on
// surrogates continued beyond the truncation; nil where nothing moves it or no
// point of zero margin is found.
func reliability(l *limited, fits []Fit, inputs int) *Reliability {
	var nearest *Reliability
	for i := range l.rows {
		fit := fitOf(fits, l.rows[i].Index)
		if fit == nil {
			continue
		}
		for _, bound := range l.rows[i].Bounds() {
			found, err := FORM(inputs, func(u, gradient []float64) float64 {
				at := make([]float64, inputs)
				toCube(at, u, span)
				v := fit.Choice.Gradient(gradient, at)
				for j := range gradient {
					gradient[j] *= -bound.Sign / (2 * span)
				}
				return bound.Sign * (bound.At - v)
			})
			if err == nil && !math.IsNaN(found.Beta) && (nearest == nil || found.Beta < nearest.Beta) {
				nearest = &found
			}
		}
	}
	return nearest
}

// fitOf is the usable surrogate of a quantity, nil without.
func fitOf(fits []Fit, quantity int) *Fit {
	for k := range fits {
		if fits[k].Quantity == quantity && fits[k].Err == nil {
			return &fits[k]
		}
	}
	return nil
}
