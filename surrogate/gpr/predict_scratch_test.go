package gpr
import ("testing";"os";"fmt"; "gonum.org/v1/gonum/blas"; "gonum.org/v1/gonum/blas/blas64")
func TestPred(t *testing.T) {
	if os.Getenv("SCRATCH") == "" { return }
	n := 500
	x, y := samples(n, 4, 10, smooth)
	p := fit(t, Config{Restarts: 1}, x, y)
	for _, m := range []int{1, 2, 4, 8, 16, 32, 64,128,256} {
		b := blas64.General{Rows: n, Cols: m, Stride: m, Data: make([]float64, n*m)}
		for i := range b.Data { b.Data[i] = float64(i%7) }
		reps := 4096/m
		a := cpu()
		for range reps { blas64.Trsm(blas.Left, blas.NoTrans, 1, p.factor, b) }
		l := (cpu()-a)/4096*1e6
		bt := blas64.General{Rows: m, Cols: n, Stride: n, Data: make([]float64, n*m)}
		for i := range bt.Data { bt.Data[i] = float64(i%7) }
		a = cpu()
		for range reps { blas64.Trsm(blas.Right, blas.Trans, 1, p.factor, bt) }
		r := (cpu()-a)/4096*1e6
		// 4-wide
		v := make([]float64, 4*n)
		for i := range v { v[i]=float64(i%7) }
		a = cpu()
		for range 4096/4 { four(p.factor.Data, n, v) }
		f := (cpu()-a)/4096*1e6
		fmt.Printf("n=%d m=%d left %.1f us/pt right %.1f four %.1f\n", n, m, l, r, f)
	}
}
func four(l []float64, n int, v []float64) {
	for i := range n {
		row := l[i*n : i*n+i]
		s0, s1, s2, s3 := v[4*i], v[4*i+1], v[4*i+2], v[4*i+3]
		w := v[:4*i]
		for k, a := range row {
			q := w[4*k : 4*k+4 : 4*k+4]
			s0 -= a * q[0]
			s1 -= a * q[1]
			s2 -= a * q[2]
			s3 -= a * q[3]
		}
		inv := 1 / l[i*n+i]
		v[4*i], v[4*i+1], v[4*i+2], v[4*i+3] = s0*inv, s1*inv, s2*inv, s3*inv
	}
}
