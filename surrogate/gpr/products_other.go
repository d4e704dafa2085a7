//go:build !amd64 || noasm

package gpr

// subtract takes the products of a panel and a tile from s.
func (s *sums) subtract(panel, tile []float64) { s.subtractOneByOne(panel, tile) }
