package report

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
)

// UnmarshalJSON implements json.Unmarshaler: null is a missing value.
func (n *Number) UnmarshalJSON(data []byte) error {
	if string(data) == "null" {
		*n = Number(math.NaN())
		return nil
	}
	return json.Unmarshal(data, (*float64)(n))
}

// UnmarshalJSON implements json.Unmarshaler and keeps the order of the keys.
func (o *Object[T]) UnmarshalJSON(data []byte) error {
	*o = nil
	if string(data) == "null" {
		return nil
	}
	decoder := json.NewDecoder(bytes.NewReader(data))
	if start, err := decoder.Token(); err != nil {
		return err
	} else if start != json.Delim('{') {
		return fmt.Errorf("%.20s is no object", data)
	}
	*o = Object[T]{}
	for decoder.More() {
		name, err := decoder.Token()
		if err != nil {
			return err
		}
		var raw json.RawMessage
		if err := decoder.Decode(&raw); err != nil {
			return err
		}
		field := Field[T]{Name: name.(string)} // a key of an object
		if err := json.Unmarshal(raw, &field.Value); err != nil {
			return err
		}
		*o = append(*o, field)
	}
	return nil
}

// UnmarshalJSON implements json.Unmarshaler: the rule is not in the document.
func (c *Caution) UnmarshalJSON(data []byte) error { return json.Unmarshal(data, &c.Text) }

// UnmarshalJSON implements json.Unmarshaler: what is not a setting, a wall or a
// list of reasons is a quantity of the geometry.
func (s *Shape) UnmarshalJSON(data []byte) error {
	if string(data) == "null" {
		return nil
	}
	var fields Object[json.RawMessage]
	if err := json.Unmarshal(data, &fields); err != nil {
		return err
	}
	own := map[string]any{
		"ramp_angle_deg": &s.RampAngleDeg, "cowl_wedge_deg": &s.CowlWedgeDeg, "cowl_length_m": &s.CowlLengthM,
		"shock_on_lip_mach": &s.ShockOnLip, "lip_setback": &s.LipSetback, "duct_factor": &s.DuctFactor,
		"terminal_shock": &s.Terminal, "capture_height_m": &s.HeightM, "width_m": &s.WidthM,
		"corners_m": &s.Corners, "lip_m": &s.Lip, "shoulder_m": &s.Shoulder,
		"members": &s.Members, "missing": &s.Missing, "outline": &s.Outline,
	}
	for _, f := range fields {
		if place, ok := own[f.Name]; ok {
			if err := json.Unmarshal(f.Value, place); err != nil {
				return err
			}
			continue
		}
		value := Number(math.NaN())
		if err := json.Unmarshal(f.Value, &value); err != nil {
			return err
		}
		s.Quantities = append(s.Quantities, Field[Number]{f.Name, value})
	}
	return nil
}

// compact returns v as JSON on one line.
func compact(v any) []byte {
	var b bytes.Buffer
	if err := encode(&b, v, ""); err != nil {
		panic("report: plain data always encodes: " + err.Error())
	}
	return b.Bytes()
}
