package brief

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"regexp"
	"slices"
	"strings"
	"testing"

	"gopkg.in/yaml.v3"
)

const testdata = "../../../../testdata"

// accepts reports whether a value satisfies a schema: the keywords Schema emits,
// as JSON Schema 2020-12 (Core, and Validation sections 6 and 9) defines them. An
// unknown keyword fails the test.
func accepts(t *testing.T, s map[string]any, v any) bool {
	t.Helper()
	for keyword, argument := range s {
		if !satisfies(t, s, keyword, argument, v) {
			return false
		}
	}
	return true
}

func satisfies(t *testing.T, s map[string]any, keyword string, argument, v any) bool {
	t.Helper()
	object, isObject := v.(map[string]any)
	list, isList := v.([]any)
	text, isText := v.(string)
	number, isNumber := numberOf(v)
	schemas := func() (all []map[string]any) {
		for _, each := range argument.([]any) {
			all = append(all, each.(map[string]any))
		}
		return all
	}
	holding := func() (n int) {
		for _, each := range schemas() {
			if accepts(t, each, v) {
				n++
			}
		}
		return n
	}
	has := func(names any) bool {
		for _, name := range names.([]any) {
			if _, ok := object[name.(string)]; !ok {
				return false
			}
		}
		return true
	}
	switch keyword {
	case "$schema", "title", "description", "default", "then", "else":
		return true
	case "type":
		return typeOf(v) == argument || argument == "number" && typeOf(v) == "integer"
	case "enum":
		return slices.ContainsFunc(argument.([]any), func(one any) bool { return reflect.DeepEqual(one, v) })
	case "minimum":
		return !isNumber || number >= argument.(float64)
	case "exclusiveMinimum":
		return !isNumber || number > argument.(float64)
	case "maximum":
		return !isNumber || number <= argument.(float64)
	case "minLength":
		return !isText || len([]rune(text)) >= int(argument.(float64))
	case "maxLength":
		return !isText || len([]rune(text)) <= int(argument.(float64))
	case "pattern":
		return !isText || regexp.MustCompile(argument.(string)).MatchString(text)
	case "minItems":
		return !isList || len(list) >= int(argument.(float64))
	case "maxItems":
		return !isList || len(list) <= int(argument.(float64))
	case "uniqueItems":
		seen := map[any]bool{}
		for _, item := range list {
			if seen[fmt.Sprint(item)] {
				return false
			}
			seen[fmt.Sprint(item)] = true
		}
		return true
	case "items":
		return !slices.ContainsFunc(list, func(item any) bool { return !accepts(t, argument.(map[string]any), item) })
	case "properties":
		for name, each := range argument.(map[string]any) {
			if value, ok := object[name]; ok && !accepts(t, each.(map[string]any), value) {
				return false
			}
		}
		return true
	case "additionalProperties":
		for name := range object {
			if _, ok := s["properties"].(map[string]any)[name]; !ok {
				return false
			}
		}
		return true
	case "required":
		return !isObject || has(argument)
	case "dependentRequired":
		for name, others := range argument.(map[string]any) {
			if _, ok := object[name]; ok && !has(others) {
				return false
			}
		}
		return true
	case "minProperties":
		return !isObject || len(object) >= int(argument.(float64))
	case "anyOf":
		return holding() > 0
	case "oneOf":
		return holding() == 1
	case "not":
		return !accepts(t, argument.(map[string]any), v)
	case "if":
		branch := "else"
		if accepts(t, argument.(map[string]any), v) {
			branch = "then"
		}
		return accepts(t, s[branch].(map[string]any), v)
	}
	t.Fatalf("keyword %q is not known to this test", keyword)
	return false
}

func numberOf(v any) (float64, bool) {
	switch n := v.(type) {
	case int:
		return float64(n), true
	case float64:
		return n, true
	}
	return 0, false
}

func typeOf(v any) string {
	switch n := v.(type) {
	case map[string]any:
		return "object"
	case []any:
		return "array"
	case string:
		return "string"
	case bool:
		return "boolean"
	case int:
		return "integer"
	case float64:
		if n == math.Trunc(n) {
			return "integer"
		}
		return "number"
	}
	return "null"
}

func briefSchema(t *testing.T) map[string]any {
	t.Helper()
	var s map[string]any
	if err := json.Unmarshal(Schema(), &s); err != nil {
		t.Fatal(err)
	}
	return s
}

func decoded(t *testing.T, text []byte) (v any, err error) {
	t.Helper()
	return v, yaml.Unmarshal(text, &v)
}

// Every brief of the tests satisfies the schema, as written and as resolved.
func TestSchemaAcceptsEveryBrief(t *testing.T) {
	s := briefSchema(t)
	files, err := filepath.Glob(filepath.Join(testdata, "briefs", "*.yaml"))
	if err != nil || len(files) < 5 {
		t.Fatalf("%d briefs, %v", len(files), err)
	}
	for _, file := range files {
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		b, err := Read(file, data, nil)
		if err != nil {
			t.Fatal(err)
		}
		for form, text := range map[string][]byte{"written": data, "resolved": b.ResolvedYAML()} {
			v, err := decoded(t, text)
			if err != nil || !accepts(t, s, v) {
				t.Errorf("%s as %s: %v, refused by the schema", file, form, err)
			}
		}
	}
}

// beyondSchema are the broken briefs a schema accepts, and why it cannot know.
var beyondSchema = map[string]string{
	"anchor": spelling, "tag": spelling, "second-document": spelling,
	"hexadecimal": spelling, "leading-zero": spelling, "underscore": spelling, "infinity": spelling, "plus-sign": spelling,
	"no-zero-before-the-point": spelling, "point-at-the-end": spelling, "none-quoted": spelling, "line-too-long": spelling,
	"unseen-character": spelling, "whole-number": spelling,

	"aim-at-no-point": elsewhere, "aim-at-the-geometry": elsewhere, "aim-without-a-value": elsewhere, "limit-at-no-point": elsewhere, "formula-at-no-point": elsewhere, "point-twice": elsewhere,
	"angles-for-the-ramps": elsewhere, "weights-all-zero": elsewhere, "limit-of-geometry-at-a-point": elsewhere,
	"range-reversed": elsewhere, "limit-crossed": elsewhere, "cowl-steeper-than-the-ramps": elsewhere, "no-such-altitude": elsewhere,
	"outline-order": elsewhere, "outline-closed": elsewhere, "outline-throat-ahead": elsewhere, "outline-throat-behind": elsewhere, "outline-origin": elsewhere,
	"outline-crossing": elsewhere, "outline-scatter": elsewhere, "outline-chain": elsewhere,
	"confidence-of-nothing": elsewhere, "scatter-below-sonic": elsewhere,

	"aim-misspelt": grammar, "aim-of-numbers": grammar, "formula-arguments": grammar, "formula-function": grammar,
	"formula-of-geometry-at-a-point": grammar, "formula-operator": grammar, "formula-syntax": grammar,
}

const (
	spelling  = "how a value is written is gone once YAML is read"
	elsewhere = "it depends on a value elsewhere in the brief"
	grammar   = "a formula is text to a schema"
)

// Every broken brief is refused by the schema, or is no YAML, or breaks a rule no
// schema can state.
func TestSchemaRefusesBrokenBriefs(t *testing.T) {
	s := briefSchema(t)
	files, err := filepath.Glob(filepath.Join(testdata, "cli", "broken", "*.txtar"))
	if err != nil || len(files) < 50 {
		t.Fatalf("%d broken briefs, %v", len(files), err)
	}
	seen := map[string]bool{}
	for _, file := range files {
		name := strings.TrimSuffix(filepath.Base(file), ".txtar")
		seen[name] = true
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		_, text, _ := strings.Cut(string(data), "-- brief.yaml --\n")
		text, _, _ = strings.Cut(text, "-- stderr --\n")
		v, err := decoded(t, []byte(text))
		refused := err != nil || !accepts(t, s, v)
		if why, beyond := beyondSchema[name]; refused == beyond {
			t.Errorf("%s: refused %v (%v), expected beyond a schema: %q", name, refused, err, why)
		}
	}
	for name := range beyondSchema {
		if !seen[name] {
			t.Errorf("there is no broken brief %s", name)
		}
	}
}

// Every key of the table is in the schema with its meaning.
func TestSchemaHoldsEveryKey(t *testing.T) {
	text := string(Schema())
	for _, k := range keys {
		if !strings.Contains(text, quote(k.Name)+":") || !strings.Contains(text, strings.Trim(quote(k.Meaning), `"`)) {
			t.Errorf("%s is not in the schema with its meaning", k.Path())
		}
	}
}
