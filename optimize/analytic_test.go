package optimize

import (
	"context"
	"math"
	"testing"

	"rampwright/problems"
)

// toy is a small problem written down in a test. It implements the bare contract
// alone; the types below add the optional interfaces.
type toy struct {
	variables  []problems.Variable
	quantities []problems.Quantity
	fill       func(x []float64, dst *problems.Evaluation)
}

func (p *toy) Variables() []problems.Variable  { return p.variables }
func (p *toy) Quantities() []problems.Quantity { return p.quantities }

func (p *toy) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	dst.Clear()
	p.fill(x, dst)
	return nil
}

// verifiedToy has a second route: the same one.
type verifiedToy struct{ *toy }

func (p verifiedToy) Verify(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return p.Evaluate(ctx, x, dst)
}

// explicitToy has explicit quantities, of which those in forms are linear.
type explicitToy struct {
	verifiedToy
	forms map[int]linearForm
}

type linearForm struct {
	a []float64
	b float64
}

func (p explicitToy) EvaluateExplicit(x []float64, dst *problems.Evaluation) {
	all := problems.NewEvaluation(len(p.quantities))
	p.fill(x, all)
	for i, q := range p.quantities {
		if q.Explicit {
			dst.Values[i], dst.Reasons[i] = all.Values[i], all.Reasons[i]
		}
	}
}

func (p explicitToy) LinearForm(i int) ([]float64, float64, bool) {
	form, ok := p.forms[i]
	return form.a, form.b, ok
}

func variable(name string, low, high float64) problems.Variable {
	return problems.Variable{Name: name, Low: low, High: high}
}

func quantity(name string) problems.Quantity { return problems.Quantity{Name: name, Point: "here"} }

// aimAt is a single quantity to drive up or down.
func aimAt(name string, highest bool) problems.Aim {
	return problems.Aim{Highest: highest, Text: name, Where: "here", Parts: []problems.Part{
		{Point: "here", Weight: 1, Reads: []problems.Read{{Quantity: name, Point: "here"}}},
	}}
}

func atMost(name string, high float64) problems.Limit {
	return problems.Limit{Quantity: name, Point: "here", Low: math.Inf(-1), High: high}
}

func atLeast(name string, low float64) problems.Limit {
	return problems.Limit{Quantity: name, Point: "here", Low: low, High: math.Inf(1)}
}

// disk is: the highest exp(0.3 (x + 2 y)) with x^2 + y^2 <= square. The
// solution is (1, 2) sqrt(square/5), where x + 2y = sqrt(5 square).
func disk(square float64) Task {
	return Task{
		Problem: verifiedToy{&toy{
			variables:  []problems.Variable{variable("x", -1, 1.5), variable("y", -0.5, 2)},
			quantities: []problems.Quantity{quantity("height"), quantity("square")},
			fill: func(x []float64, dst *problems.Evaluation) {
				dst.Set(0, math.Exp(0.3*(x[0]+2*x[1])))
				dst.Set(1, x[0]*x[0]+x[1]*x[1])
			},
		}},
		Limits: []problems.Limit{atMost("square", square)},
		Aim:    aimAt("height", true),
	}
}

// diskX, diskAim and diskPrice are the solution, its height, and the slope of the
// height by the square.
func diskX(square float64) []float64 {
	return []float64{math.Sqrt(square / 5), 2 * math.Sqrt(square/5)}
}

func diskAim(square float64) float64 { return math.Exp(0.3 * math.Sqrt(5*square)) }

func diskPrice(square float64) float64 {
	return diskAim(square) * 0.3 * math.Sqrt(5/square) / 2
}

// beale is problem 35 of Hock & Schittkowski 1981: f = 1/9 at (4/3, 7/9, 4/9),
// where x + y + 2z <= 3 has the multiplier 2/9. Its row is explicit and linear.
func beale(atMostSum float64) Task {
	sum := problems.Quantity{Name: "sum", Point: problems.Geometry, Explicit: true}
	return Task{
		Problem: explicitToy{
			verifiedToy{&toy{
				variables:  []problems.Variable{variable("x", 0, 2), variable("y", 0, 2), variable("z", 0, 1)},
				quantities: []problems.Quantity{quantity("cost"), sum},
				fill: func(x []float64, dst *problems.Evaluation) {
					a, b, c := x[0], x[1], x[2]
					dst.Set(0, 9-8*a-6*b-4*c+2*a*a+2*b*b+c*c+2*a*b+2*a*c)
					dst.Set(1, a+b+2*c)
				},
			}},
			map[int]linearForm{1: {[]float64{1, 1, 2}, 0}},
		},
		Limits: []problems.Limit{{Quantity: "sum", Point: problems.Geometry, Low: math.Inf(-1), High: atMostSum}},
		Aim:    aimAt("cost", false),
	}
}

var bealeX = []float64{4.0 / 3, 7.0 / 9, 4.0 / 9}

const (
	bealeAim   = 1.0 / 9
	bealePrice = 2.0 / 9
)

// minimax is the least of the greatest of three functions of (x, y), one a point.
func minimax(fill func(x, y float64, f []float64)) Task {
	task := Task{Aim: problems.Aim{Aggregate: problems.Worst, Where: "worst"}}
	t := &toy{variables: []problems.Variable{variable("x", 0, 2), variable("y", 0, 2)}}
	for _, point := range []string{"one", "two", "three"} {
		t.quantities = append(t.quantities, problems.Quantity{Name: "f", Point: point})
		task.Aim.Parts = append(task.Aim.Parts, problems.Part{Point: point, Reads: []problems.Read{{Quantity: "f", Point: point}}})
	}
	t.fill = func(x []float64, dst *problems.Evaluation) {
		var f [3]float64
		fill(x[0], x[1], f[:])
		for i, v := range f {
			dst.Set(i, v)
		}
	}
	task.Problem = verifiedToy{t}
	return task
}

// charalambous2 and charalambous3 are the second and third problem of
// Charalambous & Bandler 1976 (from memory): 1.952224494 at (1.139037652,
// 0.899559938), and 2 at (1, 1), which its three active gradients (4, 2),
// (-2, -2), (-2, 2) prove.
func charalambous2() Task {
	return minimax(func(x, y float64, f []float64) {
		f[0], f[1], f[2] = x*x+y*y*y*y, (2-x)*(2-x)+(2-y)*(2-y), 2*math.Exp(y-x)
	})
}

func charalambous3() Task {
	return minimax(func(x, y float64, f []float64) {
		f[0], f[1], f[2] = x*x*x*x+y*y, (2-x)*(2-x)+(2-y)*(2-y), 2*math.Exp(y-x)
	})
}

// cliff has no height where x + y > 1.2. The highest sqrt(1 + x + y/2) is
// sqrt(2.1) at (1, 0.2), on the edge of what is known and on a face of the box.
func cliff() Task {
	return Task{
		Problem: verifiedToy{&toy{
			variables:  []problems.Variable{variable("x", 0, 1), variable("y", 0, 1)},
			quantities: []problems.Quantity{quantity("height"), quantity("margin")},
			fill: func(x []float64, dst *problems.Evaluation) {
				margin := 1.2 - x[0] - x[1]
				dst.Set(1, margin)
				if margin < 0 {
					dst.Miss(0, &problems.Detached{Shock: "ramp 1", Mach: 2, By: -margin})
					return
				}
				dst.Set(0, math.Sqrt(1+x[0]+x[1]/2))
			},
		}},
		Limits: []problems.Limit{atLeast("margin", 0)},
		Aim:    aimAt("height", true),
	}
}

// mustPlan makes a task ready.
func mustPlan(t testing.TB, task Task) *plan {
	t.Helper()
	p, err := newPlan(task)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// mustDesign runs a design that must not fail.
func mustDesign(t testing.TB, task Task, settings Settings) *Result {
	t.Helper()
	result, err := Design(context.Background(), task, settings, nil)
	if err != nil {
		t.Fatal(err)
	}
	return result
}

// farthest is the largest difference of two vectors.
func farthest(a, b []float64) float64 {
	most := 0.0
	for j := range a {
		most = math.Max(most, math.Abs(a[j]-b[j]))
	}
	return most
}
