// Package optimize runs the main job: it samples a problem, fits surrogates to
// the aim and to every limited quantity, searches them under the limits, adds
// exact evaluations where the search points until surrogate and exact agree and
// nothing improves, and verifies what it found by a second exact route.
//
// It sees problems only through their contract and knows no physics.
package optimize
