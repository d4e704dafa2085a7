package robust

import (
	"context"
	"errors"
	"fmt"
)

// Settings steer a study of tolerances. The zero value asks for the defaults.
type Settings struct {
	Draws    int   // exact draws; default 10000
	Replaced int   // base draws of the sensitivity, each costing one more for every input; default a tenth of the draws
	Samples  int   // exact samples the surrogates are fitted to; default 30 an input
	Seed     int64 // of every random choice; default 1
	Jobs     int   // evaluations and fits run side by side; default 1. No result depends on it

	Observe func(Event) // is told how far Run has come; may be nil
}

// Event tells how far a study has come. Events come from one goroutine.
type Event struct {
	Phase       string
	Done, Total int // of this phase
}

// tell returns what counts the steps of a phase for the observer, nil where nobody
// listens. Once the context has ended there are no more of them.
func (b *built) tell(ctx context.Context, phase string, total int) func() {
	if b.observe == nil || phase == "" {
		return nil
	}
	done := 0
	return func() {
		if ctx.Err() != nil {
			return
		}
		done++
		b.observe(Event{phase, done, total})
	}
}

// DefaultDraws and MostDraws are the exact draws made for the zero settings and the
// most there may be: 10^6 draws of 100 quantities fill 0.8 GB.
const (
	DefaultDraws = 10000
	MostDraws    = 1_000_000
)

const (
	drawsABase     = 10
	samplesAnInput = 30
)

// WithDefaults fills the zero fields for a problem of n uncertain inputs.
func (s Settings) WithDefaults(n int) Settings {
	if s.Draws == 0 {
		s.Draws = DefaultDraws
	}
	if s.Replaced == 0 {
		s.Replaced = max(2, s.Draws/drawsABase)
	}
	if s.Samples == 0 {
		s.Samples = samplesAnInput * n
	}
	if s.Seed == 0 {
		s.Seed = 1
	}
	if s.Jobs == 0 {
		s.Jobs = 1
	}
	return s
}

// Validate reports every setting out of range for a problem of n uncertain
// inputs.
func (s Settings) Validate(n int) error {
	var wrong []error
	enough := s.Draws >= LeastDraws && s.Draws <= MostDraws
	if !enough {
		wrong = append(wrong, fmt.Errorf("draws %d: allowed %d to %d", s.Draws, LeastDraws, MostDraws))
	}
	if most := s.Draws / 2; s.Replaced < 2 || enough && s.Replaced > most {
		wrong = append(wrong, fmt.Errorf("base draws of the sensitivity %d: allowed 2 to half the draws, %d", s.Replaced, most))
	}
	if least := n + 2; s.Samples < least {
		wrong = append(wrong, fmt.Errorf("samples %d: a fit in %d inputs needs at least %d", s.Samples, n, least))
	}
	if s.Jobs < 1 {
		wrong = append(wrong, fmt.Errorf("jobs %d: at least one", s.Jobs))
	}
	return errors.Join(wrong...)
}

// LeastDraws is the least number of draws: fewer say nothing of a 5th percentile.
const LeastDraws = 100

// ErrNothingScatters is the answer to a problem without uncertain inputs.
var ErrNothingScatters = errors.New("no input has a tolerance")
