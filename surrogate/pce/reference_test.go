package pce

import (
	"context"
	"encoding/json"
	"math"
	"os"
	"testing"

	"gonum.org/v1/gonum/blas/blas64"
)

// reference holds testdata/reference/pce_reference.json; its origin is in
// surrogates.md beside it.
type reference struct {
	U               [][]float64
	Y               []float64
	OLS             []float64 `json:"ols"`
	Leverage        []float64
	LooResid        []float64 `json:"loo_resid"`
	ErrLoo          float64   `json:"err_loo"`
	RelLoo          float64   `json:"rel_loo"`
	ChapelleT       float64   `json:"chapelle_T"`
	RelLooCorrected float64   `json:"rel_loo_corrected"`
	Cooks           []float64 `json:"cooks_distance"`
	Mean            float64
	Variance        float64
	S1, S2          float64
	ST1, ST2        float64
	Multi           [][]int
	Ridge           struct {
		B0 float64
		B  []float64
	}
	Lasso struct {
		B0       float64
		B        []float64
		AlphaMax float64 `json:"alpha_max"`
	}
	LarPath struct {
		Alphas      []float64
		ActiveOrder []int     `json:"active_order"`
		CoefsLast   []float64 `json:"coefs_last"`
	} `json:"lar_path"`
}

func readReference(t *testing.T) reference {
	t.Helper()
	data, err := os.ReadFile("../../testdata/reference/pce_reference.json")
	if err != nil {
		t.Fatal(err)
	}
	var r reference
	if err := json.Unmarshal(data, &r); err != nil {
		t.Fatal(err)
	}
	return r
}

const referenceTolerance = 1e-9 // relative, of the printed values

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s = %.15g, want %.15g", what, got, want)
	}
}

func nearAll(t *testing.T, what string, got, want []float64, tolerance float64) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%s has %d values, want %d", what, len(got), len(want))
	}
	for i := range want {
		near(t, what, got[i], want[i], tolerance)
	}
}

func coefficients(e *Expansion, order [][]int) []float64 {
	byDegrees := map[string]float64{}
	key := func(a []int) string { b, _ := json.Marshal(a); return string(b) }
	for _, term := range e.Terms() {
		byDegrees[key(term.Degrees)] = term.Coefficient
	}
	var out []float64
	for _, a := range order {
		out = append(out, byDegrees[key(a)])
	}
	return out
}

func TestLeastSquaresAgainstReference(t *testing.T) {
	r := readReference(t)
	e, err := OLS{Truncation: Truncation{Degree: 3}, Exactly: true}.FitExpansion(context.Background(), r.U, r.Y)
	if err != nil {
		t.Fatal(err)
	}
	nearAll(t, "coefficient", coefficients(e, r.Multi), r.OLS, referenceTolerance)
	nearAll(t, "leverage", e.regression.leverage, r.Leverage, referenceTolerance)
	nearAll(t, "Cook's distance", e.Influence(), r.Cooks, referenceTolerance)
	squares := 0.0
	for i, p := range e.LeaveOneOut() {
		near(t, "leave-one-out residual", r.Y[i]-p, r.LooResid[i], referenceTolerance)
		squares += (r.Y[i] - p) * (r.Y[i] - p)
	}
	near(t, "mean squared leave-one-out error", squares/float64(len(r.Y)), r.ErrLoo, referenceTolerance)
	mean, variance := e.Moments()
	near(t, "mean", mean, r.Mean, referenceTolerance)
	near(t, "variance", variance, r.Variance, referenceTolerance)
	nearAll(t, "first-order index", e.FirstOrder(), []float64{r.S1, r.S2}, referenceTolerance)
	nearAll(t, "total index", e.Total(), []float64{r.ST1, r.ST2}, referenceTolerance)
}

func TestRidgeAgainstReference(t *testing.T) {
	r := readReference(t)
	e, err := Ridge{Truncation: Truncation{Degree: 3}, Growth: 1, Penalty: 0.1, Exactly: true}.FitExpansion(context.Background(), r.U, r.Y)
	if err != nil {
		t.Fatal(err)
	}
	nearAll(t, "coefficient", coefficients(e, r.Multi), append([]float64{r.Ridge.B0}, r.Ridge.B...), referenceTolerance)
}

func designOf(r reference) (blas64.General, []float64) {
	terms, _ := Truncation{Degree: 3}.indices(2, 100)
	return newBasis(make([]Input, 2), terms).design(r.U), r.Y
}

func TestLassoAgainstReference(t *testing.T) {
	r := readReference(t)
	design, y := designOf(r)
	rows := make([]int, len(y))
	for i := range rows {
		rows[i] = i
	}
	s := newSums(design, y, rows)
	v := s.covariance()
	near(t, "largest alpha", v.alphas()[0], r.Lasso.AlphaMax, referenceTolerance)
	solver := newLassoSolver(v)
	if !solver.solve(0.02, pathTolerance) {
		t.Error("not solved to tolerance")
	}
	nearAll(t, "coefficient", solver.b, r.Lasso.B, referenceTolerance)
	level := s.y / float64(s.n)
	for j, b := range solver.b {
		level -= b * s.total[j] / float64(s.n)
	}
	near(t, "constant", level, r.Lasso.B0, referenceTolerance)
	if worst := solver.violation(0.02); worst > 1e-10 {
		t.Errorf("optimality conditions are violated by %g", worst)
	}
}

func TestLeastAngleAgainstReference(t *testing.T) {
	r := readReference(t)
	design, y := designOf(r)
	order, sizes := newCovariance(design, y).leastAngle(100)
	for k, column := range order {
		if column-1 != r.LarPath.ActiveOrder[k] {
			t.Errorf("column %d enters at step %d, want %d", column-1, k, r.LarPath.ActiveOrder[k])
		}
	}
	nearAll(t, "correlation", sizes, r.LarPath.Alphas[:len(order)], referenceTolerance)
	if len(order) != len(r.LarPath.ActiveOrder) {
		t.Errorf("%d columns enter, want %d", len(order), len(r.LarPath.ActiveOrder))
	}
}

func TestCorrectedLeaveOneOutAgainstReference(t *testing.T) {
	r := readReference(t)
	design, y := designOf(r)
	f := factorise(design)
	errors, factors := f.looErrors(y), f.corrections()
	last := len(errors) - 1
	near(t, "correction", factors[last], r.ChapelleT, referenceTolerance)
	near(t, "mean squared error", errors[last]*errors[last], r.ErrLoo, referenceTolerance)
	mean, variance := 0.0, 0.0
	for _, v := range y {
		mean += v / float64(len(y))
	}
	for _, v := range y {
		variance += (v - mean) * (v - mean) / float64(len(y)-1)
	}
	near(t, "relative error", r.ErrLoo/variance, r.RelLoo, referenceTolerance)
	near(t, "corrected relative error", errors[last]*errors[last]*factors[last]/variance, r.RelLooCorrected, referenceTolerance)
}
