package robust

import (
	"context"
	"errors"
	"math"
	"sync"
	"sync/atomic"

	"rampwright/problems"
)

// Draws are evaluations of one design with offsets, one row a draw.
type Draws struct {
	Deviates [][]float64 // offsets in units of their deviation
	// Values holds every quantity of the problem at each draw: NaN where it has no
	// value, +Inf where it does not apply.
	Values [][]float64
	// Missing counts draws by quantity and by the reason why there is no value, in
	// the order of the draws.
	Missing []Reasons
}

// Reasons counts why a quantity has no value.
type Reasons []Reason

// Reason is one reason and how many draws it holds for.
type Reason struct {
	Text  string
	Draws int
}

// Total is how many draws have no value.
func (r Reasons) Total() int {
	n := 0
	for _, reason := range r {
		n += reason.Draws
	}
	return n
}

// add counts n more draws with a reason.
func (r *Reasons) add(text string) {
	for i := range *r {
		if (*r)[i].Text == text {
			(*r)[i].Draws++
			return
		}
	}
	*r = append(*r, Reason{text, 1})
}

// built is a design with its uncertain inputs.
type built struct {
	problem problems.Perturbable
	x       []float64
	scatter []problems.Scatter
	width   int // quantities
	observe func(Event)
}

// evaluate computes every row of deviates exactly, jobs at a time, each in its own
// slot; reasons are counted in the order of the draws. A phase without a name is not
// told.
func (b *built) evaluate(ctx context.Context, phase string, deviates [][]float64, jobs int) (*Draws, error) {
	n := len(deviates)
	d := &Draws{Deviates: deviates, Values: make([][]float64, n), Missing: make([]Reasons, b.width)}
	block := make([]float64, n*b.width)
	missed := make([][]lack, n)
	failures := make([]error, n)
	share(jobs, n, b.tell(ctx, phase, n), func() func(i int) {
		offsets := make([]float64, len(b.scatter))
		evaluation := problems.NewEvaluation(b.width)
		return func(i int) {
			for j, s := range b.scatter {
				offsets[j] = deviates[i][j] * s.Deviation
			}
			if failures[i] = b.problem.EvaluateBuilt(ctx, b.x, offsets, evaluation); failures[i] != nil {
				return
			}
			d.Values[i] = block[i*b.width : (i+1)*b.width : (i+1)*b.width]
			copy(d.Values[i], evaluation.Values)
			missed[i] = settle(d.Values[i], evaluation)
		}
	})
	for _, err := range failures {
		if err != nil {
			return nil, err
		}
	}
	for _, list := range missed {
		for _, l := range list {
			d.Missing[l.quantity].add(l.why)
		}
	}
	return d, nil
}

// lack is a quantity without a value.
type lack struct {
	quantity int
	why      string
}

// settle gives a quantity that does not apply the value +Inf and lists those that
// are missing for any other reason.
func settle(values []float64, evaluation *problems.Evaluation) []lack {
	var list []lack
	for q, reason := range evaluation.Reasons {
		var notApplicable *problems.NotApplicable
		switch {
		case reason == nil:
		case errors.As(reason, &notApplicable):
			values[q] = math.Inf(1)
		default:
			list = append(list, lack{q, broadly(reason)})
		}
	}
	return list
}

// broadly is a reason without the numbers of its draw, so that draws can be
// counted by it.
func broadly(reason error) string {
	var detached *problems.Detached
	if errors.As(reason, &detached) {
		return detached.Shock + " detached"
	}
	return reason.Error()
}

// column lists one quantity over the draws.
func (d *Draws) column(quantity int) []float64 {
	values := make([]float64, len(d.Values))
	for i, row := range d.Values {
		values[i] = row[quantity]
	}
	return values
}

// share calls work(i) for i below n on jobs goroutines; start makes what one
// goroutine needs, and each call writes its own slot. The caller's goroutine calls
// done, if there is one, after each.
func share(jobs, n int, done func(), start func() (work func(i int))) {
	var next atomic.Int64
	finished := make(chan struct{}, n)
	worker := func() {
		work := start()
		for i := int(next.Add(1)) - 1; i < n; i = int(next.Add(1)) - 1 {
			work(i)
			finished <- struct{}{}
		}
	}
	var group sync.WaitGroup
	for range min(jobs, n) {
		group.Go(worker)
	}
	for range n {
		if <-finished; done != nil {
			done()
		}
	}
	group.Wait()
}
