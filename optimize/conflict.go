package optimize

// conflicts finds sets of sides that contradict each other: one by the deletion
// filter (Chinneck, Feasibility and Infeasibility in Optimization, 2008, ch. 6,
// from memory), then others that remain when a member of an earlier set is
// lifted.
func (e *explainer) conflicts() ([]Conflict, error) {
	var found []Conflict
	lifted := [][]Side{nil}
	for len(lifted) > 0 && len(found) < mostConflicts {
		without := lifted[0]
		lifted = lifted[1:]
		conflict, err := e.filter(remove(e.soft, without...))
		if err != nil {
			return nil, err
		}
		if conflict == nil || known(found, conflict) {
			continue
		}
		found = append(found, Conflict{conflict})
		for _, member := range conflict {
			lifted = append(lifted, append(append([]Side(nil), without...), member))
		}
	}
	return found, nil
}

// mostConflicts bounds the sets listed.
const mostConflicts = 4

// filter reduces sides to a set that cannot be met though every subset can; nil
// where they can be met.
func (e *explainer) filter(sides []Side) ([]Side, error) {
	least, err := e.leastViolation(sides)
	if err != nil || least.violation == 0 {
		return nil, err
	}
	for i := 0; i < len(sides); {
		fewer := remove(sides, sides[i])
		least, err := e.leastViolation(fewer)
		if err != nil {
			return nil, err
		}
		if least.violation == 0 {
			i++ // needed for the contradiction
			continue
		}
		sides = fewer
	}
	return sides, nil
}

// remove returns the sides without those given.
func remove(sides []Side, without ...Side) []Side {
	var rest []Side
	for _, side := range sides {
		keep := true
		for _, w := range without {
			keep = keep && side != w
		}
		if keep {
			rest = append(rest, side)
		}
	}
	return rest
}

// known reports whether a set was found before, in any order.
func known(found []Conflict, members []Side) bool {
	for _, conflict := range found {
		if len(conflict.Members) == len(members) && len(remove(members, conflict.Members...)) == 0 {
			return true
		}
	}
	return false
}
