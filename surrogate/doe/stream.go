// Package doe makes designs of experiments on the unit cube: Latin hypercubes
// improved for distance, Sobol' points, space-filling choices inside a
// caller's constraints, and the named sub-streams of one seed that every random
// choice of a run draws from.
package doe

import (
	"crypto/sha256"
	"encoding/binary"
	"math/rand/v2"
)

// Stream returns the random source of one purpose of a run. The same seed and
// purpose give the same numbers for ever, on every machine; different purposes
// give independent numbers, so that one more draw for one purpose moves no
// other. The source is ChaCha8 keyed by SHA-256 of the seed (8 bytes, little
// end first) followed by the purpose.
func Stream(seed int64, purpose string) *rand.Rand {
	key := binary.LittleEndian.AppendUint64(nil, uint64(seed))
	return rand.New(rand.NewChaCha8(sha256.Sum256(append(key, purpose...))))
}
