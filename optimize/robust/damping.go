package robust

// damped are the shifts to search with: those the draws ask for, but half way to
// them on every side whose last change they take back, so that margins which swing
// about their fixed point come to rest there. searched and before are the shifts of
// the last two rounds.
func damped(before, searched, asked []Shift) []Shift {
	list := make([]Shift, len(asked))
	for i := range asked {
		list[i] = asked[i]
		list[i].Low = settled(before[i].Low, searched[i].Low, asked[i].Low)
		list[i].High = settled(before[i].High, searched[i].High, asked[i].High)
	}
	return list
}

func settled(before, searched, asked float64) float64 {
	if (asked-searched)*(searched-before) < 0 {
		return (searched + asked) / 2
	}
	return asked
}

// halfway are the shifts between those of a design that was found and those no
// design was found to hold: they were asked for by draws at a design pressed
// against its limits, and a less pressed one may ask for less.
func halfway(found, asked []Shift) []Shift {
	list := make([]Shift, len(asked))
	for i := range asked {
		list[i] = asked[i]
		list[i].Low = (found[i].Low + asked[i].Low) / 2
		list[i].High = (found[i].High + asked[i].High) / 2
	}
	return list
}
