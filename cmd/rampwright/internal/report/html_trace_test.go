package report

import (
	"bytes"
	"encoding/json"
	"errors"
	"testing"
)

// The page tells what the traces of the flight points say, numbers from their
// document, and where one ends.
func TestPageShowsTraces(t *testing.T) {
	f := folderOf(t, study(t))
	problem, flow := flowOf(t, swallowed(), 8.08, 7.22, 8.44, 8)
	var design, traced map[string]json.RawMessage
	if err := errors.Join(json.Unmarshal(f.Result, &design), json.Unmarshal(NewFlow(head, problem, flow).JSON(), &traced)); err != nil {
		t.Fatal(err)
	}
	design["points"] = traced["points"]
	f.Result = compact(design)
	page := pageOf(t, f)
	checkPage(t, page, documents(f))
	for _, want := range []string{`<section id="waves">`, "every quantity of the stream", "comparison with the chain", " ends ahead of the throat: ", "Pressure along the walls: slow", ">greatest p"} {
		if !bytes.Contains(page, []byte(want)) {
			t.Errorf("the page does not hold %q", want)
		}
	}
	if bytes.Contains(pageOf(t, folderOf(t, study(t))), []byte(`<section id="waves">`)) {
		t.Error("a design without traces has the section")
	}
}

// A document from before walls and balances were told shows none, rather than zeros.
func TestPageOfAnOlderTrace(t *testing.T) {
	f := folderOf(t, study(t))
	problem, flow := flowOf(t, swallowed(), 8.08, 7.22, 8.44, 8)
	var design, traced map[string]json.RawMessage
	var points []map[string]json.RawMessage
	if err := errors.Join(json.Unmarshal(f.Result, &design), json.Unmarshal(NewFlow(head, problem, flow).JSON(), &traced),
		json.Unmarshal(traced["points"], &points)); err != nil {
		t.Fatal(err)
	}
	for _, p := range points {
		var trace map[string]json.RawMessage
		if p["trace"] == nil {
			continue
		}
		if err := json.Unmarshal(p["trace"], &trace); err != nil {
			t.Fatal(err)
		}
		for _, key := range []string{"capture_by_streamline", "spillage_drag", "spillage_drag_by_momentum", "spilled_closure", "walls", "forces", "force_sums", "force_reference_N", "lip_shocks"} {
			delete(trace, key)
		}
		p["trace"] = compact(trace)
	}
	var err error
	if design["points"], err = json.Marshal(points); err != nil {
		t.Fatal(err)
	}
	f.Result = compact(design)
	page := pageOf(t, f)
	checkPage(t, page, documents(f))
	if !bytes.Contains(page, []byte("every quantity of the stream")) || bytes.Contains(page, []byte("leave open")) || bytes.Contains(page, []byte("Pressure along the walls")) {
		t.Error("the page has no traces, or tells of balances and walls that the document does not hold")
	}
}
