package main

import (
	"context"
	"errors"
	"os"
	"os/signal"
	"sync/atomic"
	"syscall"
	"time"
)

// interruption turns the first SIGINT or SIGTERM into the end of a context and
// the second into the end of the process.
type interruption struct {
	code atomic.Int32 // exit code of the first signal, 0 before
	stop func()
}

var errInterrupted = errors.New("interrupted")

// watch derives a context that ends at the first signal, or after the limit
// where it is positive. The first signal is told to notice, if it is not nil, from
// a goroutine of its own.
func watch(limit time.Duration, notice func()) (context.Context, *interruption) {
	ctx, cancel := context.WithCancelCause(context.Background())
	release := func() {}
	if limit > 0 {
		ctx, release = context.WithTimeout(ctx, limit)
	}
	signals := make(chan os.Signal, 2)
	signal.Notify(signals, os.Interrupt, syscall.SIGTERM)
	done := make(chan struct{})
	i := &interruption{stop: func() {
		signal.Stop(signals)
		close(done)
		release()
		cancel(nil)
	}}
	go func() {
		for {
			select {
			case s := <-signals:
				if code := i.code.Load(); code != 0 {
					os.Exit(int(code))
				}
				i.code.Store(signalCode(s))
				if notice != nil {
					notice()
				}
				cancel(errInterrupted)
			case <-done:
				return
			}
		}
	}()
	return ctx, i
}

func signalCode(s os.Signal) int32 {
	if s == syscall.SIGTERM {
		return exitTerminated
	}
	return exitInterrupted
}

// writesWhatThereIs answers a signal at once where the end of the command takes a
// while. A line that moves stays as it is.
func (a *app) writesWhatThereIs() {
	if a.form == autoProgress && terminal(a.messages) {
		a.say("\n")
	}
	a.say("interrupted: writing what there is\n")
}

// nothingWritten ends an interrupted command that keeps nothing of its work.
func (a *app) nothingWritten(code int32) error {
	a.say("interrupted: nothing was written\n")
	return &endedWith{int(code)}
}
