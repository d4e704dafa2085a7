package pce

import (
	"encoding/json"
	"math"
	"os"
	"strconv"
	"testing"

	"rampwright/surrogate"
	"rampwright/surrogate/doe"
)

// publishedIndices holds what testdata/reference/methods_checks.json gives for a
// function: numbers written as text, with all their digits.
type publishedIndices struct {
	A    []string
	S    []string
	ST   []string
	Mean json.Number
	Var  string
}

func numbers(t *testing.T, text []string) []float64 {
	t.Helper()
	out := make([]float64, len(text))
	for i, s := range text {
		v, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		out[i] = v
	}
	return out
}

func readPublished(t *testing.T, name string, into any) {
	t.Helper()
	data, err := os.ReadFile("../../testdata/reference/methods_checks.json")
	if err != nil {
		t.Fatal(err)
	}
	var all map[string]json.RawMessage
	if err := json.Unmarshal(data, &all); err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(all[name], into); err != nil {
		t.Fatal(err)
	}
}

// indexTolerance is absolute: the accuracy claimed for indices of expansions of
// these functions.
const indexTolerance = 1e-3

func checkIndices(t *testing.T, what string, got, want []float64) {
	t.Helper()
	for j := range want {
		if math.Abs(got[j]-want[j]) > indexTolerance {
			t.Errorf("%s index of input %d is %.5f, want %.5f", what, j, got[j], want[j])
		}
	}
}

// The function of Ishigami & Homma (1990), a = 7, b = 0.1.
func TestIshigamiIndices(t *testing.T) {
	var published map[string]any
	readPublished(t, "ishigami", &published)
	want := func(names ...string) []float64 {
		var text []string
		for _, n := range names {
			text = append(text, published[n].(string))
		}
		return numbers(t, text)
	}
	x, y := sobolSamples(t, 500, 3, func(u []float64) float64 {
		a, b, c := math.Pi*(2*u[0]-1), math.Pi*(2*u[1]-1), math.Pi*(2*u[2]-1)
		return math.Sin(a) + 7*math.Sin(b)*math.Sin(b) + 0.1*c*c*c*c*math.Sin(a)
	})
	e := fit(t, LeastAngle{Truncation: Truncation{Degree: 12}}, x, y)
	checkIndices(t, "first-order", e.FirstOrder(), want("S1", "S2", "S3"))
	checkIndices(t, "total", e.Total(), want("ST1", "ST2", "ST3"))
	checkIndices(t, "interaction", []float64{e.Interaction(0, 2)}, want("S13"))
	mean, variance := e.Moments()
	near(t, "mean", mean, want("mean")[0], indexTolerance)
	near(t, "variance", variance, want("var")[0], indexTolerance)
}

// The g function of Sobol' in four inputs, which has kinks.
func TestGFunctionIndices(t *testing.T) {
	var published publishedIndices
	readPublished(t, "sobol_g_4d", &published)
	a := numbers(t, published.A)
	x, y := sobolSamples(t, 800, 4, func(u []float64) float64 {
		product := 1.0
		for j, v := range u {
			product *= (math.Abs(4*v-2) + a[j]) / (1 + a[j])
		}
		return product
	})
	e := fit(t, LeastAngle{Truncation: Truncation{Degree: 20, Norm: 0.5}, Exactly: true}, x, y)
	checkIndices(t, "first-order", e.FirstOrder(), numbers(t, published.S))
	checkIndices(t, "total", e.Total(), numbers(t, published.ST))
}

func sobolSamples(t *testing.T, n, d int, f func([]float64) float64) ([][]float64, []float64) {
	t.Helper()
	x, err := doe.Sobol(n, d, 1)
	if err != nil {
		t.Fatal(err)
	}
	y := make([]float64, n)
	for i := range x {
		y[i] = f(x[i])
	}
	return x, y
}

// Moments two ways: closed form and 5000 draws through the same expansion agree
// within four standard errors of the draws.
func TestMomentsAgreeWithDraws(t *testing.T) {
	x, y := samples(60, 3, 11, smooth)
	for _, m := range everyKind {
		e := fit(t, m, x, y)
		mean, variance := e.Moments()
		draws := doe.Stream(1, "draws")
		points := make([][]float64, 5000)
		for i := range points {
			points[i] = []float64{draws.Float64(), draws.Float64(), draws.Float64()}
		}
		sampled := surrogate.Sampled(e.Mean, points)
		if math.Abs(sampled.Mean-mean) > 4*sampled.MeanError || math.Abs(sampled.Deviation-math.Sqrt(variance)) > 4*sampled.DeviationError {
			t.Errorf("%s: closed form %g +- %g, draws %+v", m.Kind(), mean, math.Sqrt(variance), sampled)
		}
	}
}

// Pooled over ten designs, 95 % intervals cover 85 to 100 % of fresh points.
func TestIntervalsCover(t *testing.T) {
	for _, m := range everyKind[:4] {
		inside, total := 0, 0
		for seed := range int64(10) {
			x, y := samples(40, 3, seed, smooth)
			e := fit(t, m, x, y)
			fresh, truth := samples(100, 3, 100+seed, smooth)
			for i, u := range fresh {
				mean, deviation := e.Predict(u)
				if math.Abs(mean-truth[i]) <= 1.96*deviation {
					inside++
				}
				total++
			}
		}
		if share := float64(inside) / float64(total); share < 0.85 {
			t.Errorf("%s: 95 %% intervals cover %.3f", m.Kind(), share)
		}
	}
}
