package gpr

import (
	"fmt"
	"os"
	"syscall"
	"testing"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
)

func cpu() float64 {
	var r syscall.Rusage
	syscall.Getrusage(0, &r)
	return float64(r.Utime.Sec) + float64(r.Utime.Usec)*1e-6
}

func TestCPU(t *testing.T) {
	if os.Getenv("SCRATCH") == "" {
		return
	}
	for _, n := range []int{60, 100, 200, 500, 1000} {
		reps := 200000000 / (n * n * n)
		if reps < 2 {
			reps = 2
		}
		x, y := samples(n, 4, 7, smooth)
		s := newSolver(newSample(x, y, RBF, Constant))
		gradient := make([]float64, 4)
		l := []float64{0.7, 0.9, 1.1, 1.3}
		timeit := func(f func()) float64 {
			t0 := cpu()
			for range reps {
				f()
			}
			return (cpu() - t0) / float64(reps) * 1e3
		}
		a := timeit(func() { s.correlate(l, 1e-8) })
		b := timeit(func() { s.correlate(l, 1e-8); s.factorise() })
		c := timeit(func() { s.value(l, 1e-8) })
		d := timeit(func() { s.value(l, 1e-8); s.gradient(gradient, 1e-8) })
		// upper
		up := blas64.Symmetric{Uplo: blas.Upper, N: n, Stride: n, Data: make([]float64, n*n)}
		fill := func() {
			s.correlate(l, 1e-8)
			for i := range n {
				for k := range i + 1 {
					up.Data[k*n+i] = s.r.Data[i*n+k]
				}
			}
		}
		e := timeit(fill)
		f := timeit(func() { fill(); lapack64.Potrf(up) })
		g := timeit(func() { fill(); tt, _ := lapack64.Potrf(up); lapack64.Potri(tt) })
		h := timeit(func() { s.correlate(l, 1e-8); s.factorise(); lapack64.Potri(s.r) })
		fmt.Printf("n=%d corr %.3f potrf %.3f profile %.3f grad %.3f (potri %.3f) | upper: potrf %.3f potri %.3f  ms\n", n, a, b-a, c-b, d-c, h-b, f-e, g-f)
	}
}
