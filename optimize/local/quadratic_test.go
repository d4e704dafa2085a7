package local

import (
	"math"
	"math/rand/v2"
	"testing"
)

// twoVariables is min 1/2 |p|^2 under rows held at 0.
func twoVariables(normal, offset []float64, weight float64) *quadratic {
	q := &quadratic{}
	q.resize(2, len(offset))
	copy(q.hessian, []float64{1, 0, 0, 1})
	copy(q.normal, normal)
	copy(q.offset, offset)
	for j := range 2 {
		q.width[j], q.below[j], q.above[j] = 1, -1e6, 1e6
	}
	for i := range offset {
		q.least[i], q.most[i] = -weight, weight
	}
	q.measureRows()
	return q
}

// Rows that differ by rounding only are one row: no step along their difference.
func TestParallelRowsAreDependent(t *testing.T) {
	q := twoVariables([]float64{1, 0, 1, 1e-15}, []float64{-1, -1 - 1e-12}, math.Inf(1))
	if got := q.solve(); got != inconsistent {
		t.Errorf("outcome %v with step %v", got, q.step)
	}
	q = twoVariables([]float64{1, 0, 1, 1e-15}, []float64{-1, -1 - 1e-12}, 5)
	if got := q.solve(); got != solved || math.Abs(q.step[0]-1) > 1e-11 || math.Abs(q.step[1]) > 1e-11 {
		t.Errorf("outcome %v with step %v", got, q.step)
	}
}

// The elastic program against its optimality conditions: B p + g + sum lambda a
// - low + high = 0 with every multiplier at the end its residual asks for.
func TestElasticProgramsMeetTheirConditions(t *testing.T) {
	random := rand.New(rand.NewPCG(8, 9))
	for range 2000 {
		n, m := 1+random.IntN(6), random.IntN(20)
		q := &quadratic{}
		q.resize(n, m)
		for j := range n {
			for k := range j + 1 {
				v := 0.3 * random.NormFloat64() / float64(n)
				q.hessian[j*n+k], q.hessian[k*n+j] = v, v
			}
			q.hessian[j*n+j] = 1 + random.Float64()
			q.gradient[j] = random.NormFloat64()
			q.width[j], q.below[j], q.above[j] = 1, -random.Float64(), random.Float64()
		}
		for i := range m {
			for j := range n {
				q.normal[i*n+j] = float64(random.IntN(5) - 2)
			}
			q.offset[i] = float64(random.IntN(7)-3) / 2
			q.most[i] = 0.1 + random.Float64()
			if random.IntN(3) == 0 {
				q.least[i] = -q.most[i]
			}
		}
		q.measureRows()
		if got := q.solve(); got != solved {
			t.Fatalf("outcome %v", got)
		}
		const tolerance = 1e-10
		for j := range n {
			sum := q.gradient[j] + q.multiplier[m+n+j] - q.multiplier[m+j]
			for k := range n {
				sum += q.hessian[j*n+k] * q.step[k]
			}
			for i := range m {
				sum += q.multiplier[i] * q.normal[i*n+j]
			}
			if math.Abs(sum) > tolerance {
				t.Fatalf("stationarity %d: %g", j, sum)
			}
		}
		for row, multiplier := range q.multiplier {
			least, most := q.multiplierRange(row)
			value := q.value(row)
			switch {
			case multiplier < least || multiplier > most:
				t.Fatalf("row %d: multiplier %g outside [%g, %g]", row, multiplier, least, most)
			case value > tolerance && multiplier < most,
				value < -tolerance && multiplier > least:
				t.Fatalf("row %d: residual %g with multiplier %g in [%g, %g]", row, value, multiplier, least, most)
			}
		}
	}
}
