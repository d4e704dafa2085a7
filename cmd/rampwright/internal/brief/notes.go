package brief

import (
	"fmt"
	"math"

	"rampwright/problems"
)

// Notes returns what a brief means that its writer may not have seen; none of
// it stops anything. standard is the model's list of default limits.
func (b *Brief) Notes(standard []problems.Limit) Problems {
	var notes Problems
	if !b.Defaults {
		notes = append(notes, b.at("defaults", Problem{Message: "the default limits are off: only those of the model itself and of the brief are kept"}))
	}
	notes = append(notes, b.noteLipTurning()...)
	notes = append(notes, b.noteThroat()...)
	if b.Defaults {
		notes = append(notes, b.noteDropped(standard)...)
	}
	return notes.sorted()
}

// noteLipTurning says that part of the box is cut off.
func (b *Brief) noteLipTurning() Problems {
	d := b.Definition
	if d.CowlAngle == nil || !closureSearched(d) {
		return nil
	}
	if least, _ := lipTurning(d); least >= leastLipTurning {
		return nil
	}
	return Problems{b.at("inlet.cowl_angle_deg", Problem{
		Message: fmt.Sprintf("part of the search box has its inner cowl above the last ramp surface: the search keeps the lip turning at %s deg or more", shortNumber(leastLipTurning)),
	})}
}

// noteThroat says where a limit on the throat Mach number leaves a limit on the
// throat temperature nothing to do.
func (b *Brief) noteThroat() Problems {
	var notes Problems
	for _, l := range b.Limits {
		if l.Quantity != "throat_temperature_K" && l.Quantity != "temperature_ratio" {
			continue
		}
		mach, ok := b.limit("throat_mach", l.Point)
		low, high, _ := b.reach(l.Quantity, l.Point)
		if ok && mach.Low > 0 && !math.IsInf(l.High, 1) && high <= l.High {
			notes = append(notes, b.at(limitPath(l), Problem{Message: fmt.Sprintf("throat_mach at_least %s (%s) already caps %s%s at %.4g: at_most %s never acts",
				shortNumber(mach.Low), mach.Source, l.Quantity, atPoint(l.Point), high, shortNumber(l.High))}))
		}
		if ok && !math.IsInf(mach.High, 1) && !math.IsInf(l.Low, -1) && low >= l.Low {
			notes = append(notes, b.at(limitPath(l), Problem{Message: fmt.Sprintf("throat_mach at_most %s (%s) already keeps %s%s above %.4g: at_least %s never acts",
				shortNumber(mach.High), mach.Source, l.Quantity, atPoint(l.Point), low, shortNumber(l.Low))}))
		}
	}
	return notes
}

// noteDropped says where a row replaces a default limit without a word on its
// side.
func (b *Brief) noteDropped(standard []problems.Limit) Problems {
	var notes Problems
	for _, s := range standard {
		stated, ok := b.replaced[spot{s.Quantity, s.Point}]
		l, _ := b.limit(s.Quantity, s.Point)
		for _, side := range []struct {
			word    string
			value   float64
			dropped bool
		}{
			{"at_least", s.Low, ok && !stated.low && !math.IsInf(s.Low, -1)},
			{"at_most", s.High, ok && !stated.high && !math.IsInf(s.High, 1)},
		} {
			if side.dropped {
				notes = append(notes, b.at(limitPath(l), Problem{
					Message: fmt.Sprintf("this row replaces the default %s %s %s%s", s.Quantity, side.word, shortNumber(side.value), atPoint(s.Point)),
					Hint:    fmt.Sprintf("add %s: %s to keep it, or %s: none to say so", side.word, shortNumber(side.value), side.word),
				}))
			}
		}
	}
	return notes
}
