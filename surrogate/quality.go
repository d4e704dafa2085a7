package surrogate

import "math"

// Quality holds the leave-one-out figures of a fit, in the caller's unit where
// they have one.
type Quality struct {
	// Q2 is 1 - sum (y_i - y_-i)^2 / sum (y_i - mean y)^2: 1 is exact, 0 no
	// better than the mean of the data. It is 1 for a constant output that is
	// predicted exactly.
	Q2 float64
	// RMSE is the root mean square of y_i - y_-i.
	RMSE float64
	// Largest is the largest |y_i - y_-i|.
	Largest float64
	// Coverage is the fraction of samples within 1.96 leave-one-out standard
	// deviations: 0.95 for an honest deviation.
	Coverage float64
	// Standardised holds (y_i - y_-i)/s_-i; values outside [-3, 3] speak against
	// the fit (Jones, Schonlau & Welch 1998, section 4.3).
	Standardised []float64
}

// two-sided 95 % point of the normal distribution, as used in practice
const normal95 = 1.96

// Assess returns the leave-one-out figures of a fit to the outputs y.
func Assess(fitted Fitted, y []float64) Quality {
	predicted, deviation := fitted.LeaveOneOut(), fitted.LeaveOneOutDeviation()
	q := Quality{Q2: Q2(y, predicted), Standardised: make([]float64, len(y))}
	errors := make([]float64, len(y))
	inside := 0
	for i := range y {
		errors[i] = y[i] - predicted[i]
		q.Largest = math.Max(q.Largest, math.Abs(errors[i]))
		if math.Abs(errors[i]) <= normal95*deviation[i] {
			inside++
		}
		if errors[i] != 0 {
			q.Standardised[i] = errors[i] / deviation[i]
		}
	}
	q.RMSE = rootMeanSquare(errors, q.Largest)
	q.Coverage = float64(inside) / float64(len(y))
	return q
}

// RMSE returns the root mean square difference of two equally long slices.
func RMSE(y, predicted []float64) float64 {
	errors := make([]float64, len(y))
	largest := 0.0
	for i := range y {
		errors[i] = y[i] - predicted[i]
		largest = math.Max(largest, math.Abs(errors[i]))
	}
	return rootMeanSquare(errors, largest)
}

// Q2 returns 1 - sum (y_i - predicted_i)^2 / sum (y_i - mean y)^2. A constant y
// gives 1 where it is met within 1e-12 of its size and minus infinity elsewhere.
func Q2(y, predicted []float64) float64 {
	scaling, _, constant := Standardise(y)
	rmse := RMSE(y, predicted)
	if !constant {
		ratio := rmse / scaling.Scale
		return 1 - ratio*ratio
	}
	if rmse <= 1e-12*math.Abs(scaling.Center) {
		return 1
	}
	return math.Inf(-1)
}

// rootMeanSquare divides by the largest size first: no overflow, no underflow.
func rootMeanSquare(v []float64, largest float64) float64 {
	if largest == 0 || len(v) == 0 {
		return 0
	}
	sum := 0.0
	for _, e := range v {
		sum += (e / largest) * (e / largest)
	}
	return largest * math.Sqrt(sum/float64(len(v)))
}
