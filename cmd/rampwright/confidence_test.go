package main

import (
	"testing"

	"rampwright/optimize/robust"
)

// No two searches of a round are told in the same words.
func TestSearchesOfARoundReadApart(t *testing.T) {
	seen := map[string]bool{}
	for _, q := range []robust.Question{{}, {Loosened: 1}, {Halfway: true}, {Halfway: true, Loosened: 1}, {Halfway: true, Loosened: 2}} {
		text := searchWords(q)
		if seen[text] || len("confidence, round 4: "+text) > 120 {
			t.Errorf("%+v reads %q", q, text)
		}
		seen[text] = true
	}
}
