package brief

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"math"
	"strings"

	"rampwright/problems"
	"rampwright/problems/inlet"
)

// quote writes text as a double-quoted YAML (and JSON) string.
func quote(text string) string {
	var b bytes.Buffer
	encoder := json.NewEncoder(&b)
	encoder.SetEscapeHTML(false)
	_ = encoder.Encode(text) // a string always encodes into memory
	return strings.TrimSuffix(b.String(), "\n")
}

// ResolvedYAML writes the brief with every value resolved and every default
// written out. It is itself a valid brief, and reads back to the same values
// to the last bit. Flight states are written as pressure and temperature.
func (b *Brief) ResolvedYAML() []byte {
	var w bytes.Buffer
	fmt.Fprintf(&w, "brief: 1\ntitle: %s\n", quote(b.Title))
	if b.Analytic != nil {
		b.writeAnalytic(&w)
	} else {
		b.writeFlight(&w)
		b.writeInlet(&w)
	}
	b.writeAim(&w)
	b.writeLimits(&w)
	fmt.Fprintf(&w, "defaults: %t\n", b.Defaults)
	if b.Analytic == nil {
		b.writeTolerance(&w)
	}
	e := b.Effort
	fmt.Fprintf(&w, "effort: {samples: %d, infill: %d", e.Samples, e.Infill)
	if e.Batch > 0 {
		fmt.Fprintf(&w, ", batch: %d", e.Batch)
	}
	fmt.Fprintf(&w, ", seed: %d, agreement: %s}\n", e.Seed, exactNumber(e.Agreement))
	return w.Bytes()
}

func (b *Brief) writeFlight(w *bytes.Buffer) {
	w.WriteString("flight:\n")
	for _, c := range b.Flight {
		fmt.Fprintf(w, "  - {name: %s, mach: %s, pressure_kPa: %s, temperature_K: %s, incidence_deg: %s, throat: %s, weight: %s}",
			word(c.Name), exactNumber(c.Mach), exactNumber(c.PressureKPa), exactNumber(c.TemperatureK), exactNumber(c.IncidenceDeg), c.Throat(), exactNumber(c.Weight))
		if !math.IsNaN(c.AltitudeKm) {
			fmt.Fprintf(w, " # from %s", c.Stated)
		}
		w.WriteByte('\n')
	}
	fmt.Fprintf(w, "gas: {model: %s, ratio_of_specific_heats: %s}\n", perfect, exactNumber(b.Definition.Gas.Gamma))
}

func (b *Brief) writeInlet(w *bytes.Buffer) {
	d := b.Definition
	if d.Outline != nil {
		b.writeOutline(w)
		return
	}
	angles := make([]string, len(d.RampAngle))
	for i, s := range d.RampAngle {
		angles[i] = settingText(s)
	}
	closing, angle := "cowl_angle_deg", d.CowlAngle
	if d.LipTurning != nil {
		closing, angle = "lip_turning_deg", d.LipTurning
	}
	w.WriteString("inlet:\n")
	for _, row := range [][2]string{
		{"capture_height_m", exactNumber(d.CaptureHeight)},
		{"width_m", exactNumber(d.Width)},
		{"ramps", fmt.Sprint(len(d.RampAngle))},
		{"ramp_angle_deg", "[" + join(angles) + "]"},
		{closing, settingText(*angle)},
		{"cowl_wedge_deg", settingText(d.CowlWedge)},
		{"cowl_length", exactNumber(d.CowlLength)},
		{"shock_on_lip_mach", settingText(d.ShockOnLip)},
		{"lip_setback", settingText(d.LipSetback)},
		{"terminal_shock", fmt.Sprint(d.TerminalShock)},
		{"duct_factor", exactNumber(d.DuctFactor)},
	} {
		fmt.Fprintf(w, "  %s: %s\n", row[0], row[1])
	}
}

func (b *Brief) writeAim(w *bytes.Buffer) {
	if len(b.Aim.Parts) == 0 {
		return
	}
	text := b.Aim.Text
	if _, bare := b.words.find(text); !bare {
		text = quote(text)
	}
	fmt.Fprintf(w, "aim: {%s: %s", b.direction(), text)
	if b.aimHasPoint {
		fmt.Fprintf(w, ", at: %s", word(b.Aim.Where))
	}
	w.WriteString("}\n")
}

func (b *Brief) direction() string {
	if b.Aim.Highest {
		return "highest"
	}
	return "lowest"
}

func (b *Brief) writeLimits(w *bytes.Buffer) {
	if len(b.Limits) == 0 {
		return
	}
	w.WriteString("limits:\n")
	for i := 0; i < len(b.Limits); {
		l, points := b.Limits[i], []string(nil)
		for i < len(b.Limits) && sameRow(l, b.Limits[i]) {
			points = append(points, word(b.Limits[i].Point))
			i++
		}
		fmt.Fprintf(w, "  - {quantity: %s, at_least: %s, at_most: %s", l.Quantity, sideText(l.Low), sideText(l.High))
		switch {
		case l.Point == problems.Geometry:
		case len(points) == 1:
			fmt.Fprintf(w, ", at: %s", points[0])
		default:
			fmt.Fprintf(w, ", at: [%s]", join(points))
		}
		w.WriteString("}\n")
	}
}

// sameRow reports whether two limits differ in their point only.
func sameRow(a, b problems.Limit) bool {
	return a.Quantity == b.Quantity && a.Low == b.Low && a.High == b.High
}

// word writes a name; the only one that YAML would not read back is quoted.
func word(name string) string {
	if isNull(name) {
		return quote(name)
	}
	return name
}

func sideText(v float64) string {
	if math.IsInf(v, 0) {
		return none
	}
	return exactNumber(v)
}

// Hash is the SHA-256, in hexadecimal, of the canonical JSON of the resolved
// brief: a fixed order of fields, numbers in their shortest exact decimal.
// Everything that can change a result is in it, and the title; file name,
// layout, comments and origins are not. The same values stated in another way
// (an altitude, its pressure and temperature) hash alike.
func (b *Brief) Hash() string {
	sum := sha256.Sum256(b.canonicalJSON())
	return hex.EncodeToString(sum[:])
}

type canonicalPoint struct {
	Name         string  `json:"name"`
	Mach         float64 `json:"mach"`
	PressureKPa  float64 `json:"pressure_kPa"`
	TemperatureK float64 `json:"temperature_K"`
	IncidenceDeg float64 `json:"incidence_deg"`
	Weight       float64 `json:"weight"`
	Throat       string  `json:"throat,omitempty"` // traced, where a point of a design asks for it
}

type canonicalLimit struct {
	Quantity string   `json:"quantity"`
	Point    string   `json:"at"`
	Low      *float64 `json:"at_least"`
	High     *float64 `json:"at_most"`
}

type canonical struct {
	Format    int              `json:"brief"`
	Title     string           `json:"title"`
	Flight    []canonicalPoint `json:"flight"`
	Gamma     float64          `json:"ratio_of_specific_heats"`
	Inlet     canonicalInlet   `json:"inlet"`
	Direction string           `json:"direction"`
	Aim       string           `json:"aim"`
	Where     string           `json:"at"`
	Limits    []canonicalLimit `json:"limits"`
	Defaults  bool             `json:"defaults"`
	Tolerance Tolerance        `json:"tolerance"`
	Effort    Effort           `json:"effort"`
	Analytic  string           `json:"analytic,omitempty"`
}

type canonicalInlet struct {
	CaptureHeight float64            `json:"capture_height_m"`
	Width         float64            `json:"width_m"`
	RampAngle     []canonicalSetting `json:"ramp_angle_deg"`
	CowlAngle     *canonicalSetting  `json:"cowl_angle_deg"`
	LipTurning    *canonicalSetting  `json:"lip_turning_deg"`
	CowlWedge     canonicalSetting   `json:"cowl_wedge_deg"`
	CowlLength    float64            `json:"cowl_length"`
	ShockOnLip    canonicalSetting   `json:"shock_on_lip_mach"`
	LipSetback    canonicalSetting   `json:"lip_setback"`
	TerminalShock bool               `json:"terminal_shock"`
	DuctFactor    float64            `json:"duct_factor"`
	Outline       *canonicalOutline  `json:"outline,omitempty"`
}

// canonicalSetting is a setting; From equals To when it is fixed.
type canonicalSetting struct {
	From float64 `json:"from"`
	To   float64 `json:"to"`
}

func canonicalSettingOf(s inlet.Setting) canonicalSetting {
	low, high := bounds(s)
	return canonicalSetting{low, high}
}

func optionalSetting(s *inlet.Setting) *canonicalSetting {
	if s == nil {
		return nil
	}
	c := canonicalSettingOf(*s)
	return &c
}

// canonicalJSON is what Hash digests.
func (b *Brief) canonicalJSON() []byte {
	d := b.Definition
	c := canonical{
		Format: 1, Title: b.Title, Gamma: d.Gas.Gamma,
		Inlet: canonicalInlet{
			CaptureHeight: d.CaptureHeight, Width: d.Width,
			CowlAngle: optionalSetting(d.CowlAngle), LipTurning: optionalSetting(d.LipTurning),
			CowlWedge: canonicalSettingOf(d.CowlWedge), CowlLength: d.CowlLength,
			ShockOnLip: canonicalSettingOf(d.ShockOnLip), LipSetback: canonicalSettingOf(d.LipSetback),
			TerminalShock: d.TerminalShock, DuctFactor: d.DuctFactor,
		},
		Direction: b.direction(), Aim: b.Aim.Text, Where: b.Aim.Where,
		Defaults: b.Defaults, Tolerance: b.Tolerance, Effort: b.Effort,
	}
	if b.Analytic != nil {
		c.Analytic = b.Analytic.Name
	}
	c.Inlet.Outline = b.canonicalOutline()
	for _, s := range d.RampAngle {
		c.Inlet.RampAngle = append(c.Inlet.RampAngle, canonicalSettingOf(s))
	}
	for _, p := range b.Flight {
		point := canonicalPoint{p.Name, p.Mach, p.PressureKPa, p.TemperatureK, p.IncidenceDeg, p.Weight, ""}
		if p.Traced && d.Outline == nil {
			point.Throat = traced
		}
		c.Flight = append(c.Flight, point)
	}
	for _, l := range b.Limits {
		c.Limits = append(c.Limits, canonicalLimit{l.Quantity, l.Point, oneSide(l.Low), oneSide(l.High)})
	}
	data, err := json.Marshal(c)
	if err != nil {
		panic("brief: a validated brief holds finite numbers only: " + err.Error())
	}
	return data
}

func oneSide(v float64) *float64 {
	if math.IsInf(v, 0) {
		return nil
	}
	return &v
}
