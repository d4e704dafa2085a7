package report

import (
	"fmt"

	"rampwright/problems/inlet"
)

// assumptions are the cautions every result of this definition carries.
func assumptions(d inlet.Definition) []string {
	return []string{
		fmt.Sprintf("Planar, steady, inviscid flow; sharp edges; weak shocks; a perfect gas with ratio of specific heats %g and gas constant %.5g J/(kg K).", d.Gas.Gamma, d.Gas.R),
		"No side walls, bleed or forebody.",
		"Separation, transition and starting come from correlations, not from a computation.",
		"An unstart can destroy a vehicle. Leading edges and lip heat up; no heating is computed here.",
		"A surrogate's number is not a result until it is recomputed exactly.",
		"Verified means recomputed exactly by two routes; it says nothing of viscous flow, starting or structure.",
		"The geometry is preliminary: hardware for flight or test needs detailed flow computation, tests, qualified review, and the rules that apply where it flies.",
		"Export-control checks are the user's duty.",
	}
}
