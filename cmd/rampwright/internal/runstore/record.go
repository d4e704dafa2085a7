package runstore

import (
	"encoding/json"
	"math"
	"strconv"

	"rampwright/problems"
)

// Route says by which exact route an evaluation was computed.
type Route string

const (
	// Primary is Problem.Evaluate.
	Primary Route = "evaluate"
	// Second is Verifier.Verify.
	Second Route = "verify"
)

// record is one line of the ledger:
//
//	{"model":"..","route":"evaluate","x":["4018000000000000"],"values":[0.61,null],
//	 "missing":[{"first":1,"count":1,"reason":{"type":"status","text":".."}}]}
//
// x holds the bits of each variable, so the key is exact by construction;
// values are shortest decimals, which read back to the same bits, with null for
// NaN (whatever its payload) and strings for the infinities.
type record struct {
	Model   string    `json:"model"`
	Route   Route     `json:"route"`
	X       []bits    `json:"x"`
	Values  []number  `json:"values"`
	Missing []missing `json:"missing"`
	Bounds  []number  `json:"bounds"` // of the second route; absent where every value is exact
}

// missing gives one reason to Count quantities from First on.
type missing struct {
	First  int         `json:"first"`
	Count  int         `json:"count"`
	Reason *reasonLine `json:"reason"`
}

// number is a float64 in a ledger line.
type number float64

func (v number) MarshalJSON() ([]byte, error) { return appendNumber(nil, float64(v)), nil }

func (v *number) UnmarshalJSON(data []byte) error {
	switch string(data) {
	case `null`:
		*v = number(math.NaN())
		return nil
	case `"inf"`:
		*v = number(math.Inf(1))
		return nil
	case `"-inf"`:
		*v = number(math.Inf(-1))
		return nil
	}
	f, err := strconv.ParseFloat(string(data), 64)
	*v = number(f)
	return err
}

// float returns the value; a number that is absent or null is NaN.
func (v *number) float() float64 {
	if v == nil {
		return math.NaN()
	}
	return float64(*v)
}

// appendNumber appends the shortest decimal that reads back to the same bits.
func appendNumber(dst []byte, v float64) []byte {
	switch {
	case math.IsNaN(v):
		return append(dst, `null`...)
	case math.IsInf(v, 1):
		return append(dst, `"inf"`...)
	case math.IsInf(v, -1):
		return append(dst, `"-inf"`...)
	}
	return strconv.AppendFloat(dst, v, 'g', -1, 64)
}

// bits is a float64 by its 64 bits, 16 hexadecimal digits.
type bits uint64

func (b *bits) UnmarshalText(text []byte) error {
	u, err := strconv.ParseUint(string(text), 16, 64)
	*b = bits(u)
	return err
}

func (b bits) float() float64 { return math.Float64frombits(uint64(b)) }

func appendHex(dst []byte, v float64) []byte {
	const digits = "0123456789abcdef"
	u := math.Float64bits(v)
	for shift := 60; shift >= 0; shift -= 4 {
		dst = append(dst, digits[u>>shift&15])
	}
	return dst
}

// appendRecord appends the line of an evaluation whose reasons are canonical,
// newline included.
func appendRecord(dst []byte, model string, route Route, x []float64, e *problems.Evaluation) ([]byte, error) {
	dst = append(dst, `{"model":`...)
	dst = appendText(dst, model)
	dst = append(dst, `,"route":`...)
	dst = appendText(dst, string(route))
	dst = append(dst, `,"x":[`...)
	for i, v := range x {
		dst = separate(dst, i)
		dst = append(dst, '"')
		dst = appendHex(dst, v)
		dst = append(dst, '"')
	}
	dst = append(dst, `],"values":[`...)
	for i, v := range e.Values {
		dst = separate(dst, i)
		dst = appendNumber(dst, v)
	}
	dst = append(dst, ']')
	dst, err := appendMissing(dst, e.Reasons)
	if e.Bounds != nil {
		dst = append(dst, `,"bounds":[`...)
		for i, v := range e.Bounds {
			dst = appendNumber(separate(dst, i), v)
		}
		dst = append(dst, ']')
	}
	return append(dst, '}', '\n'), err
}

// appendMissing appends the reasons, consecutive equal ones as one.
func appendMissing(dst []byte, reasons []error) ([]byte, error) {
	groups := 0
	for first := 0; first < len(reasons); {
		reason := reasons[first]
		end := first + 1
		for end < len(reasons) && reason != nil && sameReason(reason, reasons[end]) {
			end++
		}
		if reason != nil {
			if groups == 0 {
				dst = append(dst, `,"missing":[`...)
			}
			text, err := json.Marshal(missing{first, end - first, encodeReason(reason)})
			if err != nil {
				return dst, err
			}
			dst = append(separate(dst, groups), text...)
			groups++
		}
		first = end
	}
	if groups > 0 {
		dst = append(dst, ']')
	}
	return dst, nil
}

func separate(dst []byte, i int) []byte {
	if i > 0 {
		dst = append(dst, ',')
	}
	return dst
}

// appendText appends a JSON string; plain ASCII, the usual case, goes as it is.
func appendText(dst []byte, s string) []byte {
	for i := 0; i < len(s); i++ {
		if c := s[i]; c < ' ' || c > '~' || c == '"' || c == '\\' {
			quoted, _ := json.Marshal(s) // a string always has a JSON form
			return append(dst, quoted...)
		}
	}
	dst = append(dst, '"')
	dst = append(dst, s...)
	return append(dst, '"')
}

// evaluation returns the evaluation of a line; ok is false when its parts do
// not fit together.
func (r *record) evaluation() (e *problems.Evaluation, ok bool) {
	if r.Route == "" || len(r.Values) == 0 || r.Bounds != nil && len(r.Bounds) != len(r.Values) {
		return nil, false
	}
	e = problems.NewEvaluation(len(r.Values))
	for i, b := range r.Bounds {
		e.Widen(i, float64(b))
	}
	for i, v := range r.Values {
		e.Values[i] = float64(v)
	}
	for _, m := range r.Missing {
		if m.Reason == nil || m.First < 0 || m.Count < 1 || m.Count > len(e.Reasons)-m.First {
			return nil, false
		}
		reason, ok := m.Reason.decode()
		if !ok {
			return nil, false
		}
		for i := m.First; i < m.First+m.Count; i++ {
			e.Reasons[i] = reason
		}
	}
	return e, true
}
