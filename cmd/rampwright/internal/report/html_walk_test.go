package report

import (
	"bytes"
	"encoding/json"
	"encoding/xml"
	"fmt"
	"io"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// lookup follows a JSON pointer (RFC 6901).
func lookup(document any, pointer string) (any, error) {
	for _, key := range strings.Split(pointer, "/")[1:] {
		key = strings.NewReplacer("~1", "/", "~0", "~").Replace(key)
		switch at := document.(type) {
		case map[string]any:
			next, ok := at[key]
			if !ok {
				return nil, fmt.Errorf("no key %s", key)
			}
			document = next
		case []any:
			i, err := strconv.Atoi(key)
			if err != nil || i < 0 || i >= len(at) {
				return nil, fmt.Errorf("no entry %s", key)
			}
			document = at[i]
		default:
			return nil, fmt.Errorf("%s is below a plain value", key)
		}
	}
	return document, nil
}

// numeral finds a number that stands for itself, not a digit within a name.
var numeral = regexp.MustCompile(`(^|[\s(=<>:,;])[-+]?\d`)

// checkPage reads a page as XML and compares every number and every quotation with
// the document it names; no other text may hold a number. It returns how many
// numbers there are.
func checkPage(t *testing.T, page []byte, documents map[string][]byte) (numbers int) {
	t.Helper()
	sources := map[string]any{}
	for name, data := range documents {
		var tree any
		if err := json.Unmarshal(data, &tree); err != nil {
			t.Fatal(err)
		}
		sources[name] = tree
	}
	// Where a line may end within a name is no part of it.
	decoder := xml.NewDecoder(bytes.NewReader(bytes.ReplaceAll(page, []byte("<wbr />"), nil)))
	decoder.Strict = true
	type element struct {
		name string
		at   map[string]string
		text string
	}
	var open []element
	ids := map[string]bool{}
	place := 0 // the row counted last
	apart := 0 // depth within a drawing, style or title
	for {
		token, err := decoder.Token()
		if err == io.EOF {
			return numbers
		}
		if err != nil {
			t.Fatal(err)
		}
		switch token := token.(type) {
		case xml.StartElement:
			e := element{name: token.Name.Local, at: map[string]string{}}
			for _, a := range token.Attr {
				e.at[a.Name.Local] = a.Value
				if strings.HasPrefix(a.Name.Local, "on") || a.Name.Local == "href" || a.Name.Local == "src" {
					t.Errorf("<%s %s=%q> has no place on the page", e.name, a.Name.Local, a.Value)
				}
			}
			if e.name == "script" || e.name == "link" || e.name == "iframe" {
				t.Errorf("<%s> has no place on the page", e.name)
			}
			if id := e.at["id"]; id != "" {
				if ids[id] {
					t.Errorf("two elements have the id %s", id)
				}
				ids[id] = true
			}
			if e.name == "svg" && (e.at["role"] != "img" || e.at["aria-label"] == "") {
				t.Error("a drawing has no text alternative")
			}
			if e.name == "svg" || e.name == "style" || e.name == "head" {
				apart++
			}
			open = append(open, e)
		case xml.EndElement:
			e := open[len(open)-1]
			open = open[:len(open)-1]
			if e.name == "svg" || e.name == "style" || e.name == "head" {
				apart--
			}
			if e.at["class"] == "place" {
				if e.text != fmt.Sprintf("point %d", place+1) && e.text != "point 1" {
					t.Errorf("%q follows point %d", e.text, place)
				}
				fmt.Sscanf(e.text, "point %d", &place)
			}
			if from := e.at["data-from"]; from != "" {
				if e.name == "data" {
					numbers++
				}
				if e.at["class"] == "percent" {
					e.text = shareOf(t, e.at["value"], e.text)
				}
				checkQuotation(t, sources, from, e.at["value"], e.text)
			}
		case xml.CharData:
			if len(open) == 0 {
				continue
			}
			e := &open[len(open)-1]
			e.text += string(token)
			if apart == 0 && e.at["data-from"] == "" && e.at["class"] != "place" && numeral.Match(token) {
				t.Errorf("<%s> holds a number of no document: %q", e.name, token)
			}
		}
	}
}

// checkQuotation compares what a page shows with the document it is from.
func checkQuotation(t *testing.T, sources map[string]any, from, value, text string) {
	t.Helper()
	name, pointer, _ := strings.Cut(from, ":")
	want, err := lookup(sources[name], pointer)
	if err != nil {
		t.Errorf("%s: %v", from, err)
		return
	}
	switch want := want.(type) {
	case string:
		if strings.HasSuffix(pointer, "/status") {
			want = strings.ReplaceAll(want, "_", " ") // as people read it
		}
		if text != want || value != "" {
			t.Errorf("%s is %q, shown %q", from, want, text)
		}
	case nil:
		if text != none || value != "" {
			t.Errorf("%s is null, shown %q", from, text)
		}
	case float64:
		exact, err := strconv.ParseFloat(value, 64)
		if err != nil || exact != want {
			t.Errorf("%s is %g, the page has %q", from, want, value)
		}
		// Five digits are shown, at most five decimals, four digits below a
		// thousandth, and zero for what is below the noise.
		digits := math.Max(5.01e-6, 5.01e-5*math.Abs(want))
		if math.Abs(want) < 1e-3 {
			digits = 5.01e-4*math.Abs(want) + noise
		}
		shown, err := strconv.ParseFloat(text, 64)
		if err != nil || math.Abs(shown-want) > digits {
			t.Errorf("%s is %g, shown %q", from, want, text)
		}
	default:
		t.Errorf("%s is no plain value", from)
	}
}

// shareOf is what a per cent shown to a decimal stands for: the share itself where
// the two agree, and where not all or nothing is shown as such.
func shareOf(t *testing.T, value, text string) string {
	t.Helper()
	share, err := strconv.ParseFloat(value, 64)
	shown, failed := strconv.ParseFloat(text, 64)
	switch {
	case err != nil:
		return text
	case text == "> 99.9" && share >= 0.9995 && share < 1, text == "< 0.1" && share > 0 && share < 0.0005:
		return value
	case failed == nil && math.Abs(shown-100*share) <= 0.0501 && (shown != 100 && shown != 0 || 100*share == shown):
		return value
	}
	t.Errorf("a share of %s is shown as %q %%", value, text)
	return text
}

func documents(f Folder) map[string][]byte {
	list := map[string][]byte{"result": f.Result, "run": f.Run, "review": f.Review}
	for _, s := range f.Studies {
		list[s.Name] = s.Document
	}
	return list
}
