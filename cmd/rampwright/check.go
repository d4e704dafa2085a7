package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems/inlet"
)

func (a *app) checkCommand() *cobra.Command {
	cmd := &cobra.Command{
		Use: "check BRIEF", Short: "Validate a brief and print what it resolves to", Args: exactArgs(1),
		Long: `Validate a brief and print what it resolves to: flight states, search box, the
limits in force, and where each value came from. A brief that a search would
refuse ends with exit code 3.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			study, err := read(cmd, args[0])
			if err != nil {
				return err
			}
			return a.check(study)
		},
	}
	cmd.Flags().BoolVar(&a.json, "json", false, "print one JSON document")
	briefFlags(cmd)
	return cmd
}

func (a *app) check(study *study) error {
	refused := brief.CheckSearch(study.brief)
	if err := a.print(report.NewCheck(study.checked(refused))); err != nil {
		return err
	}
	if len(refused) > 0 {
		return refused
	}
	return nil
}

// checked is the brief as resolved.
func (s *study) checked(refused brief.Problems) report.CheckedBrief {
	b := s.brief
	out := report.CheckedBrief{
		Head: s.head(b.Effort.Seed), Aim: aimText(b), Variables: s.model.Variables(), Limits: s.limits,
		Effort: fmt.Sprintf("%d samples, %d infill, seed %d, agreement %g", b.Effort.Samples, b.Effort.Infill, b.Effort.Seed, b.Effort.Agreement),
	}
	if b.Effort.Batch > 0 {
		out.Effort += fmt.Sprintf(", batch %d", b.Effort.Batch)
	}
	for _, c := range b.Flight {
		gas := b.Definition.Gas
		out.Points = append(out.Points, report.CheckedPoint{
			Name: c.Name, Mach: c.Mach, IncidenceDeg: c.IncidenceDeg, Weight: c.Weight,
			PressureKPa: c.PressureKPa, TemperatureK: c.TemperatureK, AltitudeKm: report.Number(c.AltitudeKm),
			DynamicPressure: gas.DynamicPressure(c.PressureKPa, c.Mach), Stated: c.Stated,
			Throat: c.Throat(), ThroatBecause: throatBecause(b, c),
		})
	}
	for _, v := range b.Values() {
		out.Values = append(out.Values, report.CheckedValue{Path: v.Path, Value: v.Text, Unit: v.Unit, Source: v.Source})
	}
	for _, n := range b.Notes(s.defaults()) {
		out.Notes = append(out.Notes, n.Place()+": "+n.Message)
	}
	for _, r := range refused {
		out.Refused = append(out.Refused, r.Message)
	}
	return out
}

// throatBecause says why the throat of a point is taken from the chain of straight
// shocks or from a trace.
func throatBecause(b *brief.Brief, c brief.Condition) string {
	d := &b.Definition
	state, onLip := "the state just behind the straight lip shock", d.ShockOnLip == inlet.Fixed(c.Mach) && d.LipSetback == inlet.Fixed(0) && c.IncidenceDeg == b.Flight[0].IncidenceDeg
	switch {
	case d.Outline != nil:
		return "the inlet is given by its outline"
	case c.Traced:
		return "the brief asks for it"
	case onLip:
		return "exact at shock-on-lip"
	}
	if d.LipTurning != nil && *d.LipTurning == inlet.Fixed(0) {
		state = "the state behind the last ramp, as an aligned cowl has no lip shock"
	}
	return state + "; traced all the same where ramp shocks cross ahead of the lip or fall inside it"
}

// aimText is the aim as a phrase.
func aimText(b *brief.Brief) string {
	switch {
	case len(b.Aim.Parts) == 0:
		return "none"
	case b.Aim.Highest:
		return "highest " + b.Aim.Text + " at " + b.Aim.Where
	}
	return "lowest " + b.Aim.Text + " at " + b.Aim.Where
}
