package brief

import (
	"bytes"
	"fmt"

	"rampwright/problems/analytic"
)

// readProblem reads an analytic problem, which stands in place of flight, gas,
// inlet and tolerance. It returns false where one is asked for that cannot be
// had: the rest of the brief then cannot be understood.
func (r *reader) readProblem(root *node) bool {
	if !root.has(problemPart) {
		r.brief.words = inletVocabulary()
		return true
	}
	k := known(problemPart, "analytic")
	n := r.value(r.child(root, problemPart), k)
	if n == nil {
		return false
	}
	p, err := analytic.New(n.text)
	if err != nil {
		r.add(n, Problem{Message: "there is no analytic problem " + shorten(n.text, 60), Value: n.shown(), Allowed: k.Allowed(), Hint: nearestHint(n.text, analytic.Names())})
		return false
	}
	r.brief.Analytic, r.brief.words = p, analyticVocabulary(p)
	r.record(k.Path(), p.Name, "", n)
	return true
}

// ownAim is the aim of an analytic problem where the brief states none.
func (r *reader) ownAim() {
	aim := r.brief.Analytic.Aim()
	r.brief.Aim, r.brief.aimHasPoint = aim, true
	r.record("aim.lowest", aim.Text, "", nil)
	r.record("aim.at", aim.Where, "", nil)
}

// refuseBeside reports a key that does not go with another that is given.
func (r *reader) refuseBeside(n *node, k Key) {
	at := n.key(k.Name)
	if part := n.get(k.Name); part != nil && part.shape == mapping && len(part.pairs) > 0 && part.pairs[0].value != nil && part.pairs[0].value.flag != "" {
		at = part.pairs[0].value // the section is there for a flag alone
	}
	hint := "an analytic problem brings its own variables, aim and limits"
	if k.Unless == outlinePart {
		hint = "an outline states every wall, and its lip the capture height"
	}
	r.add(at, Problem{Message: k.Name + " does not go with " + k.Unless, Hint: hint + ": remove " + k.Name})
}

func (b *Brief) writeAnalytic(w *bytes.Buffer) {
	fmt.Fprintf(w, "problem: {analytic: %s}\n", b.Analytic.Name)
}
