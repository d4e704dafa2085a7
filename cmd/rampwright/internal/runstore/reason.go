package runstore

import (
	"errors"
	"fmt"
	"math"
	"unicode/utf8"

	"rampwright/problems"
)

// Recorded is a reason of a type the ledger does not know, kept as text. Inner
// is the typed reason it wraps, nil when there is none, so errors.As finds that
// one in a resumed run as in the first.
type Recorded struct {
	Type  string // Go type it had
	Text  string
	Inner error
}

func (e *Recorded) Error() string { return e.Text }

// Unwrap returns the typed reason inside.
func (e *Recorded) Unwrap() error { return e.Inner }

// Type tags of reasons in the ledger.
const (
	tagNotApplicable = "not_applicable"
	tagDetached      = "detached"
	tagStatus        = "status"
	tagOther         = "other"
)

// canonical returns the reason as the ledger will give it back. Callers get it
// in the first run too, so an answer never depends on where it came from. An
// equal reason comes back as the same pointer where it already is canonical.
func canonical(reason error) error {
	switch e := reason.(type) {
	case nil:
		return nil
	case *problems.NotApplicable:
		if !utf8.ValidString(e.Why) {
			return &problems.NotApplicable{Why: validText(e.Why)}
		}
		return e
	case *problems.Status:
		if !utf8.ValidString(e.Phrase) {
			return &problems.Status{Phrase: validText(e.Phrase)}
		}
		return e
	case *problems.Detached:
		if !utf8.ValidString(e.Shock) {
			return &problems.Detached{Shock: validText(e.Shock), Mach: e.Mach, By: e.By}
		}
		return e
	case *Recorded:
		return &Recorded{Type: validText(e.Type), Text: validText(e.Text), Inner: canonical(e.Inner)}
	}
	return &Recorded{Type: fmt.Sprintf("%T", reason), Text: validText(reason.Error()), Inner: typedInside(reason)}
}

// typedInside returns the first reason of package problems in the tree of a
// wrapped error, nil when there is none.
func typedInside(reason error) error {
	var (
		notApplicable *problems.NotApplicable
		detached      *problems.Detached
		status        *problems.Status
	)
	switch {
	case errors.As(reason, &detached):
		return canonical(detached)
	case errors.As(reason, &notApplicable):
		return canonical(notApplicable)
	case errors.As(reason, &status):
		return canonical(status)
	}
	return nil
}

// validText replaces every byte that is not UTF-8 by U+FFFD.
func validText(s string) string {
	if utf8.ValidString(s) {
		return s
	}
	return string([]rune(s))
}

// reasonLine is a reason as JSON.
type reasonLine struct {
	Type   string      `json:"type"`
	Text   string      `json:"text,omitempty"`
	Shock  string      `json:"shock,omitempty"`
	Mach   *number     `json:"mach,omitempty"`
	By     *number     `json:"by,omitempty"`
	GoType string      `json:"go_type,omitempty"`
	Inner  *reasonLine `json:"inner,omitempty"`
}

// encodeReason returns the JSON form of a canonical reason.
func encodeReason(reason error) *reasonLine {
	switch e := reason.(type) {
	case *problems.NotApplicable:
		return &reasonLine{Type: tagNotApplicable, Text: e.Why}
	case *problems.Status:
		return &reasonLine{Type: tagStatus, Text: e.Phrase}
	case *problems.Detached:
		mach, by := number(e.Mach), number(e.By)
		return &reasonLine{Type: tagDetached, Shock: e.Shock, Mach: &mach, By: &by}
	case *Recorded:
		return &reasonLine{Type: tagOther, Text: e.Text, GoType: e.Type, Inner: encodeReason(e.Inner)}
	}
	return nil
}

// decode returns the reason of a line; ok is false for one it cannot read.
func (r *reasonLine) decode() (reason error, ok bool) {
	switch r.Type {
	case tagNotApplicable:
		return &problems.NotApplicable{Why: r.Text}, true
	case tagStatus:
		return &problems.Status{Phrase: r.Text}, true
	case tagDetached:
		return &problems.Detached{Shock: r.Shock, Mach: r.Mach.float(), By: r.By.float()}, true
	case tagOther:
		recorded := &Recorded{Type: r.GoType, Text: r.Text}
		if r.Inner == nil {
			return recorded, true
		}
		recorded.Inner, ok = r.Inner.decode()
		return recorded, ok
	}
	return nil, false
}

// sameReason tells whether two canonical reasons say the same, so that a run of
// quantities missing for one cause is stored once.
func sameReason(a, b error) bool {
	if a == b { // pointers: canonical reasons are all of pointer type
		return true
	}
	switch x := a.(type) {
	case *problems.NotApplicable:
		y, ok := b.(*problems.NotApplicable)
		return ok && *x == *y
	case *problems.Status:
		y, ok := b.(*problems.Status)
		return ok && *x == *y
	case *problems.Detached:
		y, ok := b.(*problems.Detached)
		return ok && x.Shock == y.Shock && sameBits(x.Mach, y.Mach) && sameBits(x.By, y.By)
	case *Recorded:
		y, ok := b.(*Recorded)
		return ok && x.Type == y.Type && x.Text == y.Text && sameReason(x.Inner, y.Inner)
	}
	return false
}

func sameBits(a, b float64) bool { return math.Float64bits(a) == math.Float64bits(b) }
