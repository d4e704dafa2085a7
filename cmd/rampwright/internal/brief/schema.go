package brief

import (
	"bytes"
	"encoding/json"
	"math"
	"strconv"

	"rampwright/problems/analytic"
)

// Schema returns the JSON Schema (2020-12) of the brief, made of the table of
// keys that reads it: names, forms, ranges, defaults and meanings, and the rules
// on which keys go together. An editor completes and checks a brief with it; what
// it cannot say (the spelling of numbers, points named elsewhere, formulas) is
// left to `check`. It refuses no brief that Read accepts, but for titles and
// names that YAML takes for something other than text.
func Schema() []byte {
	root := sectionSchema(top)
	root.Dialect = "https://json-schema.org/draft/2020-12/schema"
	root.Title = "Brief of a planar high-speed air inlet"
	root.If = &schema{Required: []string{problemPart}}
	root.Then, root.Else = besideProblem()
	var b bytes.Buffer
	encoder := json.NewEncoder(&b)
	encoder.SetEscapeHTML(false)
	encoder.SetIndent("", "  ")
	if err := encoder.Encode(root); err != nil {
		panic("brief: the table of keys holds a number JSON cannot write: " + err.Error())
	}
	return b.Bytes()
}

// schema is the part of JSON Schema a brief needs.
type schema struct {
	Dialect     string `json:"$schema,omitempty"`
	Title       string `json:"title,omitempty"`
	Description string `json:"description,omitempty"`

	Type    any   `json:"type,omitempty"` // a name or a list of them
	Enum    []any `json:"enum,omitempty"`
	Default any   `json:"default,omitempty"`

	Minimum          *float64 `json:"minimum,omitempty"`
	ExclusiveMinimum *float64 `json:"exclusiveMinimum,omitempty"`
	Maximum          *float64 `json:"maximum,omitempty"`

	MinLength int    `json:"minLength,omitempty"`
	MaxLength int    `json:"maxLength,omitempty"`
	Pattern   string `json:"pattern,omitempty"`

	Items       *schema `json:"items,omitempty"`
	MinItems    int     `json:"minItems,omitempty"`
	MaxItems    int     `json:"maxItems,omitempty"`
	UniqueItems bool    `json:"uniqueItems,omitempty"`

	Properties        properties          `json:"properties,omitempty"`
	Required          []string            `json:"required,omitempty"`
	DependentRequired map[string][]string `json:"dependentRequired,omitempty"`
	MinProperties     int                 `json:"minProperties,omitempty"`
	Additional        *bool               `json:"additionalProperties,omitempty"`

	AnyOf []*schema `json:"anyOf,omitempty"`
	OneOf []*schema `json:"oneOf,omitempty"`
	Not   *schema   `json:"not,omitempty"`
	If    *schema   `json:"if,omitempty"`
	Then  *schema   `json:"then,omitempty"`
	Else  *schema   `json:"else,omitempty"`
}

// properties keep the order of the table, which is that of completion.
type properties []property

type property struct {
	name string
	of   *schema
}

// MarshalJSON implements json.Marshaler.
func (ps properties) MarshalJSON() ([]byte, error) {
	var b bytes.Buffer
	b.WriteByte('{')
	for i, p := range ps {
		if i > 0 {
			b.WriteByte(',')
		}
		value, err := json.Marshal(p.of)
		if err != nil {
			return nil, err
		}
		b.WriteString(quote(p.name) + ":")
		b.Write(value)
	}
	b.WriteByte('}')
	return b.Bytes(), nil
}

// never is what no value satisfies.
func never() *schema { return &schema{Not: &schema{}} }

// sectionSchema is a section with its keys and the rules between them.
func sectionSchema(section string) *schema {
	closed := false
	s := &schema{Type: "object", MinProperties: 1, Additional: &closed}
	for _, k := range keys {
		if k.Section != section {
			continue
		}
		s.Properties = append(s.Properties, property{k.Name, keySchema(k)})
		if k.Required && k.Unless == "" {
			s.Required = append(s.Required, k.Name)
		}
	}
	switch section {
	case flight:
		s.OneOf = eachRequired(ways...)
		s.DependentRequired = map[string][]string{"pressure_kPa": {"temperature_K"}, "temperature_K": {"pressure_kPa"}}
	case inletPart:
		s.If = &schema{Required: []string{outlinePart}}
		s.Then, s.Else = besideOutline()
	case aimPart:
		s.OneOf = eachRequired("highest", "lowest")
	case limits:
		s.AnyOf = eachRequired("at_least", "at_most")
	}
	return s
}

func eachRequired(names ...string) []*schema {
	var list []*schema
	for _, name := range names {
		list = append(list, &schema{Required: []string{name}})
	}
	return list
}

// keySchema is what one key holds.
func keySchema(k Key) *schema {
	s := formSchema(k)
	s.Description = k.describe()
	switch number, err := strconv.ParseFloat(k.Default, 64); {
	case k.Form == Truth:
		s.Default = k.Default == "true"
	case k.Form == Choice && k.Default != "":
		s.Default = k.Default
	case err == nil:
		s.Default = number
	}
	return s
}

// describe is the text an editor shows: meaning, what is allowed, the default.
func (k Key) describe() string {
	text := k.Meaning
	switch k.Form {
	case Number, Whole, Search, Ramps:
		text += "; " + k.Allowed()
	}
	if k.Default != "" {
		text += "; default " + k.Default
	}
	return text
}

func formSchema(k Key) *schema {
	switch k.Form {
	case Number:
		return numberSchema(k, "number")
	case Whole:
		return numberSchema(k, "integer")
	case Search:
		return searchSchema(k)
	case Ramps:
		return &schema{AnyOf: []*schema{
			numberSchema(k, "number"), rangeSchema(k),
			{Type: "array", Items: searchSchema(k), MinItems: 1, MaxItems: int(known(inletPart, "ramps").High)},
		}}
	case Wall:
		return wallSchema(k)
	case Truth:
		return &schema{Type: "boolean"}
	case Choice:
		return &schema{Enum: words(k.Choices)}
	case Side:
		return &schema{AnyOf: []*schema{{Type: "number"}, {Enum: []any{none}}}}
	case Points:
		return &schema{AnyOf: []*schema{
			nameSchema("mean", "worst", "geometry"),
			{Type: "array", Items: nameSchema(reserved...), MinItems: 1, UniqueItems: true},
		}}
	case Formula:
		return &schema{AnyOf: []*schema{{Enum: words(quantityNames(inletVocabulary()))}, textSchema()}}
	case Part:
		return sectionSchema(k.Name)
	case Parts:
		return &schema{Type: "array", Items: sectionSchema(k.Name), MinItems: int(k.Low), MaxItems: int(k.High)}
	default:
		return lineSchema(k)
	}
}

// lineSchema is what a key that holds text takes.
func lineSchema(k Key) *schema {
	switch {
	case k.Section == flight: // its name
		return nameSchema(reserved...)
	case k.Section == aimPart: // its point
		return nameSchema("every", "geometry")
	case k.Section == limits: // its quantity; besideProblem lists the names
		return textSchema()
	}
	s := textSchema()
	s.MaxLength, s.Pattern = longest, `^[^\n]*$`
	return s
}

func textSchema() *schema { return &schema{Type: "string", MinLength: 1} }

// nameSchema is the name of a point, or a word with a meaning of its own that is
// not among those refused.
func nameSchema(refused ...string) *schema {
	return &schema{Type: "string", Pattern: "^[a-z][a-z0-9_]{0,59}$", Not: &schema{Enum: words(refused)}}
}

func numberSchema(k Key, kind string) *schema {
	s := &schema{Type: kind}
	if !math.IsInf(k.High, 1) {
		s.Maximum = &k.High
	}
	switch {
	case math.IsInf(k.Low, -1):
	case k.OpenLow:
		s.ExclusiveMinimum = &k.Low
	default:
		s.Minimum = &k.Low
	}
	return s
}

func searchSchema(k Key) *schema {
	return &schema{AnyOf: []*schema{numberSchema(k, "number"), rangeSchema(k)}}
}

// rangeSchema is {from, to}, both within the range of the key.
func rangeSchema(k Key) *schema {
	s := sectionSchema(span)
	for i, end := range s.Properties {
		bounded := numberSchema(k, "number")
		bounded.Description = end.of.Description
		s.Properties[i].of = bounded
	}
	return s
}

// besideProblem returns what holds for a brief of an analytic problem, and for
// one of an inlet: which keys have a place, and the quantities a limit may name.
func besideProblem() (withProblem, withInlet *schema) {
	withProblem, withInlet = &schema{}, &schema{}
	for _, k := range keys {
		if k.Section != top || k.Unless != problemPart {
			continue
		}
		withProblem.Properties = append(withProblem.Properties, property{k.Name, never()})
		if k.Required {
			withInlet.Required = append(withInlet.Required, k.Name)
		}
	}
	withProblem.Properties = append(withProblem.Properties, property{limits, limitedQuantities(analyticNames())})
	withInlet.Properties = properties{{limits, limitedQuantities(quantityNames(inletVocabulary()))}}
	return withProblem, withInlet
}

// limitedQuantities keeps the rows of limits to the quantities named.
func limitedQuantities(names []string) *schema {
	return &schema{Items: &schema{Properties: properties{{"quantity", &schema{Enum: words(names)}}}}}
}

func quantityNames(v vocabulary) []string {
	var names []string
	for _, n := range v.nouns {
		names = append(names, n.name)
	}
	return names
}

// analyticNames lists the quantities of every analytic problem, each once.
func analyticNames() []string {
	var names []string
	for _, name := range analytic.Names() {
		p, err := analytic.New(name)
		if err != nil {
			panic("brief: the analytic problems list one there is not: " + err.Error())
		}
		for _, q := range quantityNames(analyticVocabulary(p)) {
			if !contains(names, q) {
				names = append(names, q)
			}
		}
	}
	return names
}

func words(list []string) []any {
	out := make([]any, len(list))
	for i, w := range list {
		out[i] = w
	}
	return out
}
