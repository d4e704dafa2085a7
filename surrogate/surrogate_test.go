package surrogate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

func TestStandardise(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		scale := math.Pow(10, rapid.Float64Range(-300, 300).Draw(t, "log scale"))
		y := rapid.SliceOfN(rapid.Float64Range(-1, 1), 2, 30).Draw(t, "y")
		for i := range y {
			y[i] *= scale
		}
		s, scaled, constant := Standardise(y)
		mean, variance := 0.0, 0.0
		for i, v := range scaled {
			mean += v / float64(len(y))
			variance += v * v / float64(len(y))
			if back := s.Undo(v); math.Abs(back-y[i]) > 1e-12*scale {
				t.Fatalf("output %g comes back as %g", y[i], back)
			}
		}
		if constant != (variance == 0) || !constant && (math.Abs(mean) > 1e-6 || math.Abs(variance-1) > 1e-9) {
			t.Fatalf("mean %g, variance %g, constant %v", mean, variance, constant)
		}
	})
	for _, level := range []float64{0, 1e300, -1e-300, 0.1} {
		s, scaled, constant := Standardise([]float64{level, level, level})
		if !constant || math.Abs(s.Undo(scaled[1])-level) > 1e-15*math.Abs(level) {
			t.Errorf("constant %g: %v %v %v", level, s, scaled, constant)
		}
	}
}

func TestCheckNamesTheFault(t *testing.T) {
	for _, c := range []struct {
		name        string
		x           [][]float64
		y           []float64
		row, column int
	}{
		{"fewer outputs", [][]float64{{1}, {0}}, []float64{1}, -1, -1},
		{"too few", [][]float64{{1}}, []float64{1}, -1, -1},
		{"no inputs", [][]float64{{}, {}}, []float64{1, 2}, -1, -1},
		{"ragged", [][]float64{{1, 0}, {1}}, []float64{1, 2}, 1, -1},
		{"NaN input", [][]float64{{1, 0}, {1, math.NaN()}}, []float64{1, 2}, 1, 1},
		{"unscaled input", [][]float64{{1, 0}, {2000, 0}}, []float64{1, 2}, 1, 0},
		{"infinite output", [][]float64{{1}, {0}}, []float64{math.Inf(1), 2}, 0, -1},
	} {
		err := Check(c.x, c.y, 2)
		var data *DataError
		if !errors.As(err, &data) || data.Row != c.row || data.Column != c.column || data.Error() == "" {
			t.Errorf("%s: %v", c.name, err)
		}
	}
	if err := Check([][]float64{{0}, {1}}, []float64{1, 2}, 2); err != nil {
		t.Error(err)
	}
}

func TestBoxRoundTrip(t *testing.T) {
	b := Box{Low: []float64{3, -2}, High: []float64{16, 12}}
	x, u := make([]float64, 2), make([]float64, 2)
	for _, want := range [][]float64{{0, 1}, {1, 0}, {0.25, 0.75}} {
		b.FromUnit(x, want)
		b.ToUnit(u, x)
		for j := range want {
			if math.Abs(u[j]-want[j]) > 1e-15 {
				t.Errorf("%v comes back as %v", want, u)
			}
		}
	}
	if b.FromUnit(x, []float64{1, 0}); x[0] != 16 || x[1] != -2 {
		t.Errorf("faces %v", x)
	}
}

// fixed is a fit with given leave-one-out predictions and deviations.
type fixed struct{ loo, deviation []float64 }

func (fixed) Mean([]float64) float64               { return 0 }
func (fixed) Predict([]float64) (float64, float64) { return 0, 0 }
func (fixed) Gradient(_, _ []float64) float64      { return 0 }
func (f fixed) LeaveOneOut() []float64             { return f.loo }
func (f fixed) LeaveOneOutDeviation() []float64    { return f.deviation }
func (fixed) Complexity() int                      { return 0 }
func (fixed) Describe() string                     { return "" }
func (fixed) Warm() Model                          { return nil }

// By hand: y = 1, 2, 3, 4 predicted 1, 2, 3, 5: one error of 1, total sum of
// squares 5.
func TestAssessByHand(t *testing.T) {
	y := []float64{1, 2, 3, 4}
	q := Assess(fixed{[]float64{1, 2, 3, 5}, []float64{1, 1, 1, 0.4}}, y)
	if math.Abs(q.Q2-0.8) > 1e-15 || q.RMSE != 0.5 || q.Largest != 1 || q.Coverage != 0.75 || q.Standardised[3] != -2.5 {
		t.Errorf("%+v", q)
	}
	level := []float64{3, 3, 3}
	if got := Q2(level, level); got != 1 {
		t.Errorf("an exact constant has Q2 %g", got)
	}
	if got := Q2(level, []float64{3, 3, 4}); !math.IsInf(got, -1) {
		t.Errorf("a missed constant has Q2 %g", got)
	}
	if got := RMSE([]float64{1e300, -1e300}, []float64{-1e300, 1e300}); math.Abs(got/2e300-1) > 1e-15 {
		t.Errorf("large errors have root mean square %g", got)
	}
}

func TestTrust(t *testing.T) {
	d := NewDomain([][]float64{{0, 0}, {0.4, 0}, {0.4, 0.2}})
	for _, c := range []struct {
		u            []float64
		nearest      int
		distance     float64
		relative     float64
		extrapolated bool
	}{
		{[]float64{0, 0}, 0, 0, 0, false},
		{[]float64{0.4, 0.5}, 2, 0.3, 0.75, false},
		{[]float64{1, 1}, 2, 1, 2.5, true},
		{[]float64{-0.1, 0}, 0, 0.1, 0.25, true},
	} {
		got := d.Judge(c.u)
		if got.Nearest != c.nearest || math.Abs(got.Distance-c.distance) > 1e-12 || math.Abs(got.Relative-c.relative) > 1e-12 || got.Extrapolated() != c.extrapolated || (got.Warning() != "") != c.extrapolated {
			t.Errorf("%v: %+v, %q", c.u, got, got.Warning())
		}
	}
	if one := NewDomain([][]float64{{0.5}}).Judge([]float64{0.6}); !one.Extrapolated() {
		t.Errorf("one sample: %+v", one)
	}
	if none := NewDomain(nil).Judge([]float64{0.6}); none.Nearest != -1 || !none.Extrapolated() {
		t.Errorf("no sample: %+v", none)
	}
}

// u1 + 2 u2 on the unit square has mean 1.5 and variance 5/12; estimates lie
// within four of their standard errors.
func TestSampledMoments(t *testing.T) {
	source := rand.New(rand.NewPCG(1, 2))
	draws := make([][]float64, 5000)
	for i := range draws {
		draws[i] = []float64{source.Float64(), source.Float64()}
	}
	m := Sampled(func(u []float64) float64 { return u[0] + 2*u[1] }, draws)
	if math.Abs(m.Mean-1.5) > 4*m.MeanError || math.Abs(m.Deviation-math.Sqrt(5.0/12)) > 4*m.DeviationError {
		t.Errorf("%+v", m)
	}
	if math.Abs(m.MeanError-math.Sqrt(5.0/12/5000)) > 1e-3 || m.DeviationError > m.MeanError || !(m.DeviationError > 0.1*m.MeanError) {
		t.Errorf("errors %+v", m)
	}
	if c := Sampled(func([]float64) float64 { return 7 }, draws); c.Mean != 7 || c.Deviation != 0 || c.MeanError != 0 {
		t.Errorf("constant: %+v", c)
	}
	if one := Sampled(func([]float64) float64 { return 7 }, draws[:1]); one.Mean != 7 || !math.IsNaN(one.Deviation) {
		t.Errorf("one draw: %+v", one)
	}
}
