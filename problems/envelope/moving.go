package envelope

import (
	"context"

	"rampwright/problems"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// Moving is a frozen inlet with one part on a hinge, as a Mover: traced at every
// position.
type Moving struct {
	frozen     *Frozen
	hinge      inlet.Hinge
	quantities []problems.Quantity
}

// Hang puts a part of a frozen inlet on its hinge. Errors are those of
// inlet.Frozen.Angle.
func Hang(frozen *Frozen, hinge inlet.Hinge) (*Moving, error) {
	if _, err := frozen.inlet.Angle(hinge); err != nil {
		return nil, err
	}
	geometry, _ := frozen.inlet.OfGeometry()
	return &Moving{frozen, hinge, append(frozen.quantities[:len(frozen.quantities):len(frozen.quantities)], geometry...)}, nil
}

// Angle is where the part stands in the frozen inlet, rad.
func (m *Moving) Angle() float64 {
	angle, err := m.frozen.inlet.Angle(m.hinge)
	if err != nil {
		panic("envelope: a part on its hinge has an angle: " + err.Error()) // Hang saw to it
	}
	return angle
}

// Quantities lists those of a condition, then those of the geometry.
func (m *Moving) Quantities() []problems.Quantity { return m.quantities }

// At computes the inlet with the part at an angle.
func (m *Moving) At(ctx context.Context, angle float64, at Condition, dst *problems.Evaluation) (Outcome, error) {
	moved, err := m.frozen.inlet.Move(m.hinge, angle)
	if err != nil {
		return Outcome{}, err
	}
	point, err := m.frozen.Point(at)
	if err != nil {
		return Outcome{}, err
	}
	flow, err := moved.At(ctx, point, m.frozen.settings)
	if err != nil {
		return Outcome{}, err
	}
	outcome := take(flow, dst)
	n := len(m.frozen.quantities)
	_, geometry := moved.OfGeometry()
	copy(dst.Values[n:], geometry.Values)
	copy(dst.Reasons[n:], geometry.Reasons)
	return outcome, nil
}

// Waves traces the inlet with the part at an angle; see Frozen.Waves.
func (m *Moving) Waves(angle float64, at Condition) (wave.Geometry, *wave.Trace, error) {
	moved, err := m.frozen.inlet.Move(m.hinge, angle)
	if err != nil {
		return wave.Geometry{}, nil, err
	}
	other := *m.frozen
	other.inlet = moved
	return other.Waves(at)
}
