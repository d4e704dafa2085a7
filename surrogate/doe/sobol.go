package doe

import (
	"fmt"
	"math/bits"
)

// MostSobolInputs is the largest dimension of Sobol.
const MostSobolInputs = 21

// TooManyInputs reports a dimension without direction numbers.
type TooManyInputs struct {
	Inputs int
}

func (e *TooManyInputs) Error() string {
	return fmt.Sprintf("Sobol' points have at most %d inputs, not %d", MostSobolInputs, e.Inputs)
}

// Sobol returns n points of the Sobol' sequence in [0,1)^d from place first on
// (0 is the origin), in Gray-code order (Antonov & Saleev 1979), with the
// direction numbers of Joe & Kuo (2008). Blocks of 2^k points from a multiple
// of 2^k on have one point in each of 2^k equal slices of every axis. It
// returns *TooManyInputs beyond 21 inputs. Places beyond 2^32 repeat.
func Sobol(n, d int, first uint32) ([][]float64, error) {
	if d > MostSobolInputs {
		return nil, &TooManyInputs{d}
	}
	points := matrix(n, d)
	directions := make([][32]uint32, d)
	state := make([]uint32, d)
	gray := first ^ first>>1
	for j := range d {
		directions[j] = sobolDirections(j)
		for k := range 32 {
			if gray>>k&1 == 1 {
				state[j] ^= directions[j][k]
			}
		}
	}
	for i := range points {
		step := bits.TrailingZeros32(^(first + uint32(i))) // lowest zero bit of the place
		for j := range d {
			points[i][j] = float64(state[j]) / (1 << 32)
			if step < 32 {
				state[j] ^= directions[j][step]
			}
		}
	}
	return points, nil
}

// sobolDirections returns the direction numbers of one input, as fractions of 2^32,
// by the recurrence of Bratley & Fox (1988):
//
//	v_k = a_1 v_{k-1} ^ .. ^ a_{s-1} v_{k-s+1} ^ v_{k-s} ^ (v_{k-s} >> s).
func sobolDirections(input int) (v [32]uint32) {
	if input == 0 {
		for k := range v {
			v[k] = 1 << (31 - k)
		}
		return v
	}
	p := sobolPolynomials[input-1]
	s := len(p.m)
	for k := range v {
		if k < s {
			v[k] = p.m[k] << (31 - k)
			continue
		}
		v[k] = v[k-s] ^ v[k-s]>>s
		for i := 1; i < s; i++ {
			if p.a>>(s-1-i)&1 == 1 {
				v[k] ^= v[k-i]
			}
		}
	}
	return v
}

// sobolPolynomials holds, for inputs 2.., the inner coefficients a of the
// primitive polynomial (as bits) and the initial numbers m_1..m_s. Source: Joe &
// Kuo, "Constructing Sobol sequences with better two-dimensional projections",
// SIAM J. Sci. Comput. 30 (2008), table new-joe-kuo-6 (from memory; the first
// eight inputs compared with a published copy, all tested for their defining
// properties).
var sobolPolynomials = []struct {
	a uint32
	m []uint32
}{
	{0, []uint32{1}},
	{1, []uint32{1, 3}},
	{1, []uint32{1, 3, 1}},
	{2, []uint32{1, 1, 1}},
	{1, []uint32{1, 1, 3, 3}},
	{4, []uint32{1, 3, 5, 13}},
	{2, []uint32{1, 1, 5, 5, 17}},
	{4, []uint32{1, 1, 5, 5, 5}},
	{7, []uint32{1, 1, 7, 11, 19}},
	{11, []uint32{1, 1, 5, 1, 1}},
	{13, []uint32{1, 1, 1, 3, 11}},
	{14, []uint32{1, 3, 5, 5, 31}},
	{1, []uint32{1, 3, 3, 9, 7, 49}},
	{13, []uint32{1, 1, 1, 15, 21, 21}},
	{16, []uint32{1, 3, 1, 13, 27, 49}},
	{19, []uint32{1, 1, 1, 15, 7, 5}},
	{22, []uint32{1, 3, 1, 15, 13, 25}},
	{25, []uint32{1, 1, 5, 5, 19, 61}},
	{1, []uint32{1, 3, 7, 11, 23, 15, 103}},
	{4, []uint32{1, 3, 7, 13, 13, 15, 69}},
}
