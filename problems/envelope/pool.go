package envelope

import (
	"context"
	"sync"
	"sync/atomic"
)

// Event tells how far a survey or schedule has come. Events come from one
// goroutine.
type Event struct {
	Phase       string
	Unit        string // what is counted, such as "condition"
	Done, Total int    // of this phase
}

// each runs task(0..n-1) on several workers, each filling its own slot, and
// returns the error of the first task in order that has one. A cancelled context
// leaves the tasks not yet begun.
func each(ctx context.Context, jobs, n int, done func(), task func(i int) error) error {
	failures := make([]error, n)
	finished := make(chan struct{}, n)
	var next atomic.Int64
	var group sync.WaitGroup
	for range min(max(1, jobs), n) {
		group.Go(func() {
			for {
				i := int(next.Add(1)) - 1
				if i >= n {
					return
				}
				if failures[i] = ctx.Err(); failures[i] == nil {
					failures[i] = task(i)
				}
				finished <- struct{}{}
			}
		})
	}
	for range n {
		<-finished
		if ctx.Err() == nil { // what a cancelled context left is not done
			done()
		}
	}
	group.Wait()
	for _, err := range failures {
		if err != nil {
			return err
		}
	}
	return nil
}
