package global

import (
	"context"
	"sync"
	"sync/atomic"
)

// evaluate fills points[i] with the objective at points[i].X, jobs of them at a
// time, each worker writing its own slot. It returns how many were evaluated
// before the context ended; which ones is unspecified then.
func evaluate(ctx context.Context, jobs int, objective Objective, points []Point) (evaluated int) {
	var next, done atomic.Int64
	worker := func() {
		for {
			i := int(next.Add(1)) - 1
			if i >= len(points) || ctx.Err() != nil {
				return
			}
			f, violation := objective(points[i].X)
			points[i] = judged(points[i].X, f, violation)
			done.Add(1)
		}
	}
	var group sync.WaitGroup
	for range min(jobs, len(points)) {
		group.Go(worker)
	}
	group.Wait()
	return int(done.Load())
}
