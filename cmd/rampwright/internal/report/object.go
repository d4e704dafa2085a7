package report

import (
	"bytes"
	"encoding/json"
	"math"
)

// Number is a float64 in JSON: shortest digits that read back exactly, null
// where it is not finite.
type Number float64

// MarshalJSON implements json.Marshaler.
func (n Number) MarshalJSON() ([]byte, error) {
	v := float64(n)
	if !finite(v) {
		return []byte("null"), nil
	}
	return json.Marshal(v + 0) // turns -0 into 0
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }

// Field is one entry of an Object.
type Field[T any] struct {
	Name  string
	Value T
}

// Object is a JSON object whose keys keep their order.
type Object[T any] []Field[T]

// Get returns the value of that name.
func (o Object[T]) Get(name string) (value T, ok bool) {
	for _, field := range o {
		if field.Name == name {
			return field.Value, true
		}
	}
	return value, false
}

// MarshalJSON implements json.Marshaler.
func (o Object[T]) MarshalJSON() ([]byte, error) {
	var b bytes.Buffer
	b.WriteByte('{')
	for i, field := range o {
		if i > 0 {
			b.WriteByte(',')
		}
		if err := encode(&b, field.Name, ""); err != nil {
			return nil, err
		}
		b.WriteByte(':')
		if err := encode(&b, field.Value, ""); err != nil {
			return nil, err
		}
	}
	b.WriteByte('}')
	return b.Bytes(), nil
}

func encode(b *bytes.Buffer, v any, indent string) error {
	encoder := json.NewEncoder(b)
	encoder.SetEscapeHTML(false)
	encoder.SetIndent("", indent)
	return encoder.Encode(v)
}

// document returns v as indented JSON that ends with a line feed.
func document(v any) []byte {
	var b bytes.Buffer
	if err := encode(&b, v, "  "); err != nil {
		panic("report: plain data always encodes: " + err.Error())
	}
	return b.Bytes()
}

func numbers(values []float64) []Number {
	list := make([]Number, len(values))
	for i, v := range values {
		list[i] = Number(v)
	}
	return list
}
