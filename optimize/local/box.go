package local

import "context"

// MinimizeBox minimises a smooth function over the box [low, high]. The function
// returns f and stores its gradient, so that an expensive f which yields both at
// once (a likelihood) is called once a trial point; a result that is not finite
// marks x as undefined. It is the method of Minimize without constraints: BFGS
// steps from a quadratic program with exact faces. The result has Gradients
// equal to the points accepted; the calls made are Values.
func MinimizeBox(ctx context.Context, low, high []float64, f func(x, grad []float64) float64, start []float64, settings Settings) (*Result, error) {
	latest := make([]float64, len(low))
	program := Program{
		Low:      low,
		High:     high,
		Value:    func(x, _ []float64) float64 { return f(x, latest) },
		Gradient: func(_, grad, _ []float64) { copy(grad, latest) },
	}
	if f == nil {
		program.Value = nil
	}
	return Minimize(ctx, &program, start, settings)
}
