package main

import (
	"bytes"
	"math"
	"strings"
	"testing"
)

// spreadFigures is what a script reads of a spread.
type spreadFigures struct {
	PerLimit []struct {
		Quantity    string
		Affected    bool
		Probability float64
	} `json:"per_limit"`
	Inside []struct {
		Share float64
	} `json:"shock_inside_the_lip"`
	Cautions []string
}

// The optimum of VEYRIC-6 stands on its temperature floor and its shocks meet the
// lip: built and flown, half of the inlets fall short, in about two thirds a shock
// falls inside the lip, and that is the first caution. Nothing moves the outer cowl.
// The figures are the same for any number of jobs.
func TestSpreadOfTheStarter(t *testing.T) {
	d := designStarter(t, "veyric-6")
	of := d.folder(t)
	spread := func(jobs string) ([]byte, spreadFigures) {
		got := inFolder("spread", starterBrief("veyric-6"), "--of", of, "--draws", "1000", "--jobs", jobs)
		var figures spreadFigures
		got.done(t, "spread.json")
		decode(t, got.out, &figures)
		return got.out, figures
	}
	one, figures := spread("1")
	found := map[string]bool{}
	for _, l := range figures.PerLimit {
		found[l.Quantity] = true
		switch l.Quantity {
		case "throat_temperature_K":
			if !(l.Probability > 0.45 && l.Probability < 0.55) {
				t.Errorf("the temperature floor holds in %v of the draws", l.Probability)
			}
		case "cowl_outer_angle_deg":
			if l.Affected || l.Probability != 1 {
				t.Errorf("the outer cowl: %+v", l)
			}
		}
	}
	if !found["throat_temperature_K"] || !found["cowl_outer_angle_deg"] {
		t.Errorf("limits %v", found)
	}
	if math.Abs(figures.Inside[0].Share-2./3) > 0.05 {
		t.Errorf("a shock falls inside the lip in %v of the draws", figures.Inside[0].Share)
	}
	if !strings.Contains(figures.Cautions[0], "falls inside the lip") {
		t.Errorf("the first caution is %q", figures.Cautions[0])
	}
	if three, _ := spread("3"); !bytes.Equal(one, three) {
		t.Error("three jobs give other figures than one")
	}
}
