package gpr

import (
	"fmt"
	"os"
	"testing"
	"time"
)

func TestConv(t *testing.T) {
	if os.Getenv("SCRATCH") == "" {
		return
	}
	for _, n := range []int{60, 100, 200, 500, 1000} {
		x, y := samples(n, 4, 8, smooth)
		t0, w0 := cpu(), time.Now()
		p := fit(t, Config{Jobs: 2}, x, y)
		t1 := cpu()
		fmt.Printf("n=%d cpu %.3f wall %.3f post %.4f evals %d grad %.4f %s\n", n, t1-t0, time.Since(w0).Seconds(), p.Evidence().LogPosterior, p.Evidence().Evaluations, p.Evidence().Gradient, p.Describe())
		if n <= 200 {
			q := fit(t, Config{Jobs: 2, Restarts: 8, SubsetAbove: -1}, x, y)
			fmt.Printf("   full: %.4f  evals %d grad %.4f %s\n", q.Evidence().LogPosterior, q.Evidence().Evaluations, q.Evidence().Gradient, q.Describe())
		}
		x, y = samples(n+1, 4, 8, smooth)
		m, _ := p.Warm().Fit(background, x[:n], y[:n])
		w := m.(*Process)
		fmt.Printf("   warm: %.4f  evals %d grad %.4f\n", w.Evidence().LogPosterior, w.Evidence().Evaluations, w.Evidence().Gradient)
	}
}
