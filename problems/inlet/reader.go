package inlet

import "rampwright/problems"

// single starts the catalogue line of a quantity that stands alone.
func single(value func(a *analysis) (float64, error)) Entry { return Entry{value: value} }

// group starts the catalogue line of a quantity with one member a shock or ramp.
func group(members func(ramps int) []string, member func(a *analysis, i int) (float64, error)) Entry {
	return Entry{members: members, member: member}
}

// as completes a catalogue line.
func (e Entry) as(name, unit string, scope Scope, definition, source, applies string) Entry {
	e.Name, e.Unit, e.Scope = name, unit, scope
	e.Definition, e.Source, e.Applies = definition, source, applies
	return e
}

// free reads a quantity of the free stream.
func free(read func(*analysis) float64) func(*analysis) (float64, error) {
	return func(a *analysis) (float64, error) { return read(a), nil }
}

// throat reads a quantity that needs the state behind the last shock.
func throat(read func(*analysis) float64) func(*analysis) (float64, error) {
	return func(a *analysis) (float64, error) {
		if a.throatErr != nil {
			return 0, a.throatErr
		}
		return read(a), nil
	}
}

// captured reads a quantity that needs the captured stream.
func captured(read func(*analysis) float64) func(*analysis) (float64, error) {
	return func(a *analysis) (float64, error) {
		if a.captureErr != nil {
			return 0, a.captureErr
		}
		return read(a), nil
	}
}

// contraction reads the internal contraction over a ceiling at the lip.
func contraction(ceiling func(*analysis) float64) func(*analysis) (float64, error) {
	return func(a *analysis) (float64, error) {
		switch {
		case a.shape.err != nil:
			return 0, a.shape.err
		case a.lipErr != nil:
			return 0, a.lipErr
		}
		return a.shape.internalContraction() / ceiling(a), nil
	}
}

// angle starts the catalogue line of an angle that is linear in the settings.
func angle(read func(*Design) float64) Entry {
	entry := single(func(a *analysis) (float64, error) { return read(a.design) / radian, nil })
	entry.linear = read
	return entry
}

// closed reads a quantity of the contour.
func closed(read func(*closure) float64) func(*analysis) (float64, error) {
	return func(a *analysis) (float64, error) {
		if a.shape.err != nil {
			return 0, a.shape.err
		}
		return read(a.shape), nil
	}
}

func everyRamp(ramps int) []string {
	names := make([]string, ramps)
	for i := range names {
		names[i] = rampName(i)
	}
	return names
}

func everyRampShock(ramps int) []string {
	names := everyRamp(ramps)
	for i := range names {
		names[i] += " shock"
	}
	return names
}

// cornersAndLip are the shocks that meet a boundary layer: the corners of ramps
// 2.. and the lip shock.
func cornersAndLip(ramps int) []string {
	return append(everyRamp(ramps)[1:], lipShockName)
}

const lipShockName = "lip shock"

func notApplicable(why string) error { return &problems.NotApplicable{Why: why} }
