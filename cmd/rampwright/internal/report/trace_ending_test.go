package report

import (
	"strings"
	"testing"

	"rampwright/problems/contour"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// A trace that ran out of waves blames neither a wall nor the flow.
func TestSpentTraceBlamesNothing(t *testing.T) {
	problem, flow := flowOf(t, swallowed(), 8.08, 7.22, 8.44, 8)
	slow := &flow.Points[3] // the chain holds, its lip shock misses the shoulder
	for _, c := range []struct {
		reason      wave.Reason
		says, never string
	}{
		{wave.EventBudget, "the trace does not reach the throat plane: more wave crossings than are traced", "body corner 4"},
		{wave.FrontBudget, "more waves than are traced, up to x 0.50000 m, y 0.10000 m, Mach", "no regular supersonic flow"},
		{wave.SubsonicPocket, "no regular supersonic flow reaches the throat plane: subsonic pocket at body corner 4, x 0.50000 m", "up to x"},
	} {
		trace := *slow.Trace
		trace.Ending = &wave.Ending{Reason: c.reason, Site: "body corner 4", Place: contour.Point{X: 0.5, Y: 0.1}, State: trace.Regions[0]}
		slow.Trace = &trace
		text := strings.Join(strings.Fields(NewFlow(head, problem, flow).Text(100)), " ")
		_, cautions, _ := strings.Cut(text, "The lip shock at slow misses the shoulder")
		cautions, advice, _ := strings.Cut(cautions, "Write throat: traced at this flight point ")
		if !strings.HasPrefix(advice, "for a search to keep to designs whose trace reaches the throat.") {
			t.Errorf("%v: a throat that is not reached is to be taken from the trace: %q", c.reason, advice)
		}
		_, waves, _ := strings.Cut(text, "slow: the lip shock strikes the body")
		waves, _, _ = strings.Cut(waves, "leaves that out.")
		if cautions == "" || waves == "" {
			t.Fatalf("no caution or no trace of the point:\n%s", text)
		}
		if !strings.Contains(cautions+waves, c.says) || strings.Contains(cautions+waves, c.never) {
			t.Errorf("%v reads %q and %q", c.reason, cautions, waves)
		}
	}
}

// What ended ahead of the lip has no lip shock miss because it ended there.
func TestMissOfAnEndedTrace(t *testing.T) {
	d := swallowed()
	d.Points[3].Mach = 1.5 // detached at the second corner
	problem, flow := flowOf(t, d, 8.08, 7.22, 8.44, 8)
	slow := &flow.Points[3]
	trace, err := problem.Freeze([]float64{8.08, 7.22, 8.44, 8}).Trace(slow.Point, inlet.VerifyTrace())
	if err != nil || trace.Ending == nil {
		t.Fatal(err, "no ending")
	}
	slow.Trace = trace
	p := &NewFlow(head, problem, flow).Points[3]
	if why, _ := p.Trace.Missing.Get("lip_shock_miss"); why != "the trace ended ahead of it" {
		t.Errorf("lip_shock_miss is missing because %q", why)
	}
	if use := p.traceUse(); use != "no quantity: the status of the chain stands" || p.Status == attachedStatus {
		t.Errorf("status %q, used for %q", p.Status, use)
	}
}
