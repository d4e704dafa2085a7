// Package robust tells what tolerances do to a design, and searches one that
// keeps its limits with a stated probability. It knows no model: a
// problems.Perturbable evaluates a design as built and flown, and a caller's
// function answers the searches.
//
// A study draws offsets from truncated normal distributions and evaluates every
// draw by two routes: the exact model, and surrogates fitted in the space of the
// offsets to exact samples of their own. Moments, percentiles and the probability
// of every limit come from both; the sensitivity to each input comes from the
// exact model. Sampling errors stand beside every estimate.
package robust
